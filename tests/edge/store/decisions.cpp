// Decisions: one transaction for hours, what was said, letters and notes; the outbox; the diary.
#include "ground.hpp"

using namespace ground;
using alerts::Level;
using store::Decision;

namespace {

/// One decision with something in every part.
Decision decision(int n) {
  Decision made;
  made.hours["bench"] = {record(n, 35.5), record(n + 1, 30)};
  made.hours_gone["bench"] = {hour(n - 1)};
  made.said = {said("heat/north bench/" + std::to_string(n), n * 3600)};
  made.letters = {letter("heat." + std::to_string(n), "owner@larkspur.example", n * 3600),
                  letter("heat." + std::to_string(n), "phone@larkspur.example", n * 3600)};
  made.notes = {{"last_hour", std::to_string(n)}};
  return made;
}

bool same(const outbox::Item& a, const outbox::Item& b) {
  const auto& x = a.letter;
  const auto& y = b.letter;
  return x.id == y.id && x.recipient == y.recipient && x.subject == y.subject && x.body == y.body &&
         x.kind == y.kind && x.severity == y.severity && x.decided == y.decided &&
         x.valid_until == y.valid_until && x.still == y.still && x.raise == y.raise &&
         a.state == b.state && a.attempts == b.attempts && a.doubts == b.doubts &&
         a.next_try == b.next_try && a.first_try == b.first_try && a.ended == b.ended &&
         a.answer == b.answer;
}

}  // namespace

TEST_CASE("hours come back whole, are replaced and removed", "[store]") {
  const Folder folder;
  weather::Hour full = record(0, 35.6);
  full.temperature_min = Celsius(33.1);
  full.humidity_max = Percent(50);
  full.humidity_min = Percent(20.000001);
  full.rain_for_wetness = Millimetre(0.25);
  full.wind = MetrePerSecond(1.5);
  full.solar = WattPerSquareMetre(900);
  full.wet_minutes = 15;
  full.whole_degrees = true;
  full.flags = {{weather::Element::temperature, weather::Verdict::wrong, weather::Reason::spike, 2,
                 instant(july_14 + 300), 0.1 + 0.2},
                {weather::Element::humidity, weather::Verdict::suspect,
                 weather::Reason::above_saturation, 1, instant(july_14), 103},
                {weather::Element::rain, weather::Verdict::good, weather::Reason::none, 0,
                 instant(0), 1e300}};
  weather::Hour bare;
  bare.start = hour(1);
  {
    Store store = open(writer(folder));
    must(store.save({{{"bench", {bare, full}}, {"creek", {full}}}, {}, {}, {}, {}}));
  }
  Store store = open(writer(folder));
  CHECK(must(store.hours("bench", hour(-9), hour(9))) == std::vector<weather::Hour>{full, bare});
  CHECK(must(store.hours("bench", hour(0), hour(1))) == std::vector<weather::Hour>{full});
  weather::Hour changed = full;
  changed.flags.clear();
  changed.wind.reset();
  must(store.save(
      {{{"bench", {changed}}}, {{"bench", {hour(1), hour(5)}}, {"none", {hour(1)}}}, {}, {}, {}}));
  CHECK(must(store.hours("bench", hour(-9), hour(9))) == std::vector<weather::Hour>{changed});
  CHECK(must(store.hours("creek", hour(-9), hour(9))) == std::vector<weather::Hour>{full});
}

TEST_CASE("every word of the schema comes back", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  Decision made;
  for (int i = 0; i < 10; ++i) {
    alerts::Said entry = said("episode " + std::to_string(i), i, static_cast<Level>(i % 4));
    entry.kind = static_cast<alerts::Kind>(i);
    entry.saying = static_cast<alerts::Saying>(i % 7);
    if (i % 2 == 1) entry.until = instant(july_14 + i);
    entry.seen = i == 3;
    made.said.push_back(entry);
    outbox::Item item = letter("letter." + std::to_string(i), "a@b.example", i);
    item.state = static_cast<outbox::State>(i % 7);
    item.letter.severity = static_cast<alerts::Severity>(i % 4);
    item.letter.raise = i % 2 == 0;
    if (i % 3 == 0) item.letter.valid_until.reset();
    made.letters.push_back(item);
    field::Irrigation water = irrigation("north bench", i * 60);
    water.method = static_cast<field::Method>(i % 4);
    must(store.add(water));
  }
  must(store.save(made));
  const auto entries = must(store.said(instant(0)));
  REQUIRE(entries.size() == 10);
  for (std::size_t i = 0; i < 10; ++i) {
    const alerts::Said& want = made.said[i];
    CHECK(entries[i].episode == want.episode);
    CHECK(entries[i].kind == want.kind);
    CHECK(entries[i].subject == want.subject);
    CHECK(entries[i].start == want.start);
    CHECK(entries[i].until == want.until);
    CHECK(entries[i].saying == want.saying);
    CHECK(entries[i].level == want.level);
    CHECK(entries[i].at == want.at);
    CHECK(entries[i].about == want.about);
    CHECK(entries[i].seen == want.seen);
  }
  CHECK(must(store.said(instant(july_14 + 8))).size() == 2);
  const auto letters = must(store.letters_since(instant(0)));
  REQUIRE(letters.size() == 10);
  for (std::size_t i = 0; i < 10; ++i) CHECK(same(letters[i], made.letters[i]));
  CHECK(must(store.letters_since(instant(july_14 + 9))).size() == 1);
  const auto water = must(store.diary("north bench")).irrigations;
  for (int i = 0; i < 10; ++i) {
    CHECK(water[static_cast<std::size_t>(i)].method == static_cast<field::Method>(i % 4));
  }
}

