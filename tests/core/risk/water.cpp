// The soil water account against FAO-56 (Allen et al. 1998) and arithmetic by hand.
#include "core/risk/water.hpp"

#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::risk;

TEST_CASE("a full soil dries by its use and is filled by rain, the surplus drains") {
  WaterAccount account = open_account(160, 1.0);
  WaterDay day;
  day.stage = 65;  // roots 1.0 m: TAW 160 mm; Kc 1
  day.reference = Millimetre(6);
  for (int i = 1; i <= 10; ++i) {
    CHECK(*book_day(account, day) == 1.0);
    CHECK(account.depletion.value == Approx(6.0 * i));
  }
  // By hand: p = 0.55 + 0.04 · (5 − 6) = 0.51; 81.6 − 60 = 21.6 mm; 21.6/6 = 3 whole days.
  CHECK(*days_to_stress(account) == 3);
  day.rain = Millimetre(500);
  book_day(account, day);
  CHECK(account.depletion.value == Approx(6.0));
  day.rain = Millimetre(0);
  for (int i = 0; i < 60; ++i) book_day(account, day);
  CHECK(*book_day(account, day) < 0.2);
  CHECK(account.depletion < account.total());
  CHECK(*days_to_stress(account) == 0);
}

TEST_CASE("an unknown start stays unknown until water fills the root zone") {
  WaterAccount account = open_account(160, std::nullopt);
  WaterDay day;
  day.stage = 65;
  day.reference = Millimetre(5);
  CHECK_FALSE(book_day(account, day));
  CHECK_FALSE(days_to_stress(account));
  day.irrigation_unknown = true;  // says nothing about how much
  CHECK_FALSE(book_day(account, day));
  day.irrigation_unknown = false;
  day.irrigation = Millimetre(170);
  CHECK(*book_day(account, day) == 1.0);
  CHECK(days_to_stress(account));
  day.irrigation = Millimetre(0);
  day.irrigation_unknown = true;  // after days of drying it parts the accounts again
  for (int i = 0; i < 5; ++i) book_day(account, WaterDay{65, Millimetre(6), {}, {}, false});
  CHECK_FALSE(book_day(account, day));
}

TEST_CASE("an unknown start that only runs dry stays unknown, a known one is stressed") {
  WaterAccount unknown = open_account(160, std::nullopt);
  WaterAccount full = open_account(160, 1.0);
  const WaterDay day{65, Millimetre(6), {}, {}, false};
  for (int i = 0; i < 80; ++i) {
    book_day(unknown, day);
    book_day(full, day);
  }
  CHECK_FALSE(book_day(unknown, day));
  CHECK(*book_day(full, day) < 0.1);
  // A few sprinkler evenings do not make it known, filling the root zone does.
  CHECK_FALSE(book_day(unknown, WaterDay{65, Millimetre(6), {}, Millimetre(40), false}));
  CHECK(book_day(unknown, WaterDay{65, Millimetre(6), {}, Millimetre(200), false}));
}

TEST_CASE("soil that roots reach later brings what it held at sowing") {
  WaterAccount half = open_account(100, 0.5);
  WaterDay day;
  day.stage = 9;
  book_day(half, day);
  CHECK(half.depletion.value == Approx(10));  // 0.2 m · 100 mm/m · half
  day.stage = 60;
  book_day(half, day);
  CHECK(half.depletion.value == Approx(50));
}

TEST_CASE("an irrigation fills what is missing, and what is more drains") {
  WaterAccount account = open_account(160, 1.0);
  WaterDay day;
  day.stage = 65;
  day.reference = Millimetre(6);
  for (int i = 0; i < 5; ++i) book_day(account, day);  // 30 mm missing
  day.rain = Millimetre(4);
  const std::vector<std::optional<Millimetre>> depths{Millimetre(12.7), Millimetre(20)};
  const auto poured = pour(account, day, depths);
  // By hand: 30 − 4 = 26; 26 − 12.7 = 13.3; 13.3 − 20 = −6.7.
  REQUIRE(poured.size() == 2);
  CHECK(poured[0]->before.value == Approx(26));
  CHECK(poured[0]->after.value == Approx(13.3));
  CHECK(poured[0]->drained.value == Approx(0).margin(1e-9));
  CHECK(poured[1]->after.value == 0);
  CHECK(poured[1]->drained.value == Approx(6.7));
  day.irrigation = Millimetre(32.7);
  book_day(account, day);
  CHECK(account.missing()->value == Approx(6));  // the day's own use, as the account books it
  const std::vector<std::optional<Millimetre>> unknown{std::nullopt, Millimetre(5)};
  for (const auto& one : pour(account, day, unknown)) CHECK_FALSE(one);
  CHECK_FALSE(pour(open_account(160, std::nullopt), day, depths)[0]);
}

TEST_CASE("a thirsty canopy is warmer than the air, a watered one in dry air cooler") {
  // By hand: 2.5 − 1.9 · 2 = −1.3; −1.3 + 0.5 · 6.3 = 1.85.
  CHECK(canopy_minus_air(Kilopascal(2), 1.0).value == Approx(-1.3));
  CHECK(canopy_minus_air(Kilopascal(2), 0.5).value == Approx(1.85));
  CHECK(canopy_minus_air(Kilopascal(2), 0.0).value == Approx(5));
  CHECK(canopy_minus_air(Kilopascal(6), 1.0).value == -5);  // 2.5 − 11.4, clamped
}
