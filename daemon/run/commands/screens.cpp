// antherd now and antherd review: what a person reads.
#include <algorithm>
#include <iostream>

#include "core/letters/words.hpp"
#include "run/commands/common.hpp"
#include "run/service/attention.hpp"
#include "run/service/intake.hpp"
#include "run/service/review.hpp"

namespace antherd::commands {
namespace {

struct View {
  store::Store store;
  service::Lookout lookout;
};

Result<View> view_of(const SettingsPointer& settings, const Present& present) {
  const Instant now = present.now;
  auto store = open_to_read(*settings);
  if (!store) return store.failure();
  const auto past = past_from_store(settings, *store, now);
  if (!past) return past.failure();
  View view{std::move(*store), lookout_over(*past)};
  const auto deliveries = view.store.deliveries(now - service::mail_looks_back);
  if (deliveries && settings->mail) {
    view.lookout.set_mail_troubles(outbox::mail_troubles(*deliveries, now));
  }
  for (const auto& station : settings->stations) {
    const std::string& name = station.station.name;
    view.lookout.set_arrivals(name, service::stored_arrivals(view.store, name));
  }
  view.lookout.turn(now, closed_at(*past, now), !present.doubted);
  // The ledger is what was really said, not what this look would have said.
  view.lookout.set_ledger(past->said);
  return view;
}

/// The service carries what lies in the outbox.
Exit put_into_outbox(const settings::Settings& settings,
                     const std::vector<letters::Letter>& letters, Instant now) {
  if (!settings.mail) {
    return say(Failure{"mail the review", settings.path, "there is no [mail] table",
                       "it was only printed"});
  }
  auto store = open_to_write(settings);
  if (!store) return say(store.failure());
  store::Decision decision;
  for (const letters::Letter& letter : letters) {
    outbox::Item item;
    item.letter = letter;
    // A name of its own: asked for within its week it must not stand for the review that comes.
    item.letter.id = "asked-" + std::to_string(now.time_since_epoch().count()) + "-" + letter.id;
    item.next_try = now;
    decision.letters.push_back(std::move(item));
  }
  if (auto done = store->save(decision); !done) return say(done.failure());
  const bool one = decision.letters.size() == 1;
  std::cout << letters::plain_count(decision.letters.size(), "letter")
            << (one ? " was put into the outbox; the service carries it.\n"
                    : " were put into the outbox; the service carries them.\n");
  return Exit::done;
}

}  // namespace

Exit now(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const Present by = present(*settings, open_to_read(*settings));
  const Instant time = by.now;
  auto view = view_of(settings, by);
  if (!view) return say(view.failure());
  const auto attention = service::attention_of(view->lookout, view->store, time);
  const auto unclosed = service::unclosed_of(view->lookout);
  std::cout << letters::compose_now(view->lookout.desk(time), unclosed, attention);
  return attention.empty() ? Exit::done : Exit::attention;
}

Exit review(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const Present by = present(*settings, open_to_read(*settings));
  const Instant time = by.now;
  service::Period period = service::week_before(settings->calendar, time);
  if (call.season) {
    period = service::season_of(*settings, time);
  } else if (!call.week.empty()) {
    const auto week = service::iso_week(call.week);
    if (!week) {
      std::cerr << "antherd: --week '" << call.week
                << "' is no ISO 8601 week such as 2026-W28; nothing was done\n";
      return Exit::usage;
    }
    period = *week;
  }
  std::vector<letters::Letter> to_mail;
  int parked = 0;
  {
    // The store is closed again before it is opened to write: one process, one way at a time.
    auto view = view_of(settings, by);
    if (!view) return say(view.failure());
    const letters::Desk desk = view->lookout.desk(time);
    const letters::Review facts = service::make_review(view->lookout, view->store, period, time);
    std::cout << letters::compose_review(facts, desk);
    parked = facts.letters_parked;
    if (call.mail) to_mail = letters::compose_weekly(facts, settings->recipients, desk);
  }
  if (call.mail) {
    const Exit mailed = put_into_outbox(*settings, to_mail, time);
    if (mailed != Exit::done) return mailed;
  }
  return parked > 0 ? Exit::attention : Exit::done;
}

}  // namespace antherd::commands
