// The command line: the only file that knows CLI11. Each command's help ends with one worked
// example.
#include <CLI/CLI.hpp>
#include <functional>
#include <iostream>
#include <map>

#include "run/commands/commands.hpp"

namespace antherd::commands {
namespace {

using Command = std::function<Exit(const Invocation&)>;

CLI::App* add(CLI::App& app, const std::string& name, const std::string& what,
              const std::string& example) {
  CLI::App* sub = app.add_subcommand(name, what);
  sub->footer("Example:\n  " + example);
  return sub;
}

void add_field(CLI::App* sub, Invocation& call) {
  sub->add_option("field", call.field, "a field, by a unique beginning of its name")->required();
}

void add_tables(CLI::App* sub, Invocation& call) {
  sub->add_flag("--lines", call.lines, "one JSON object a line, metric, UTC");
  sub->add_flag("--csv", call.csv, "the same as a table with commas");
}

void add_files(CLI::App* sub, Invocation& call) {
  sub->add_option("--station", call.station_files,
                  "STATION=FILE.csv: read this file by the station's own table instead of the "
                  "store; may be given more than once");
}

void add_service(CLI::App& app, Invocation& call) {
  CLI::App* run = add(app, "run", "watch the stations and warn, until told to stop",
                      "antherd run --settings /etc/antherd/antherd.toml");
  run->add_option("--clock-from", call.clock_from,
                  "exercise only: start the clock at this farm time");
  run->add_option("--pace", call.pace, "exercise only: this many seconds pass in each second")
      ->check(CLI::Range(1.0, 3600.0));
  run->add_option("--stop-after", call.stop_after, "exercise only: stop after so many seconds")
      ->check(CLI::Range(1, 86400));
  CLI::App* check =
      add(app, "check", "read the settings, name every fault, print the plan that was understood",
          "antherd check --settings config/shortest.toml");
  check->add_option("--sample", call.sample,
                    "look at a station's CSV file and print a settings block that reads it");
  check->add_flag("--stations", call.stations,
                  "each station's hours by ISO week: seen, good, suspect, wrong, and why");
  add_tables(check, call);
  add_files(check, call);
  add(app, "mailtest", "send one letter to each recipient and explain what fails",
      "antherd mailtest --settings /etc/antherd/antherd.toml");
}

void add_screens(CLI::App& app, Invocation& call) {
  add(app, "now", "one screen: flower, heat, humid spell, water, data, open alerts", "antherd now");
  CLI::App* review = add(app, "review", "the weekly log: seen, not seen, decided, told",
                         "antherd review --week 2026-W28");
  review->add_option("--week", call.week, "an ISO 8601 week such as 2026-W28; default: the last");
  review->add_flag("--season", call.season, "the whole season instead");
  review->add_flag("--mail", call.mail, "send it to the recipients too");
  CLI::App* letters =
      add(app, "letters", "the outbox: waiting, sent, parked", "antherd letters --retry 17");
  letters->add_option("--retry", call.retry, "put a parked letter back to waiting, by its number");
  letters->add_option("--seen", call.seen,
                      "a letter has been seen: no reminders at its level (never fewer raises)");
  add_tables(letters, call);
}

void add_diary(CLI::App& app, Invocation& call) {
  CLI::App* water = add(app, "water", "write one irrigation into the log",
                        "antherd water north --start \"2026-07-14 20:00\" --end \"2026-07-14 "
                        "23:00\" --method overhead --depth \"0.5 in\" --set 3");
  add_field(water, call);
  water->add_option("--start", call.start, "farm time, \"2026-07-14 20:00\"");
  water->add_option("--end", call.end, "farm time; on the same day \"23:00\" is enough");
  water->add_option("--method", call.method, "overhead, drip or furrow; default: the field's");
  water->add_option("--depth", call.depth, "\"6 mm\" or \"0.5 in\"; default: unknown");
  water->add_option("--set", call.set, "which set, from 1; default: the whole field")
      ->check(CLI::Range(0, 999));
  water->add_flag("--list", call.list, "list the log with its numbers");
  water->add_option("--undo", call.undo, "take one entry back, by its number");
  water->add_flag("--try", call.try_only, "write nothing; say what it would do");
  CLI::App* scout = add(app, "scout", "write one scouting note",
                        "antherd scout north --date 2026-07-01 --stage first-anthers");
  add_field(scout, call);
  scout->add_option("--date", call.date, "the day it was seen; default: today");
  scout->add_option("--stage", call.stage,
                    "emerged, buds, first-anthers, full-flower, flowers-done, milk, dough, ripe, "
                    "or a BBCH code");
  scout->add_flag("--began", call.began, "the stage began that very day");
  scout->add_option("--disease", call.disease, "yes or no: downy mildew seen");
  scout->add_option("--seed-set", call.seed_set, "14/20: of 20 clusters 14 hold a swelling seed");
  scout->add_option("--note", call.note, "anything else");
  scout->add_flag("--list", call.list, "list the notes with their numbers");
  scout->add_option("--undo", call.undo, "take one note back, by its number");
}

void add_tables_of_hours(CLI::App& app, Invocation& call) {
  CLI::App* hours = add(app, "hours", "every hour that is known: measured, derived, verdicts",
                        "antherd hours north --from 2026-07-10 --to 2026-07-12");
  add_field(hours, call);
  add_tables(hours, call);
  add_files(hours, call);
  hours->add_option("--from", call.from, "first farm day");
  hours->add_option("--to", call.to, "last farm day");
  CLI::App* replay = add(app, "replay",
                         "run a past season through the same fold; print what would have been "
                         "said; send nothing, write nothing",
                         "antherd replay --settings demo.toml --station bench=season-2025.csv");
  replay->add_flag("--lines", call.lines, "one JSON object a line, metric, UTC");
  replay->add_flag("--full", call.full, "print the letters whole");
  add_files(replay, call);
}

}  // namespace

int main(int argc, char** argv) {
  CLI::App app{
      "antherd watches a farm's weather station while quinoa flowers, and warns in time.\n"
      "Its advice comes from estimates: scout before acting.",
      "antherd"};
  app.require_subcommand(1);
  app.set_version_flag("--version", "antherd 0.1.0");
  app.footer(
      "Exit status: 0 done; 1 it failed and said why; 2 usage or settings; 3 done, but "
      "something needs attention.\nEach command has its own --help with an example.");
  Invocation call;
  app.add_option("--settings", call.settings,
                 "the settings file; default /etc/antherd/antherd.toml, else ./antherd.toml");
  app.fallthrough();
  add_service(app, call);
  add_screens(app, call);
  add_diary(app, call);
  add_tables_of_hours(app, call);
  try {
    app.parse(argc, argv);
  } catch (const CLI::RequiredError& error) {
    // The library only misses a command; people want to read which word was none.
    const auto unread = app.remaining();
    if (app.get_subcommands().empty() && !unread.empty()) {
      std::cerr << "antherd: '" << unread.front() << "' names no command; nothing was done. "
                << "\"antherd --help\" lists them.\n";
      return Exit::usage;
    }
    app.exit(error);
    return Exit::usage;
  } catch (const CLI::ParseError& error) {
    return app.exit(error) == 0 ? Exit::done : Exit::usage;
  }
  const std::map<std::string, Command> commands{
      {"run", run},         {"check", check},      {"now", now},     {"water", water},
      {"scout", scout},     {"review", review},    {"hours", hours}, {"replay", replay},
      {"letters", letters}, {"mailtest", mailtest}};
  call.command = app.get_subcommands().front()->get_name();
  return commands.at(call.command)(call);
}

}  // namespace antherd::commands
