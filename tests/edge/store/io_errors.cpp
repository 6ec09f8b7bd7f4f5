// A disk on which one operation fails, the first, the second … the last of a day's work: each call
// fails or succeeds whole, what succeeded is there, and the work goes on when the disk does.
#include "ground.hpp"
#include "power_disk.hpp"

using namespace ground;
using store::Decision;
using weather::Sample;

namespace {

struct Acknowledged {
  int samples = 0, decisions = 0, irrigations = 0, sent = 0;
  int failures = 0;
};

Decision decision(int n) {
  Decision made;
  made.hours["bench"] = {record(n, 30)};
  made.said = {said("episode " + std::to_string(n), n)};
  made.letters = {letter("heat." + std::to_string(n), "a"),
                  letter("heat." + std::to_string(n), "b")};
  made.notes = {{"decided", std::to_string(n)}};
  return made;
}

/// Tries a thing until it succeeds, as the service does turn after turn.
template <class Try>
void insist(Acknowledged& known, const Try& attempt) {
  for (int i = 0; i < 400; ++i) {
    if (attempt()) return;
    ++known.failures;
  }
  FAIL("it never worked again");
}

void send_letters_of(Store& store, Acknowledged& known) {
  insist(known, [&] {
    const auto open_letters = store.letters_open();
    if (!open_letters) return false;
    for (outbox::Item item : *open_letters) {
      if (item.letter.recipient != "a") continue;
      item.state = outbox::State::sent;
      if (!store.update(item, {})) return false;
      ++known.sent;
    }
    return true;
  });
}

/// A day's work from an empty folder to a closed store.
Acknowledged work(const Store::Options& options) {
  Acknowledged known;
  std::optional<Store> store;
  insist(known, [&] {
    auto opened = Store::open(options);
    if (opened) store.emplace(std::move(*opened));
    return store.has_value();
  });
  CHECK(!store->set_aside());
  for (int n = 0; n < 4; ++n) {
    std::vector<Sample> some;
    for (int i = 0; i < 40; ++i) some.push_back(sample(known.samples + i, 20 + i * 0.01, 50));
    insist(known, [&] {
      return bool(
          store->add_samples("bench", some, {{"bookmark", std::to_string(known.samples + 40)}}));
    });
    known.samples += 40;
    insist(known, [&] { return bool(store->save(decision(n))); });
    ++known.decisions;
    send_letters_of(*store, known);
    // An entry that was said to have failed may not have been made: it is the person who tries
    // again.
    insist(known, [&] { return bool(store->add(irrigation("north bench", n))); });
    ++known.irrigations;
  }
  return known;
}

void check_all_there(const Store::Options& options, const Acknowledged& known) {
  const auto store = Store::open(options);
  REQUIRE(store);
  CHECK(!store->set_aside());
  CHECK(must(store->note("bookmark")) == std::to_string(known.samples));
  CHECK(must(store->samples("bench", instant(0), instant(july_14 * 2))).size() ==
        static_cast<std::size_t>(known.samples));
  CHECK(must(store->said(instant(0))).size() == static_cast<std::size_t>(known.decisions));
  CHECK(must(store->hours("bench", hour(0), hour(1000000))).size() ==
        static_cast<std::size_t>(known.decisions));
  const auto letters = must(store->letters_since(instant(0)));
  CHECK(letters.size() == 2 * static_cast<std::size_t>(known.decisions));
  for (const auto& item : letters) {
    CHECK((item.state == outbox::State::sent) == (item.letter.recipient == "a"));
  }
  CHECK(must(store->diary("north bench")).irrigations.size() ==
        static_cast<std::size_t>(known.irrigations));
}

}  // namespace

TEST_CASE("whichever operation of the disk fails, nothing is lost or halved", "[store]") {
  for (const int in_a_row : {1, 3, 40}) {
    int operation = 0, met = 0;
    for (bool reached = true; reached; ++operation) {
      CAPTURE(in_a_row, operation);
      const Folder folder;
      PowerDisk disk(1);
      disk.fail_at(operation + 1, in_a_row);
      const Acknowledged known = work(service(folder));
      reached = !disk.failure_ahead();
      disk.fail_at(0, 0);
      if (reached && known.failures > 0) ++met;
      check_all_there(service(folder), known);
    }
    CHECK(operation > 100);  // the work is long enough to be worth breaking
    CHECK(met > 50);         // and the failures did reach the store's callers
    std::printf("%d failing operations in a row, at %d places: %d met a call, none lost\n",
                in_a_row, operation - 1, met);
  }
}

TEST_CASE("on a full disk the reserve goes for what must be kept, not for samples", "[store]") {
  const int what = GENERATE(0, 1, 2);
  CAPTURE(what);
  const Folder folder;
  PowerDisk disk(1);
  Store store = open(service(folder));
  must(store.save(decision(0)));
  const outbox::Item first = must(store.letters_open())[0];
  disk.refuse(SQLITE_FULL);
  CHECK_FALSE(store.add_samples("bench", std::vector<Sample>{sample(9, 20)}));
  CHECK_FALSE(store.add(irrigation("north bench", 9)));  // it stands in a file, or is typed again
  CHECK(folder.has("ballast"));
  CHECK_FALSE(store.reserve_given());
  if (what == 0) CHECK_FALSE(store.save(decision(1)));
  if (what == 1) CHECK_FALSE(store.update(first, {}));
  if (what == 2) CHECK_FALSE(store.put_notes({{"key", "value"}}));
  CHECK_FALSE(folder.has("ballast"));
  CHECK(store.reserve_given());
  disk.refuse(SQLITE_OK);
  must(store.keep_ballast());
  CHECK_FALSE(store.reserve_given());
  must(store.save(decision(1)));
}
