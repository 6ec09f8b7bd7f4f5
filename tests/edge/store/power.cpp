// Power cuts: what was acknowledged is there afterwards, decisions are whole, nothing is damaged.
#include "edge/store/schema.hpp"
#include "ground.hpp"
#include "power_disk.hpp"

using namespace ground;
using store::Decision;
using weather::Sample;

namespace {

/// What the store acknowledged so far.
struct Acknowledged {
  int decisions = 0;  // numbers 0 … decisions − 1 were saved
  int samples = 0;    // likewise, and the bookmark with them
  int irrigations = 0;
  std::map<std::string, outbox::State> letters;  // the last state that was kept
};

struct Outcomes {
  int lost = 0;     // acknowledged and gone
  int halved = 0;   // a decision of which a part is there
  int damaged = 0;  // SQLite finds fault with the file
};

std::string letter_id(int n) { return "heat." + std::to_string(n); }

/// Works until the power goes. False when a call failed though the power was there.
bool work(const Store::Options& options, const PowerDisk& disk, Acknowledged& known,
          std::mt19937& random) {
  auto opened = Store::open(options);
  if (!opened) return disk.dead();
  while (true) {
    Store& store = *opened;
    const int size = random() % 12 == 0 ? 2000 : 5;
    std::vector<Sample> some;
    for (int i = 0; i < size; ++i) some.push_back(sample(known.samples + i, 20 + i * 0.01, 50));
    const store::Notes bookmark{{"bookmark", std::to_string(known.samples + size)}};
    if (!store.add_samples("bench", some, bookmark)) return disk.dead();
    known.samples += size;
    const int n = known.decisions;
    Decision made;
    made.hours["bench"] = {record(n, 30)};
    made.said = {said("episode " + std::to_string(n), n)};
    made.letters = {letter(letter_id(n), "a"), letter(letter_id(n), "b")};
    made.notes = {{"decided", std::to_string(n)}};
    if (!store.save(made)) return disk.dead();
    ++known.decisions;
    known.letters[letter_id(n)] = outbox::State::waiting;
    for (const outbox::State state : {outbox::State::in_doubt, outbox::State::sent}) {
      const auto open_letters = store.letters_open();
      if (!open_letters) return disk.dead();
      for (outbox::Item item : *open_letters) {
        if (item.letter.recipient != "a") continue;
        item.state = state;
        if (!store.update(item, {})) return disk.dead();
        known.letters[item.letter.id] = state;
      }
    }
    if (!store.add(irrigation("north bench", known.irrigations))) return disk.dead();
    ++known.irrigations;
    if (random() % 6 == 0) {  // closing writes the log back and removes it
      { const Store closing = *std::move(opened); }
      opened = Store::open(options);
      if (!opened) return disk.dead();
    }
  }
}

/// Compares what is there after a cut with what was acknowledged, and goes on from what is there.
void judge(const Store::Options& options, Acknowledged& known, Outcomes& outcomes) {
  const auto opened = Store::open(options);
  if (!opened || opened->set_aside()) {
    ++outcomes.damaged;
    return;
  }
  const Store& store = *opened;
  const int bookmark = std::stoi(must(store.note("bookmark")).value_or("0"));
  const int decided = std::stoi(must(store.note("decided")).value_or("-1")) + 1;
  const auto diary = must(store.diary("north bench")).irrigations.size();
  const auto letters = must(store.letters_since(instant(0)));
  std::map<std::string, outbox::State> states;
  for (const auto& item : letters) {
    if (item.letter.recipient == "a") states[item.letter.id] = item.state;
  }
  if (decided < known.decisions || bookmark < known.samples ||
      static_cast<int>(diary) < known.irrigations) {
    ++outcomes.lost;
  } else {
    for (const auto& [id, state] : known.letters) {
      if (states.count(id) == 0 || states[id] < state) {
        ++outcomes.lost;
        break;
      }
    }
  }
  const auto whole = static_cast<std::size_t>(decided);
  if (letters.size() != 2 * whole || must(store.said(instant(0))).size() != whole ||
      must(store.hours("bench", hour(0), hour(1000000))).size() != whole ||
      static_cast<int>(must(store.samples("bench", instant(0), instant(july_14 * 2))).size()) !=
          bookmark) {
    ++outcomes.halved;
  }
  known = {decided, bookmark, static_cast<int>(diary), states};
}

bool sound(const std::string& path) {
  store::Database database(path, store::Database::Mode::write, std::chrono::milliseconds(10));
  return database.text("PRAGMA integrity_check") == "ok";
}

/// Many cuts at moments of chance, on several disks one after the other.
Outcomes suffer(int cuts, std::uint32_t started, const std::string& lie, PowerDisk::Tally& sum) {
  std::mt19937 random(started);
  Outcomes outcomes;
  for (int done = 0; done < cuts;) {
    const Folder folder;
    PowerDisk disk(static_cast<std::uint32_t>(random()));
    disk.lie_about(lie);
    Acknowledged known;
    const int faults_before = outcomes.damaged;
    for (int i = 0; i < 10 && done < cuts && outcomes.damaged == faults_before; ++i, ++done) {
      // Mostly soon, now and then after the log has been written back more than once.
      const auto span = std::uint32_t{20} << (random() % 8);
      disk.cut_after(1 + static_cast<int>(random() % span));
      REQUIRE(work(service(folder), disk, known, random));
      disk.revive();
      judge(service(folder), known, outcomes);
      if (outcomes.damaged == faults_before && !sound(folder.database())) ++outcomes.damaged;
    }
    const PowerDisk::Tally& tally = disk.tally();
    sum.cuts += tally.cuts;
    sum.kept += tally.kept;
    sum.forgotten += tally.forgotten;
    sum.torn += tally.torn;
    sum.syncs += tally.syncs;
  }
  return outcomes;
}

int cuts_wanted() {
  const char* given = std::getenv("ANTHERD_POWER_CUTS");
  return given == nullptr ? 200 : std::atoi(given);
}

void report(const char* disk, const PowerDisk::Tally& sum, const Outcomes& outcomes) {
  std::printf(
      "%s: %d cuts; un-synced writes kept %d, forgotten %d, torn %d; %d forced writes; "
      "lost %d, halved %d, damaged %d\n",
      disk, sum.cuts, sum.kept, sum.forgotten, sum.torn, sum.syncs, outcomes.lost, outcomes.halved,
      outcomes.damaged);
}

}  // namespace

TEST_CASE("power cuts lose nothing that was acknowledged", "[store][power]") {
  const std::uint32_t started = seed();
  CAPTURE(started);
  PowerDisk::Tally sum;
  const Outcomes outcomes = suffer(cuts_wanted(), started, "", sum);
  report("honest disk", sum, outcomes);
  CHECK(sum.cuts == cuts_wanted());
  CHECK(sum.torn > sum.cuts);
  CHECK(sum.forgotten > sum.cuts);
  CHECK(outcomes.lost == 0);
  CHECK(outcomes.halved == 0);
  CHECK(outcomes.damaged == 0);
}

TEST_CASE("the same cuts on a disk that lies about the log are noticed", "[store][power]") {
  // Were the log not forced at each commit (synchronous NORMAL), this is what would happen: the
  // test above can fail.
  const std::uint32_t started = seed();
  CAPTURE(started);
  PowerDisk::Tally sum;
  const Outcomes outcomes = suffer(60, started, "-wal", sum);
  report("lying disk", sum, outcomes);
  CHECK(outcomes.lost + outcomes.damaged > 10);
}
