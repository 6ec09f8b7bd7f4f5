// Samples: what stands, what is kept aside, and that neither order nor repeats matter.
#include <algorithm>

#include "ground.hpp"

using namespace ground;
using weather::Sample;

TEST_CASE("samples come back as they went in", "[store]") {
  const Folder folder;
  Sample full = sample(60, 21.5, 100.5);
  full.dew_point = Celsius(-3.25);
  full.rain = Millimetre(0);
  full.wind = MetrePerSecond(1e-9);
  full.solar = WattPerSquareMetre(812.1);
  full.wet_minutes = 7.5;
  const Sample bare = sample(0, std::nullopt);
  const std::vector<Sample> all{full, bare, sample(-60, 0.1 + 0.2)};
  {
    Store store = open(writer(folder));
    const auto intake = must(store.add_samples("bench", all, {{"drop/a.csv", "1820"}}));
    CHECK(intake.added == 3);
    CHECK(intake.replaced + intake.conflicts + intake.repeated == 0);
    CHECK(intake.earliest == all[2].time);
    CHECK(intake.latest == full.time);
  }
  Store store = open(writer(folder));  // after closing
  CHECK(must(store.samples("bench", instant(0), instant(july_14 * 2))) ==
        std::vector<Sample>{all[2], bare, full});
  CHECK(must(store.samples("bench", bare.time, full.time)) == std::vector<Sample>{bare});
  CHECK(must(store.samples("other", instant(0), instant(july_14 * 2))).empty());
  CHECK(must(store.last_sample("bench")) == full.time);
  CHECK(must(store.last_sample("bench", full.time)) == bare.time);
  CHECK(must(store.last_sample("bench", full.time + Seconds{1})) == full.time);
  CHECK_FALSE(must(store.last_sample("bench", instant(0))));
  CHECK_FALSE(must(store.last_sample("other")));
  const Sample later = sample(3 * 86400, std::nullopt);  // without a temperature
  must(store.add_samples("bench", std::vector<Sample>{later}));
  CHECK(must(store.last_sample("bench")) == later.time);
  CHECK(must(store.last_temperature("bench")) == full.time);
  CHECK_FALSE(must(store.last_temperature("other")));
  CHECK(must(store.note("drop/a.csv")) == "1820");
}

TEST_CASE("an identical sample is ignored", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  const std::vector<Sample> all{sample(0, 20), sample(0, 20), sample(60, std::nullopt)};
  CHECK(must(store.add_samples("bench", all)).repeated == 1);
  const auto again = must(store.add_samples("bench", all));
  CHECK(again.repeated == 3);
  CHECK(again.added == 0);
  CHECK_FALSE(again.earliest);
  CHECK(must(store.conflicts("bench")).empty());
}

TEST_CASE("the warmest possible sample of one time stands, the others are kept once", "[store]") {
  // The last is what a logger slipped to: no air is so warm.
  std::vector<Sample> three{sample(0, 20, 50), sample(0, 22, 40), sample(0, 22, 60),
                            sample(0, 343, 60)};
  std::vector<int> order{0, 1, 2, 3};
  std::string fingerprint;
  do {
    CAPTURE(order);
    const Folder folder;
    Store store = open(writer(folder));
    int conflicts = 0;
    for (int round = 0; round < 2; ++round) {
      for (const int i : order) {
        const auto intake = must(
            store.add_samples("bench", std::vector<Sample>{three[static_cast<std::size_t>(i)]}));
        conflicts += intake.conflicts;
        if (round == 1) CHECK(intake.repeated == 1);
        CHECK((intake.earliest.has_value()) == (intake.added + intake.replaced > 0));
      }
    }
    CHECK(conflicts == 3);
    CHECK(must(store.samples("bench", instant(0), instant(july_14 * 2))) ==
          std::vector<Sample>{three[2]});
    CHECK(must(store.conflicts("bench")) == std::vector<Sample>{three[0], three[1], three[3]});
    const std::string now = must(store.fingerprint());
    CHECK(now.size() == 32);
    if (fingerprint.empty()) fingerprint = now;
    CHECK(now == fingerprint);
  } while (std::next_permutation(order.begin(), order.end()));
}

