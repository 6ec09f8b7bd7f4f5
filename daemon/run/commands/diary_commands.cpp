// antherd water and antherd scout: what the grower did and saw.
#include <algorithm>
#include <cmath>
#include <iostream>

#include "core/risk/rules.hpp"
#include "edge/clock/clock.hpp"
#include "run/commands/common.hpp"
#include "run/service/intake.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::commands {
namespace {

Exit wrong(const std::string& what, const std::string& why, const std::string& example) {
  std::cerr << "antherd: " << what << ": " << why << "; nothing was written. Example: " << example
            << "\n";
  return Exit::usage;
}

template <class Entries>
bool holds(const Entries& entries, std::int64_t id) {
  return std::any_of(entries.begin(), entries.end(), [&](const auto& e) { return e.id == id; });
}

Exit not_there(std::int64_t id, const std::string& field) {
  return say(Failure{"take back entry " + std::to_string(id), field,
                     "this field has no entry of this number",
                     "nothing was changed; --list shows the numbers"});
}

/// "2026-07-14 23:00", or "23:00" on the day of `like`.
Result<CivilTime> reading_of(const std::string& text, std::optional<CivilTime> like) {
  if (like) {
    if (const auto clock = settings::parse_clock(text)) {
      const CivilDay day = std::chrono::floor<std::chrono::days>(*like);
      const CivilTime same_day = CivilTime(day) + std::chrono::minutes{*clock};
      return same_day > *like ? same_day : same_day + std::chrono::days{1};
    }
  }
  return settings::parse_civil_time(text);
}

std::string depth_text(const std::optional<Millimetre>& depth) {
  if (!depth) return "depth unknown";
  std::string text = std::to_string(rounded(depth->value, 1));
  return text.substr(0, text.find('.') + 2) + " mm";
}

std::string sentence_of(const field::Irrigation& irrigation, const Calendar& calendar) {
  std::string text = farm_text(calendar, irrigation.start) + " to " +
                     farm_text(calendar, irrigation.end) + ", " +
                     field::name_of(irrigation.method) + ", " + depth_text(irrigation.depth);
  if (irrigation.set > 0) text += ", set " + std::to_string(irrigation.set);
  return text;
}

Result<field::Irrigation> irrigation_of(const settings::Settings& settings,
                                        const settings::FieldPlan& plan, const Invocation& call) {
  const auto refuse = [](const std::string& option, const std::string& why) {
    return Failure{"read " + option, "", why, "nothing was written"};
  };
  field::Irrigation irrigation;
  irrigation.field = plan.field.name;
  if (call.start.empty() || call.end.empty()) {
    return refuse("--start and --end", "both are needed: --start \"2026-07-14 20:00\" --end 23:00");
  }
  const std::string start_given = "--start '" + call.start + "'";
  const std::string end_given = "--end '" + call.end + "'";
  const auto start = reading_of(call.start, std::nullopt);
  if (!start) return refuse(start_given, start.failure().why);
  const auto end = reading_of(call.end, *start);
  if (!end) return refuse(end_given, end.failure().why);
  const auto from = service::farm_instant(settings, *start);
  if (!from) return refuse(start_given, from.failure().why);
  const auto to = service::farm_instant(settings, *end);
  if (!to) return refuse(end_given, to.failure().why);
  if (*to <= *from) return refuse("--end", "it is not after --start");
  if (*to - *from > std::chrono::hours{96}) return refuse("--end", "more than 96 h after --start");
  if (*from > clock::wall_now() + std::chrono::days{7} && !settings.exercise) {
    return refuse("--start '" + call.start + "'", "it lies more than 7 days ahead");
  }
  irrigation.start = *from;
  irrigation.end = *to;
  irrigation.method = plan.field.irrigation;
  if (!call.method.empty() || irrigation.method == field::Method::none) {
    if (call.method == "overhead") {
      irrigation.method = field::Method::overhead;
    } else if (call.method == "drip") {
      irrigation.method = field::Method::drip;
    } else if (call.method == "furrow") {
      irrigation.method = field::Method::furrow;
    } else {
      return refuse("--method", call.method.empty()
                                    ? "the settings say irrigation = \"none\" of this field; say "
                                      "overhead, drip or furrow"
                                    : "'" + call.method + "' is none of overhead, drip, furrow");
    }
  }
  if (!call.depth.empty() && call.depth != "unknown") {
    const auto depth = settings::parse_depth(call.depth);
    if (!depth) return refuse("--depth '" + call.depth + "'", depth.failure().why);
    irrigation.depth = *depth;
  }
  irrigation.set = call.set;
  return irrigation;
}

/// The humid level tomorrow with and without it, where the store knows enough.
/// @param written  its number in the log, where it was written
void say_what_it_does(const SettingsPointer& settings, const field::Irrigation& irrigation,
                      std::optional<std::int64_t> written) {
  if (irrigation.method != field::Method::overhead) {
    std::cout << field::name_of(irrigation.method)
              << " wets no leaf: no part of the mildew watch.\n";
    return;
  }
  const auto store = open_to_read(*settings);
  if (!store) return;
  const Instant now = present(*settings, store);
  auto past = past_from_store(settings, *store, now);
  if (!past) return;
  std::erase_if(past->diaries[irrigation.field].irrigations,
                [&](const field::Irrigation& known) { return known.id == written; });
  Past with = *past;
  with.diaries[irrigation.field].irrigations.push_back(irrigation);
  const auto level_in = [&](const Past& facts) {
    service::Lookout lookout = lookout_over(facts);
    lookout.turn(now, closed_at(facts, now));
    return lookout.desk(now).fields.at(irrigation.field).humid;
  };
  const auto before = level_in(*past), after = level_in(with);
  std::cout << "Sprinkler nights of the last five: " << after.night_sets_last_five
            << " (without it " << before.night_sets_last_five
            << "). Were tomorrow like today, the humid spell would "
            << "stand at " << risk::name_of(after.if_not_watered) << " (without it "
            << risk::name_of(before.if_not_watered) << "). An estimate: scout before acting.\n";
}

Exit list_water(const settings::Settings& settings, const store::Store& store,
                const std::string& field) {
  const auto diary = store.diary(field);
  if (!diary) return say(diary.failure());
  for (const auto& irrigation : diary->irrigations) {
    std::cout << irrigation.id << "  " << sentence_of(irrigation, settings.calendar) << "\n";
  }
  if (diary->irrigations.empty()) std::cout << field << ": nothing is logged.\n";
  return Exit::done;
}

Result<field::Scouting> note_of(const settings::Settings& settings, const settings::FieldPlan& plan,
                                const Invocation& call) {
  const auto refuse = [](const std::string& option, const std::string& why) {
    return Failure{"read " + option, "", why, "nothing was written"};
  };
  field::Scouting note;
  note.field = plan.field.name;
  note.date = settings.calendar.day_of(clock::wall_now());
  if (!call.date.empty()) {
    const auto date = settings::parse_day(call.date);
    const std::string given = "--date '" + call.date + "'";
    if (!date) return refuse(given, date.failure().why);
    if (*date > note.date) return refuse(given, "it lies in the future");
    if (*date < plan.field.sown) return refuse(given, "it lies before sowing");
    note.date = *date;
  }
  if (!call.stage.empty()) {
    note.stage = field::stage_from_word(call.stage);
    if (!note.stage) {
      return refuse("--stage", "'" + call.stage +
                                   "' is none of emerged, buds, first-anthers, full-flower, "
                                   "flowers-done, milk, dough, ripe, nor a BBCH code from 9 to 99");
    }
  }
  if (call.began && !note.stage) return refuse("--began", "it needs a --stage that began");
  note.began = call.began || note.stage == field::stage::first_anthers;
  if (!call.disease.empty()) {
    if (call.disease != "yes" && call.disease != "no") {
      return refuse("--disease", "'" + call.disease + "' is neither yes nor no");
    }
    note.disease = call.disease == "yes";
  }
  if (!call.seed_set.empty()) {
    const auto slash = call.seed_set.find('/');
    const auto held = settings::parse_number(call.seed_set.substr(0, slash));
    const auto looked =
        settings::parse_number(slash == std::string::npos ? "" : call.seed_set.substr(slash + 1));
    const auto whole = [](double value) { return value == std::floor(value); };
    const bool fits = held && looked && whole(*held) && whole(*looked) && *held >= 0 &&
                      *looked >= 1 && *held <= *looked && *looked <= 1000;
    if (!fits) {
      return refuse("--seed-set", "'" + call.seed_set + "' is not like 14/20");
    }
    note.seed_set = static_cast<int>(*held);
    note.seed_looked = static_cast<int>(*looked);
  }
  // A note is printed and mailed: it is one line of text and nothing else.
  const bool plain = std::none_of(call.note.begin(), call.note.end(), [](char c) {
    return static_cast<unsigned char>(c) < 0x20 || c == 0x7f;
  });
  if (!plain) return refuse("--note", "it holds a control character or more than one line");
  note.note = call.note;
  if (!note.stage && !note.disease && !note.seed_set && note.note.empty()) {
    return refuse("the note", "it says nothing; give --stage, --disease, --seed-set or --note");
  }
  return note;
}

Exit list_notes(const store::Store& store, const std::string& field) {
  const auto diary = store.diary(field);
  if (!diary) return say(diary.failure());
  for (const auto& note : diary->notes) {
    std::cout << note.id << "  " << day_text(note.date);
    if (note.stage) std::cout << "  " << field::word_for_stage(*note.stage);
    if (note.began) std::cout << ", began that day";
    if (note.disease) std::cout << ", disease " << (*note.disease ? "seen" : "not seen");
    if (note.seed_set) std::cout << ", seed set " << *note.seed_set << "/" << *note.seed_looked;
    if (!note.note.empty()) std::cout << ", " << note.note;
    std::cout << "\n";
  }
  if (diary->notes.empty()) std::cout << field << ": no notes.\n";
  return Exit::done;
}

}  // namespace