TEST_CASE("a letter that is there is not kept a second time", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  must(store.save(decision(1)));
  auto first = must(store.letters_open());
  REQUIRE(first.size() == 2);
  CHECK(first[0].id != first[1].id);
  first[0].state = outbox::State::sent;
  first[0].ended = instant(july_14 + 1);
  must(store.update(first[0], {}));
  must(store.save(decision(1)));  // the very same decision again, e.g. after a restart
  CHECK(must(store.letters_since(instant(0))).size() == 2);
  CHECK(must(store.letters_open()).size() == 1);
  CHECK(must(store.said(instant(0))).size() == 1);
  Decision more;
  more.letters = {letter("heat.1", "third@larkspur.example"), letter("heat.1", "")};
  must(store.save(more));
  CHECK(must(store.letters_open()).size() == 3);
}

TEST_CASE("held letters and the digest that names them change places in one step", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  Decision first;
  for (const char* id : {"heat.1", "heat.2", "heat.3"}) {
    first.letters.push_back(letter(id, "a@b.example"));
    first.letters.back().state = outbox::State::held;
  }
  first.letters[2].letter.recipient = "other@b.example";
  must(store.save(first));
  CHECK(must(store.letters_open()).empty());
  CHECK(must(store.letters_held()).size() == 3);

  Decision second;
  second.letters = {letter("digest.1", "a@b.example"), letter("heat.4", "a@b.example")};
  second.letters[1].state = outbox::State::held;  // held and named in one and the same step
  for (const char* id : {"heat.1", "heat.2", "heat.4"}) {
    second.merged.push_back({id, "a@b.example", "digest.1", instant(july_14 + 9)});
  }
  must(store.save(second));
  must(store.save(second));  // again, e.g. after a restart
  const auto held = must(store.letters_held());
  REQUIRE(held.size() == 1);
  CHECK(held[0].letter.recipient == "other@b.example");
  REQUIRE(must(store.letters_open()).size() == 1);
  CHECK(must(store.letters_open())[0].letter.id == "digest.1");
  int merged = 0;
  for (const outbox::Item& item : must(store.letters_since(instant(0)))) {
    if (item.state != outbox::State::merged) continue;
    ++merged;
    CHECK(item.digest == "digest.1");
    CHECK(item.ended == instant(july_14 + 9));
  }
  CHECK(merged == 3);
  CHECK(must(store.deliveries(instant(0))).size() == 5);
}

TEST_CASE("a letter's life and the line are kept together", "[store]") {
  const Folder folder;
  std::int64_t id = 0;
  {
    Store store = open(writer(folder));
    CHECK(must(store.line()) == outbox::Line{});
    must(store.save(decision(1)));
    outbox::Item item = must(store.letters_open())[1];
    id = item.id;
    item.state = outbox::State::in_doubt;
    item.attempts = 2;
    item.doubts = 1;
    item.next_try = instant(july_14 + 600);
    item.first_try = instant(july_14 + 5);
    item.answer = "no answer after the last dot";
    must(store.update(item, {3, instant(july_14 + 700), instant(july_14), "login refused"}));
    outbox::Item changed = item;
    changed.letter.subject = "another";  // the words of a stored letter never change
    must(store.update(changed, {3, instant(july_14 + 700), std::nullopt, ""}));
  }
  Store store = open(writer(folder));
  const auto found = must(store.letter(id));
  REQUIRE(found);
  outbox::Item want = decision(1).letters[1];
  want.state = outbox::State::in_doubt;
  want.attempts = 2;
  want.doubts = 1;
  want.next_try = instant(july_14 + 600);
  want.first_try = instant(july_14 + 5);
  want.answer = "no answer after the last dot";
  CHECK(same(*found, want));
  CHECK(must(store.line()) == outbox::Line{3, instant(july_14 + 700), std::nullopt, ""});
  CHECK_FALSE(must(store.letter(99)));
  outbox::Item nobody = want;
  nobody.id = 99;
  const Outcome refused = store.update(nobody, {9, std::nullopt, std::nullopt, "x"});
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().why == "there is no letter 99");
  CHECK(must(store.line()).failures == 3);  // the line was not kept either
}

