// antherd letters and antherd mailtest: what became of the letters, and whether mail works.
#include <atomic>
#include <iostream>
#include <nlohmann/json.hpp>

#include "core/letters/compose.hpp"
#include "edge/clock/clock.hpp"
#include "edge/mail/mail.hpp"
#include "run/commands/common.hpp"
#include "run/commands/tables.hpp"

namespace antherd::commands {
namespace {

nlohmann::ordered_json row_of(const outbox::Item& item) {
  nlohmann::ordered_json row;
  row["id"] = item.id;
  row["state"] = outbox::name_of(item.state);
  row["decided"] = utc_text(item.letter.decided);
  row["kind"] = item.letter.kind;
  row["severity"] = alerts::name_of(item.letter.severity);
  row["recipient"] = item.letter.recipient;
  row["subject"] = item.letter.subject;
  row["attempts"] = item.attempts;
  row["next_try"] = item.state == outbox::State::waiting || item.state == outbox::State::in_doubt
                        ? nlohmann::ordered_json(utc_text(item.next_try))
                        : nlohmann::ordered_json(nullptr);
  row["answer"] = item.answer;
  return row;
}

Exit retry_letter(store::Store& store, std::int64_t id, Instant now) {
  const auto item = store.letter(id);
  if (!item) return say(item.failure());
  if (!*item) {
    return say(Failure{"retry a letter", std::to_string(id), "there is no letter of this number",
                       "\"antherd letters\" lists them"});
  }
  if ((*item)->state == outbox::State::sent) {
    return say(Failure{"retry a letter", std::to_string(id), "it was sent already",
                       "nothing was changed"});
  }
  if ((*item)->state == outbox::State::merged) {
    return say(Failure{"retry a letter", std::to_string(id),
                       "it was named in the digest " + (*item)->digest,
                       "send that one again: \"antherd letters\" lists it"});
  }
  const auto line = store.line();
  if (!line) return say(line.failure());
  const auto kept = store.update_if(**item, outbox::retry(**item, now), outbox::reopen(*line));
  if (!kept) return say(kept.failure());
  if (!*kept || (*item)->state == outbox::State::sending) {
    return say(Failure{"retry a letter", std::to_string(id), "the service is sending it just now",
                       "nothing was changed; \"antherd letters\" tells what becomes of it"});
  }
  std::cout << "Letter " << id << " waits again; the service sends it.\n";
  return Exit::done;
}

/// Whether a reminder of this kind may come at all.
bool reminded_of(alerts::Kind kind) {
  return kind == alerts::Kind::heat || kind == alerts::Kind::humid_spell ||
         kind == alerts::Kind::no_data || kind == alerts::Kind::doubtful_sensor;
}

/// What a letter spoke of, traced by its identity; nothing when that cannot be told surely.
Result<std::vector<alerts::Telling>> spoken_of(const store::Store& store,
                                               const settings::Settings& settings,
                                               const antherd::letters::Letter& letter) {
  // Quiet hours hold a letter back for less than a day, and it then bears the time of their end.
  const auto said = store.said(letter.decided - std::chrono::days{2});
  if (!said) return said.failure();
  antherd::letters::Recipient recipient;
  for (const auto& known : settings.recipients) {
    if (known.address == letter.recipient) recipient = known;
  }
  recipient.address = letter.recipient;
  antherd::letters::Desk desk;
  desk.farm = settings.farm;
  for (const settings::Station& station : settings.stations) {
    const std::string& name = station.station.name;
    desk.stations[name].fields = service::fields_of(settings, name);
  }
  return antherd::letters::trace(letter, recipient, *said, desk);
}

/// How many entries of the ledger were marked, and how many letters could not be traced to any.
struct Marks {
  int marked = 0, untraced = 0;
};

Result<Marks> mark_entries(store::Store& store, const settings::Settings& settings,
                           const std::vector<antherd::letters::Letter>& letters) {
  Marks marks;
  for (const antherd::letters::Letter& letter : letters) {
    const auto kind = alerts::kind_from(letter.kind);
    if (letter.kind != "learned_late" && !(kind && reminded_of(*kind))) continue;
    const auto spoken = spoken_of(store, settings, letter);
    if (!spoken) return spoken.failure();
    if (spoken->empty()) ++marks.untraced;
    for (const alerts::Telling& telling : *spoken) {
      if (!reminded_of(telling.kind) || telling.level == alerts::Level::none) continue;
      if (auto done = store.mark_seen(telling.episode, telling.level); !done) return done.failure();
      ++marks.marked;
    }
  }
  return marks;
}

/// The letter itself; of a digest also each letter that it names.
Result<std::vector<antherd::letters::Letter>> meant_by(const store::Store& store,
                                                       const antherd::letters::Letter& letter) {
  std::vector<antherd::letters::Letter> meant{letter};
  if (letter.kind != "digest") return meant;
  const auto all = store.letters_since(letter.decided - std::chrono::days{30});
  if (!all) return all.failure();
  for (const outbox::Item& named : *all) {
    if (named.digest == letter.id && named.letter.recipient == letter.recipient) {
      meant.push_back(named.letter);
    }
  }
  return meant;
}

/// Marks what a letter spoke of as seen; of a digest, what each letter that it names spoke of.
Exit mark_seen(store::Store& store, const settings::Settings& settings, std::int64_t id) {
  const auto refuse = [&](const std::string& why, const std::string& what_now) {
    return say(Failure{"mark a letter as seen", std::to_string(id), why, what_now});
  };
  const auto item = store.letter(id);
  if (!item) return say(item.failure());
  if (!*item) {
    return refuse("there is no letter of this number", "\"antherd letters\" lists them");
  }
  const auto meant = meant_by(store, (*item)->letter);
  if (!meant) return say(meant.failure());
  const auto marks = mark_entries(store, settings, *meant);
  if (!marks) return say(marks.failure());
  const std::string cause =
      "the farm's name, or what this address gets, may be another than when it was written";
  if (marks->marked == 0 && marks->untraced > 0) {
    return refuse("what it spoke of cannot be told for sure: " + cause,
                  "nothing was changed; the next reminder is a letter that can be marked");
  }
  if (marks->marked == 0) {
    return refuse("it speaks of nothing that is reminded of", "nothing was changed");
  }
  std::cout << "Seen: no more reminders at this level. A raise is still told.\n";
  if (marks->untraced == 0) return Exit::done;
  std::cout << "What " << marks->untraced
            << " of the letters that it names spoke of cannot be told "
            << "for sure; reminders of that go on: " << cause << ".\n";
  return Exit::attention;
}

}  // namespace

Exit letters(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const Instant time = clock::wall_now();
  if (call.retry || call.seen) {
    auto store = open_to_write(*settings);
    if (!store) return say(store.failure());
    return call.retry ? retry_letter(*store, *call.retry, time)
                      : mark_seen(*store, *settings, *call.seen);
  }
  const auto store = open_to_read(*settings);
  if (!store) return say(store.failure());
  const auto items = store->letters_since(Instant{});
  if (!items) return say(items.failure());
  Table table(call);
  bool needs_attention = false;
  for (const outbox::Item& item : *items) {
    needs_attention = needs_attention || item.state == outbox::State::parked;
    if (table.write(row_of(item))) continue;
    std::cout << item.id << "  " << outbox::name_of(item.state) << "  "
              << farm_text(settings->calendar, item.letter.decided) << "  " << item.letter.recipient
              << "\n    " << item.letter.subject << "\n";
    if (!item.answer.empty()) std::cout << "    " << item.answer << "\n";
  }
  if (items->empty() && !table.machine()) std::cout << "No letters yet.\n";
  return needs_attention ? Exit::attention : Exit::done;
}

Exit mailtest(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  if (!settings->mail || settings->recipients.empty()) {
    return say(Failure{"test the mail", settings->path,
                       "there is no [mail] table or no [[recipient]]", "nothing was sent"});
  }
  const Instant time = clock::wall_now();
  bool all_well = true;
  for (const antherd::letters::Recipient& recipient : settings->recipients) {
    antherd::letters::Letter letter;
    letter.id = "mailtest-" + std::to_string(time.time_since_epoch().count()) + "-" +
                std::to_string(&recipient - settings->recipients.data());
    letter.recipient = recipient.address;
    letter.subject = "Test: the watch of " + settings->farm + " can reach you";
    letter.body = "This is a test that somebody at " + settings->farm +
                  " asked for.\nWarnings will come from this address.\n";
    letter.kind = "test";
    letter.decided = time;
    if (!settings->mail->server) {
      const auto path = mail::write_eml(settings->mail->folder, settings->mail->from, letter);
      if (!path) return say(path.failure());
      std::cout << recipient.address << ": written to " << *path << "\n";
      continue;
    }
    const std::atomic<bool> stop{false};
    const auto spoken = mail::send(
        *settings->mail->server, letter, [] { return true; }, stop);
    std::cout << recipient.address << ": " << spoken.sentence << "\n";
    if (spoken.how != mail::How::accepted) {
      all_well = false;
      std::cout << "The conversation:\n" << spoken.transcript << "\n";
    }
  }
  return all_well ? Exit::done : Exit::failed;
}

}  // namespace antherd::commands
