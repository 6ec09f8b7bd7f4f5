// Sensors that do not move (science §3, the row "stuck").
#include <cmath>

#include "readings.hpp"

using namespace readings;

namespace {

constexpr Seconds ten{600};

int stuck(const std::vector<Hour>& list, Element element) {
  return flagged(list, element, Verdict::suspect, Reason::stuck);
}

/// `count` readings ten minutes apart.
template <class Make>
std::vector<Sample> series(int count, Make make) {
  std::vector<Sample> samples;
  for (int i = 0; i < count; ++i) samples.push_back(make(i));
  for (int i = 0; i < count; ++i) samples[static_cast<std::size_t>(i)].time = start + i * ten;
  return samples;
}

/// The humidity of an ordinary day: it never rests for long.
double moving_humidity(int i) { return 58.0 + 38.0 * std::sin(i * 0.0436); }

}  // namespace

TEST_CASE("a frozen thermometer in changing air is suspect from 6 h on") {
  const auto frozen = [](int i) { return reading(start, 21.3, moving_humidity(i)); };
  // 37 values span exactly 6 h: the last of them ends the stretch and is the first suspect.
  CHECK(stuck(all_hours(series(36, frozen), station_every(ten)), Element::temperature) == 0);
  CHECK(stuck(all_hours(series(37, frozen), station_every(ten)), Element::temperature) == 1);
  const auto list = all_hours(series(72, frozen), station_every(ten));
  CHECK(stuck(list, Element::temperature) == 36);
  CHECK(list.size() == 12);
  CHECK(list[5].flags.empty());
  REQUIRE(list[6].flags.size() == 1);
  CHECK(list[6].flags[0].count == 6);
  CHECK(list[6].flags[0].at == start + 6h);
  CHECK(list[6].n == 6);  // used all the same
}

TEST_CASE("a steady temperature in steady air is believed") {
  const auto steady = [](int i) { return reading(start, 21.3, 60.0 + 4.9 * (i % 2)); };
  CHECK(flagged(all_hours(series(144, steady), station_every(ten))) == 0);
  const auto no_humidity = [](int) { return reading(start, 21.3); };
  CHECK(flagged(all_hours(series(144, no_humidity), station_every(ten))) == 0);
}

TEST_CASE("a tenth of a degree is movement") {
  const auto ticking = [](int i) {
    return reading(start, i % 30 == 0 ? 21.4 : 21.3, moving_humidity(i));
  };
  CHECK(stuck(all_hours(series(144, ticking), station_every(ten)), Element::temperature) == 0);
  const auto creeping = [](int i) {
    return reading(start, i % 30 == 0 ? 21.39 : 21.3, moving_humidity(i));
  };
  CHECK(stuck(all_hours(series(144, creeping), station_every(ten)), Element::temperature) == 108);
}

TEST_CASE("two small steps add up to movement") {
  // 21.30, 21.35, 21.40: the last minus the first is 0.1 in decimal, a hair less in binary.
  const auto drifting = [](int i) {
    return reading(start, (2130 + 5 * (i / 18)) / 100.0, moving_humidity(i));
  };
  CHECK(stuck(all_hours(series(54, drifting), station_every(ten)), Element::temperature) == 0);
}

TEST_CASE("a frozen hygrometer is suspect from 12 h on") {
  const auto frozen = [](int i) { return reading(start, 15.0 + 5.0 * std::sin(i * 0.04), 67.0); };
  CHECK(stuck(all_hours(series(72, frozen), station_every(ten)), Element::humidity) == 0);
  CHECK(stuck(all_hours(series(73, frozen), station_every(ten)), Element::humidity) == 1);
  CHECK(stuck(all_hours(series(144, frozen), station_every(ten)), Element::humidity) == 72);
  const auto moving = [](int i) {
    return reading(start, 15.0 + 5.0 * std::sin(i * 0.04), i % 70 == 0 ? 68.0 : 67.0);
  };
  CHECK(stuck(all_hours(series(144, moving), station_every(ten)), Element::humidity) == 0);
}