TEST_CASE("marked as seen at one level of one episode", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  Decision made;
  made.said = {said("a", 1, Level::moderate), said("a", 2, Level::severe),
               said("b", 3, Level::severe)};
  must(store.save(made));
  CHECK(must(store.seen_version()) == 0);
  must(store.mark_seen("a", Level::severe));
  CHECK(must(store.seen_version()) == 1);
  const auto entries = must(store.said(instant(0)));
  CHECK_FALSE(entries[0].seen);
  CHECK(entries[1].seen);
  CHECK_FALSE(entries[2].seen);
  CHECK_FALSE(store.mark_seen("a", Level::extreme));
  CHECK_FALSE(store.mark_seen("c", Level::severe));
  CHECK(must(store.seen_version()) == 1);  // nothing was changed
  must(open(writer(folder)).mark_seen("b", Level::severe));
  CHECK(must(store.seen_version()) == 2);  // by another connection too
}

TEST_CASE("a decision is kept whole or not at all", "[store]") {
  // Each table in turn refuses a row: whatever went in before it must be gone.
  const std::string table = GENERATE("hour", "said", "letter", "note");
  CAPTURE(table);
  const Folder folder;
  Store store = open(writer(folder));
  must(store.save(decision(1)));
  const std::string before = must(store.fingerprint());
  Raw(folder.database())
      .run("CREATE TRIGGER refuse BEFORE INSERT ON " + table +
           " BEGIN SELECT RAISE(ABORT, 'refused here'); END");
  const Outcome refused = store.save(decision(5));
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().why == "refused here");
  CHECK(refused.failure().on_what == folder.database());
  CHECK_FALSE(refused.failure().what_next.empty());
  CHECK_FALSE(store.out_of_space());
  CHECK(must(store.fingerprint()) == before);
  CHECK(must(store.said(instant(0))).size() == 1);
  CHECK(must(store.letters_open()).size() == 2);
  CHECK(must(store.note("last_hour")) == "1");
  Raw(folder.database()).run("DROP TRIGGER refuse");
  must(store.save(decision(5)));  // and the store is usable
  CHECK(must(store.letters_open()).size() == 4);
}

TEST_CASE("the diary: added once, sorted, counted, removed by number", "[store]") {
  const Folder folder;
  Store store = open(writer(folder));
  Store command = open(writer(folder));  // another process's view
  CHECK(must(store.diary_version()) == 0);
  const auto late = must(command.add(irrigation("north bench", 7200)));
  const auto early = must(command.add(irrigation("north bench", 0)));
  CHECK(must(store.diary_version()) == 2);
  CHECK(must(store.add(irrigation("north bench", 0))) == early);
  CHECK(must(store.diary_version()) == 2);
  field::Irrigation other = irrigation("north bench", 0);
  other.set = 3;
  other.depth.reset();
  must(store.add(other));
  must(store.add(irrigation("creek", 0)));

  field::Scouting note;
  note.field = "north bench";
  note.date = CivilDay(std::chrono::days(20650));
  note.stage = 60;
  note.began = true;
  note.seed_set = 14;
  note.seed_looked = 20;
  note.note = "first anthers, “yellow”";
  const auto first = must(store.add(note));
  CHECK(must(store.add(note)) == first);
  field::Scouting second = note;
  second.stage.reset();
  second.disease = false;
  second.began = false;
  second.seed_set.reset();
  second.seed_looked.reset();
  second.note.clear();
  must(store.add(second));
  field::Scouting before = note;
  before.date -= std::chrono::days(3);
  must(store.add(before));

  const field::Diary diary = must(store.diary("north bench"));
  REQUIRE(diary.irrigations.size() == 3);
  CHECK(diary.irrigations[0].id == early);
  CHECK(diary.irrigations[1].set == 3);
  CHECK_FALSE(diary.irrigations[1].depth);
  CHECK(diary.irrigations[2].id == late);
  CHECK(diary.irrigations[2].same_as(irrigation("north bench", 7200)));
  REQUIRE(diary.notes.size() == 3);
  CHECK(diary.notes[0].same_as(before));
  CHECK(diary.notes[1].same_as(note));  // of one date, the last entered is last
  CHECK(diary.notes[2].same_as(second));
  CHECK(diary.notes[2].disease == false);

  CHECK(must(store.diary_version()) == 7);
  must(store.remove_irrigation(late));
  must(command.remove_scouting(first));
  CHECK(must(store.diary_version()) == 9);
  const Outcome gone = store.remove_irrigation(late);
  REQUIRE_FALSE(gone);
  CHECK(gone.failure().on_what == "number " + std::to_string(late));
  CHECK_FALSE(store.remove_scouting(first));
  CHECK(must(store.diary_version()) == 9);
  CHECK(must(store.add(irrigation("creek", 60))) > late);  // numbers are never used again
}