namespace {

/// Facts of two stations, with conflicts; a season's worth in little.
struct Facts {
  std::vector<std::pair<std::string, Sample>> samples;
  std::vector<weather::Hour> hours;
  std::vector<field::Irrigation> irrigations;
  std::vector<field::Scouting> notes;
};

Facts some_facts(std::mt19937& random) {
  Facts facts;
  const auto pick = [&](int n) { return static_cast<int>(random() % static_cast<unsigned>(n)); };
  for (int i = 0; i < 400; ++i) {
    Sample made = sample(60 * pick(150), std::nullopt);
    if (pick(8) != 0) made.temperature = Celsius(20 + pick(3) * 0.1);
    if (pick(8) != 0) made.humidity = Percent(50 + pick(3));
    facts.samples.emplace_back(pick(2) == 0 ? "bench" : "creek", made);
  }
  for (int i = 0; i < 40; ++i) {
    weather::Hour made = record(i, 20 + i * 0.3);
    if (i % 7 == 0) {
      made.flags = {{weather::Element::rain, weather::Verdict::suspect,
                     weather::Reason::rain_in_dry_air, i, instant(july_14 + i), i / 3.0}};
    }
    facts.hours.push_back(made);
    facts.irrigations.push_back(irrigation(i % 2 == 0 ? "north bench" : "south", i * 7200));
    field::Scouting note;
    note.field = "north bench";
    note.date = CivilDay(std::chrono::days(20648 + i % 9));
    note.stage = 60 + i % 4;
    if (i % 3 == 0) note.disease = i % 2 == 0;
    facts.notes.push_back(note);
  }
  return facts;
}

/// Feeds facts in random order, in random batches, some twice, from two connections, reopening.
std::string fed_fingerprint(const Facts& facts, std::mt19937& random, std::string& witness) {
  const Folder folder;
  std::string fingerprint;
  {
    auto store = std::make_unique<Store>(open(writer(folder)));
    Store other = open(writer(folder));
    std::vector<std::pair<std::string, Sample>> samples = facts.samples;
    samples.insert(samples.end(), facts.samples.begin(), facts.samples.begin() + 100);
    std::shuffle(samples.begin(), samples.end(), random);
    for (std::size_t at = 0; at < samples.size();) {
      const std::size_t end = std::min(samples.size(), at + 1 + random() % 90);
      std::map<std::string, std::vector<Sample>> batch;
      for (; at < end; ++at) batch[samples[at].first].push_back(samples[at].second);
      for (const auto& [station, some] : batch) must(store->add_samples(station, some));
      if (random() % 4 == 0) {
        store.reset();
        store = std::make_unique<Store>(open(writer(folder)));
      }
    }
    std::vector<std::size_t> order(facts.hours.size());
    for (std::size_t i = 0; i < order.size(); ++i) order[i] = i;
    for (int round = 0; round < 2; ++round) {
      std::shuffle(order.begin(), order.end(), random);
      for (const std::size_t i : order) {
        must(store->save({{{"bench", {facts.hours[i]}}}, {}, {}, {}, {}}));
        must(other.add(facts.irrigations[i]));
        must(store->add(facts.notes[i]));
      }
    }
    fingerprint = must(store->fingerprint());
  }
  witness = ground::facts(folder.database());
  return fingerprint;
}

}  // namespace

TEST_CASE("the fingerprint depends on the set of facts alone", "[store]") {
  const std::uint32_t started = seed();
  CAPTURE(started);
  std::mt19937 random(started);
  Facts facts = some_facts(random);
  std::string witness, first_witness;
  const std::string first = fed_fingerprint(facts, random, first_witness);
  CHECK(std::count(first_witness.begin(), first_witness.end(), '\n') > 300);
  for (int round = 0; round < 12; ++round) {
    CHECK(fed_fingerprint(facts, random, witness) == first);
    CHECK(witness == first_witness);
  }
  // … and on every part of it.
  for (int part = 0; part < 5; ++part) {
    CAPTURE(part);
    Facts changed = facts;
    if (part == 0) changed.samples[0].second.wind = MetrePerSecond(0);
    if (part == 1) changed.hours[3].temperature = Celsius(33);
    if (part == 2) changed.hours[7].flags[0].count += 1;
    if (part == 3) changed.irrigations[5].depth.reset();
    if (part == 4) changed.notes[5].note = "seen from the road";
    CHECK(fed_fingerprint(changed, random, witness) != first);
    CHECK(witness != first_witness);
  }
}