TEST_CASE("rain or fog may hold a hygrometer at its top for days") {
  // Common practice: five days of rain at 97 %, the air between 12 and 16 °C by night and day.
  const auto rain = [](int i) { return reading(start, 14.0 + 2.0 * std::sin(i * 0.0436), 97.0); };
  CHECK(flagged(all_hours(series(720, rain), station_every(ten))) == 0);
  const auto fog = [](int i) { return reading(start, 11.0 + 0.5 * std::sin(i * 0.3), 99.0); };
  CHECK(flagged(all_hours(series(720, fog), station_every(ten))) == 0);
  // A swing of 5.9 °C is no evidence yet; a humidity without a thermometer beside it never is.
  const auto mild = [](int i) { return reading(start, 14.0 + 2.95 * std::sin(i * 0.0436), 97.0); };
  CHECK(flagged(all_hours(series(720, mild), station_every(ten))) == 0);
  const auto alone = [](int) { return reading(start, std::nullopt, 97.0); };
  CHECK(flagged(all_hours(series(720, alone), station_every(ten))) == 0);
}

TEST_CASE("a hygrometer stuck at 97 % is found in dry sunny weather after a day") {
  // 12 to 28 °C: saturated air of the morning would be at 37 % by afternoon (FAO-56 eq. 11).
  const auto sunny = [](int i) { return reading(start, 20.0 - 8.0 * std::cos(i * 0.0436), 97.0); };
  CHECK(stuck(all_hours(series(144, sunny), station_every(ten)), Element::humidity) == 0);
  CHECK(stuck(all_hours(series(145, sunny), station_every(ten)), Element::humidity) == 1);
  CHECK(stuck(all_hours(series(720, sunny), station_every(ten)), Element::humidity) == 576);
  // It may come after days of rain: found within a day of the first swing.
  const auto clears = [](int i) {
    return reading(start, i < 432 ? 14.0 : 20.0 - 6.0 * std::cos((i - 432) * 0.0436), 97.0);
  };
  const auto list = all_hours(series(576,
                                     [&](int i) {
                                       auto sample = clears(i);
                                       if (i < 432 && i % 2 == 0)
                                         sample.temperature = Celsius(14.3);
                                       return sample;
                                     }),
                              station_every(ten));
  CHECK(stuck(list, Element::humidity) > 72);  // half of that day
  for (const Hour& hour : list) {
    if (hour.start < hour_of(start + 72h)) CHECK(hour.flags.empty());
  }
}

TEST_CASE("a logger that repeats one reading of a wet night is found after a day") {
  const auto frozen = [](int) { return reading(start, 11.3, 98.0); };
  CHECK(stuck(all_hours(series(144, frozen), station_every(ten)), Element::humidity) == 0);
  CHECK(stuck(all_hours(series(145, frozen), station_every(ten)), Element::humidity) == 1);
}

TEST_CASE("below 95 % half a day is enough") {
  const auto fog = [](int i) { return reading(start, 11.0 + 0.5 * std::sin(i * 0.3), 99.0); };
  // Not throughout at 95 %: no fog.
  const auto damp = [](int i) {
    return reading(start, 11.0 + 0.5 * std::sin(i * 0.3), i < 20 ? 94.9 : 95.5);
  };
  CHECK(stuck(all_hours(series(73, damp), station_every(ten)), Element::humidity) == 1);
  CHECK(stuck(all_hours(series(73, fog), station_every(ten)), Element::humidity) == 0);
}

TEST_CASE("a hole in the data starts the stretch anew") {
  auto samples = series(60, [](int i) { return reading(start, 21.3, moving_humidity(i)); });
  samples.erase(samples.begin() + 20, samples.begin() + 30);  // 1 h 50 min without a value
  const auto list = all_hours(samples, station_every(ten));
  CHECK(stuck(list, Element::temperature) == 0);
}

TEST_CASE("an hourly station can be stuck") {
  std::vector<Sample> samples;
  for (int i = 0; i < 12; ++i) samples.push_back(reading(start + i * 1h, 18.0, 40.0 + 3.0 * i));
  CHECK(stuck(all_hours(samples, station_every(3600s)), Element::temperature) == 6);
}

TEST_CASE("a spike does not free a stuck thermometer") {
  auto samples = series(40, [](int i) { return reading(start, 21.3, moving_humidity(i)); });
  samples[20].temperature = Celsius(35.0);
  const auto list = all_hours(samples, station_every(ten));
  CHECK(flagged(list, Element::temperature, Verdict::wrong, Reason::spike) == 1);
  CHECK(stuck(list, Element::temperature) == 4);
}
