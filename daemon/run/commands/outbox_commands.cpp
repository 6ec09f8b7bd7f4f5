// antherd letters and antherd mailtest: what became of the letters, and whether mail works.
#include <atomic>
#include <iostream>
#include <nlohmann/json.hpp>

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
  if (auto done = store.update(outbox::retry(**item, now), outbox::reopen(*line)); !done) {
    return say(done.failure());
  }
  std::cout << "Letter " << id << " waits again; the service sends it.\n";
  return Exit::done;
}

/// Marks what one letter spoke of: the ledger's entries of its kind and moment. @return how many
Result<int> mark_entries(store::Store& store, const antherd::letters::Letter& letter) {
  const auto said = store.said(letter.decided - std::chrono::days{1});
  if (!said) return said.failure();
  // A letter was made when its entries were, or some hours before it might go (quiet hours).
  const auto speaks_of = [&](const alerts::Said& entry) {
    return entry.at <= letter.decided && alerts::name_of(entry.kind) == letter.kind;
  };
  Instant moment{};
  for (const alerts::Said& entry : *said) {
    if (speaks_of(entry)) moment = std::max(moment, entry.at);
  }
  int marked = 0;
  for (const alerts::Said& entry : *said) {
    if (entry.at != moment || !speaks_of(entry)) continue;
    if (auto done = store.mark_seen(entry.episode, entry.level); !done) return done.failure();
    ++marked;
  }
  return marked;
}

/// Marks what a letter spoke of as seen; of a digest, what each letter that it names spoke of.
Exit mark_seen(store::Store& store, std::int64_t id) {
  const auto item = store.letter(id);
  if (!item) return say(item.failure());
  if (!*item) {
    return say(Failure{"mark a letter as seen", std::to_string(id),
                       "there is no letter of this number", "\"antherd letters\" lists them"});
  }
  std::vector<antherd::letters::Letter> meant{(*item)->letter};
  if (meant.front().kind == "digest") {
    const auto all = store.letters_since(meant.front().decided - std::chrono::days{30});
    if (!all) return say(all.failure());
    for (const outbox::Item& named : *all) {
      const bool here =
          named.digest == (*item)->letter.id && named.letter.recipient == (*item)->letter.recipient;
      if (here) meant.push_back(named.letter);
    }
  }
  int marked = 0;
  for (const antherd::letters::Letter& letter : meant) {
    const auto entries = mark_entries(store, letter);
    if (!entries) return say(entries.failure());
    marked += *entries;
  }
  if (marked == 0) {
    return say(Failure{"mark a letter as seen", std::to_string(id),
                       "it speaks of nothing that is reminded of", "nothing was changed"});
  }
  std::cout << "Seen: no more reminders at this level. A raise is still told.\n";
  return Exit::done;
}

}  // namespace

Exit letters(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const Instant time = clock::wall_now();
  if (call.retry || call.seen) {
    auto store = open_to_write(*settings);
    if (!store) return say(store.failure());
    return call.retry ? retry_letter(*store, *call.retry, time) : mark_seen(*store, *call.seen);
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
