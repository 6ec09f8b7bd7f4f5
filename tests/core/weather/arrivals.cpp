// What the ages of a station's readings on arrival say of its clock; ages and counts by hand.
#include "core/weather/arrivals.hpp"

#include "readings.hpp"

using namespace readings;
using weather::Arrival;
using weather::Arrivals;
using weather::ClockDoubt;
using How = ClockDoubt::How;

namespace {

constexpr Seconds five{300};

/// One arrival each `every` from `start` on, all of one age.
Arrivals arrivals_of(int count, Seconds every, Seconds age) {
  Arrivals arrivals;
  for (int n = 0; n < count; ++n) arrivals.came({start + n * every, age});
  return arrivals;
}

}  // namespace

TEST_CASE("a clock that is an hour behind is named after twelve hours and twelve arrivals") {
  const Seconds age{62 * 60};
  CHECK_FALSE(arrivals_of(144, five, age).doubt(start + 12h, five));        // 11 h 55 min
  CHECK_FALSE(arrivals_of(11, Seconds{2h}, age).doubt(start + 20h, five));  // too few
  const auto doubt = arrivals_of(145, five, age).doubt(start + 12h, five);
  REQUIRE(doubt);
  CHECK(*doubt == ClockDoubt{How::behind, age});
  CHECK(arrivals_of(12, Seconds{90min}, age).doubt(start + 17h, five));
}

TEST_CASE("one reading that came in time clears a clock, and is forgotten after a day") {
  Arrivals arrivals;
  arrivals.came({start, Seconds{20}});
  for (int n = 1; n <= 300; ++n) {
    const Instant at = start + n * five;
    arrivals.came({at, Seconds{62 * 60}});
    INFO(n);
    CHECK(arrivals.doubt(at, five).has_value() == (n >= 24 * 12));
  }
}

TEST_CASE("late is more than 30 minutes beyond the sampling interval") {
  const auto named = [](Seconds age, Seconds interval) {
    return arrivals_of(200, five, age).doubt(start + 16h, interval).has_value();
  };
  CHECK_FALSE(named(35min, five));
  CHECK(named(35min + 1s, five));
  CHECK_FALSE(named(90min, 1h));  // hourly values are up to an hour old by nature
  CHECK(named(91min, 1h));
}

TEST_CASE("a clock that runs ahead is named from two minutes on, when it always does") {
  CHECK_FALSE(arrivals_of(200, five, Seconds{-119}).doubt(start + 16h, five));
  const auto doubt = arrivals_of(200, five, Seconds{-4 * 60}).doubt(start + 16h, five);
  REQUIRE(doubt);
  CHECK(*doubt == ClockDoubt{How::ahead, Seconds{240}});
  Arrivals arrivals = arrivals_of(200, five, Seconds{-240});
  arrivals.came({start + 16h + 40min, Seconds{10}});
  CHECK_FALSE(arrivals.doubt(start + 16h + 41min, five));
}

TEST_CASE("rows that were refused as ahead are named where nothing else came in a day") {
  Arrivals arrivals;
  arrivals.came({start, Seconds{20}});
  arrivals.refused(start + 1h, 3, Seconds{3h});
  arrivals.refused(start + 2h, 1, Seconds{2h + 50min});
  CHECK(arrivals.any_refused());
  CHECK_FALSE(arrivals.doubt(start + 3h, five));  // one came, 3 h ago
  arrivals.refused(start + 25h, 2, Seconds{3h});
  const auto doubt = arrivals.doubt(start + 25h, five);
  REQUIRE(doubt);
  CHECK(*doubt == ClockDoubt{How::refused, Seconds{2h + 50min}});
  arrivals.forget_refused();
  CHECK_FALSE(arrivals.any_refused());
  CHECK_FALSE(arrivals.doubt(start + 25h, five));
}

TEST_CASE("arrivals need one place an hour, and those of a clock that stood ahead go") {
  Arrivals arrivals;
  for (int n = 0; n < 5000; ++n) arrivals.came({start + n * 60s, Seconds{5}});
  CHECK(arrivals.hours().size() <= 24);
  REQUIRE(arrivals.last());
  CHECK(*arrivals.last() == Arrival{start + 4999 * 60s, Seconds{5}});
  arrivals.came({start + 9000h, Seconds{5}});
  CHECK(arrivals.hours().size() == 1);
  arrivals.came({start + 84h, Seconds{5}});
  REQUIRE(arrivals.hours().size() == 1);
  CHECK(arrivals.hours().front().hour == hour_of(start + 84h));
  CHECK(Arrivals(arrivals.hours(), arrivals.last()) == arrivals);
  CHECK_FALSE(Arrivals{}.doubt(start, five));
}