Exit water(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const settings::FieldPlan* plan = read_field(*settings, call);
  if (!plan) return Exit::usage;
  if (call.list || call.undo) {
    auto store = call.list ? open_to_read(*settings) : open_to_write(*settings);
    if (!store) return say(store.failure());
    if (call.list) return list_water(*settings, *store, plan->field.name);
    const auto diary = store->diary(plan->field.name);
    if (!diary) return say(diary.failure());
    if (!holds(diary->irrigations, *call.undo)) return not_there(*call.undo, plan->field.name);
    if (auto done = store->remove_irrigation(*call.undo); !done) return say(done.failure());
    std::cout << "Entry " << *call.undo << " is taken back.\n";
    return Exit::done;
  }
  const auto irrigation = irrigation_of(*settings, *plan, call);
  if (!irrigation) {
    return wrong(irrigation.failure().what, irrigation.failure().why,
                 "antherd water north --start \"2026-07-14 20:00\" --end 23:00 --depth \"0.5 in\"");
  }
  std::optional<std::int64_t> written;
  const std::string sentence = sentence_of(*irrigation, settings->calendar);
  if (call.try_only) {
    std::cout << "Tried, not written: " << plan->field.name << ", " << sentence << ".\n";
  } else {
    auto store = open_to_write(*settings);
    if (!store) return say(store.failure());
    const auto id = store->add(*irrigation);
    if (!id) return say(id.failure());
    written = *id;
    std::cout << "Written as entry " << *id << ": " << plan->field.name << ", " << sentence
              << ".\n";
  }
  say_what_it_does(settings, *irrigation, written);
  return Exit::done;
}

