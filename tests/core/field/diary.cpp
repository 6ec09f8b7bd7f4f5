// The diary: order, sameness, and the words of stages (science §5).
#include "core/field/diary.hpp"

#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::field;

namespace {
Instant hour(int h) {
  return Instant(std::chrono::sys_days{std::chrono::July / 4 / 2026}) + h * one_hour;
}
CivilDay july(unsigned d) {
  return CivilDay(std::chrono::local_days(std::chrono::July / static_cast<int>(d) / 2026));
}
Irrigation set(int from, int to, int number) {
  Irrigation irrigation;
  irrigation.field = "north bench";
  irrigation.start = hour(from);
  irrigation.end = hour(to);
  irrigation.set = number;
  return irrigation;
}
}  // namespace

TEST_CASE("a stage is a word of the trade or a BBCH code") {
  CHECK(stage_from_word("emerged") == 9);
  CHECK(stage_from_word("buds") == 51);
  CHECK(stage_from_word("first-anthers") == 60);
  CHECK(stage_from_word("First Anthers") == 60);
  CHECK(stage_from_word("FULL_FLOWER") == 65);
  CHECK(stage_from_word(" flowers-done ") == 69);
  CHECK(stage_from_word("milk") == 75);
  CHECK(stage_from_word("dough") == 85);
  CHECK(stage_from_word("ripe") == 89);
  CHECK(stage_from_word("65") == 65);
  CHECK(stage_from_word("9") == 9);
  CHECK(stage_from_word("99") == 99);
  for (const char* refused : {"", "8", "100", "-60", "60.5", "60x", "x60", "first",
                              "first--anthers", "+60", "0x3C", "99999999999", "flower"}) {
    INFO(refused);
    CHECK_FALSE(stage_from_word(refused));
  }
}

TEST_CASE("every stage word reads back as its code") {
  for (int code = 9; code <= 99; ++code) CHECK(stage_from_word(word_for_stage(code)) == code);
  CHECK(word_for_stage(60) == "first-anthers");
  CHECK(word_for_stage(61) == "61");
}

TEST_CASE("the same irrigation is known again whatever its number in the store") {
  Irrigation a = set(3, 6, 1), b = a;
  b.id = 17;
  CHECK(a.same_as(b));
  a.depth = Millimetre(12.7);
  CHECK_FALSE(a.same_as(b));
  b.depth = Millimetre(0.5 * 25.4);
  CHECK(a.same_as(b));
  b.depth = Millimetre(12.8);
  CHECK_FALSE(a.same_as(b));
  b = a;
  b.end += Seconds{60};
  CHECK_FALSE(a.same_as(b));
  b = a;
  b.method = Method::drip;
  CHECK_FALSE(a.same_as(b));
  b = a;
  b.set = 2;
  CHECK_FALSE(a.same_as(b));
  b = a;
  b.field = "river flat";
  CHECK_FALSE(a.same_as(b));
}

TEST_CASE("the same scouting note is known again") {
  Scouting a;
  a.field = "north bench";
  a.date = july(4);
  a.stage = stage::full_flower;
  Scouting b = a;
  b.id = 3;
  CHECK(a.same_as(b));
  b.began = true;
  CHECK_FALSE(a.same_as(b));
  a.stage = b.stage = stage::first_anthers;  // it always began that day
  CHECK(a.same_as(b));
  b.disease = false;  // "looked, none seen" is not "did not look"
  CHECK_FALSE(a.same_as(b));
  b.disease.reset();
  b.seed_set = 14;
  CHECK_FALSE(a.same_as(b));
}

TEST_CASE("a diary in order: irrigations by time, notes of a day as they were entered") {
  Diary diary;
  diary.irrigations = {set(9, 12, 1), set(3, 7, 1), set(3, 6, 2), set(3, 6, 1)};
  for (const unsigned day : {6U, 4U, 6U, 4U}) {
    Scouting note;
    note.date = july(day);
    note.note = std::to_string(diary.notes.size());
    diary.notes.push_back(note);
  }
  sort(diary);
  CHECK(diary.irrigations[0].same_as(set(3, 6, 1)));
  CHECK(diary.irrigations[1].same_as(set(3, 6, 2)));
  CHECK(diary.irrigations[2].same_as(set(3, 7, 1)));
  CHECK(diary.irrigations[3].same_as(set(9, 12, 1)));
  std::string order;
  for (const Scouting& note : diary.notes) order += note.note;
  CHECK(order == "1302");
}

TEST_CASE("the words of irrigation") {
  CHECK(std::string(name_of(Method::none)) == "none");
  CHECK(std::string(name_of(Method::overhead)) == "overhead");
  CHECK(std::string(name_of(Method::drip)) == "drip");
  CHECK(std::string(name_of(Method::furrow)) == "furrow");
}