TEST_CASE("a fact that went away leaves no trace in the fingerprint", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  const std::string empty = must(store.fingerprint());
  must(store.add_samples("bench", std::vector<Sample>{sample(0, 20), sample(0, 21)}));
  must(store.save({{{"creek", {record(1, 20)}}}, {}, {}, {}, {}}));
  const auto id = must(store.add(irrigation("north bench", 0)));
  CHECK(must(store.fingerprint()) != empty);
  must(store.drop_samples_before(instant(july_14 + 1)));
  must(store.save({{}, {{"creek", {hour(1)}}}, {}, {}, {}}));
  must(store.remove_irrigation(id));
  CHECK(must(store.fingerprint()) == empty);
}

TEST_CASE("old samples are dropped, conflicts with them", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  must(store.add_samples(
      "bench", std::vector<Sample>{sample(0, 20), sample(0, 21), sample(60, 22), sample(60, 23)}));
  must(store.add_samples("creek", std::vector<Sample>{sample(0, 20), sample(120, 22)}));
  must(store.drop_samples_before(instant(july_14 + 60)));
  CHECK(must(store.samples("bench", instant(0), instant(july_14 * 2))) ==
        std::vector<Sample>{sample(60, 23)});
  CHECK(must(store.conflicts("bench")) == std::vector<Sample>{sample(60, 22)});
  CHECK(must(store.samples("creek", instant(0), instant(july_14 * 2))).size() == 1);
}

TEST_CASE("a bookmark and its samples are kept together or not at all", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  must(store.add_samples("bench", std::vector<Sample>{sample(0, 20)}, {{"drop/a", "1"}}));
  // The second note cannot be stored: a trigger of our own refuses it after the samples went in.
  Raw(folder.database())
      .run("CREATE TRIGGER refuse BEFORE UPDATE ON note BEGIN SELECT RAISE(ABORT, 'no'); END");
  const auto refused =
      store.add_samples("creek", std::vector<Sample>{sample(60, 20)}, {{"drop/a", "2"}});
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().why == "no");
  CHECK_FALSE(must(store.last_sample("creek")));
  CHECK(must(store.note("drop/a")) == "1");
  Raw(folder.database()).run("DROP TRIGGER refuse");
  // The station's number from the undone transaction must not be used again.
  must(store.add_samples("creek", std::vector<Sample>{sample(60, 20)}, {{"drop/a", "2"}}));
  CHECK(must(store.last_sample("creek")) == instant(july_14 + 60));
  CHECK(Raw(folder.database()).run("PRAGMA foreign_key_check").empty());
}

TEST_CASE("notes by name and by beginning", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  must(store.put_notes({{"drop/a", "1"}, {"drop/b", ""}, {"dropper", "x"}, {"last_weekly", "y"}}));
  must(store.put_notes({{"drop/a", "2"}}));
  CHECK(must(store.note("drop/a")) == "2");
  CHECK(must(store.note("drop/b")) == "");
  CHECK_FALSE(must(store.note("drop/")));
  CHECK(must(store.notes_with_prefix("drop/")) == store::Notes{{"drop/a", "2"}, {"drop/b", ""}});
  CHECK(must(store.notes_with_prefix("")).size() == 4);
  const std::vector<std::string> gone{"drop", "drop/a", "dropped"};
  must(store.drop_notes(gone));  // these names and no longer ones
  CHECK(must(store.notes_with_prefix("drop")) == store::Notes{{"drop/b", ""}, {"dropper", "x"}});
  const std::string evil = "'; DROP TABLE note; --\n\xFF";
  must(store.put_notes({{evil, evil}}));
  CHECK(must(store.note(evil)) == evil);
}