Exit scout(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const settings::FieldPlan* plan = read_field(*settings, call);
  if (!plan) return Exit::usage;
  if (call.list || call.undo) {
    auto store = call.list ? open_to_read(*settings) : open_to_write(*settings);
    if (!store) return say(store.failure());
    if (call.list) return list_notes(*store, plan->field.name);
    const auto diary = store->diary(plan->field.name);
    if (!diary) return say(diary.failure());
    if (!holds(diary->notes, *call.undo)) return not_there(*call.undo, plan->field.name);
    if (auto done = store->remove_scouting(*call.undo); !done) return say(done.failure());
    std::cout << "Note " << *call.undo << " is taken back.\n";
    return Exit::done;
  }
  const auto note = note_of(*settings, *plan, call);
  if (!note) {
    return wrong(note.failure().what, note.failure().why,
                 "antherd scout north --date 2026-07-01 --stage first-anthers");
  }
  auto store = open_to_write(*settings);
  if (!store) return say(store.failure());
  const auto id = store->add(*note);
  if (!id) return say(id.failure());
  std::cout << "Written as note " << *id << ": " << plan->field.name << ", " << day_text(note->date)
            << (note->stage ? ", " + field::word_for_stage(*note->stage) : "") << ".\n";
  return Exit::done;
}

}  // namespace antherd::commands
