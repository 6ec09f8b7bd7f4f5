// Silent and doubtful stations: when an episode opens, rises, falls and closes.
#include "core/alerts/stations.hpp"

#include <cstdio>

#include "support/catch.hpp"
#include "tale.hpp"

using namespace tale;

namespace {

const Calendar pacific = Calendar::fixed(Seconds{-7 * 3600}, "summer");  // 22:00 is 05:00 UTC
constexpr double never = 1e6;

StationWatch bench() {
  StationWatch watch;
  watch.station = "bench";
  watch.calendar = &pacific;
  return watch;
}

std::vector<Span> span(double from, double to) { return {Span{at(from), at(to)}}; }

// Hours of farm time on 1 July and after.
double farm(double hour) { return hour + 7; }

std::string told(const std::vector<Episode>& episodes) {
  std::string text;
  for (const Episode& e : episodes) {
    for (const Change& c : e.changes) {
      const double hour = static_cast<double>((c.at - at(7)).count()) / 3600.0;
      char line[96];
      std::snprintf(line, sizeof line, "%s %s@%g ", name_of(c.phase), risk::name_of(c.level), hour);
      text += line;
    }
    text += "| ";
  }
  return text;
}

std::string silent(double last, double back, const std::vector<Span>& window,
                   const std::vector<Span>& watched, double now) {
  Silence gap{at(farm(last)), std::nullopt};
  if (back < never) gap.back = at(farm(back));
  return told(silences(bench(), std::vector<Silence>{gap}, window, watched, at(farm(now))));
}

const std::vector<Span> always = span(-10000, 10000);

}  // namespace

TEST_CASE("patience: the settings' wish, at least three intervals and what a batch adds") {
  StationWatch watch = bench();
  CHECK(patience_of(watch) == Seconds{3600});
  watch.interval = Seconds{3600};
  watch.arrives_every = Seconds{3600};
  CHECK(patience_of(watch) == Seconds{3 * 3600});
  watch.interval = Seconds{300};
  watch.arrives_every = Seconds{6 * 3600};
  // A wish that cannot be: three lost readings and the wait for the next batch come first.
  CHECK(patience_of(watch) == Seconds{3 * 300 + 6 * 3600 - 300});
  // silent_after says how long nothing may come, and the settings want it longer than a batch: the
  // batch must not be waited for twice.
  watch.silent_after = Seconds{8 * 3600};
  CHECK(patience_of(watch) == Seconds{8 * 3600});
}

TEST_CASE("gaps are longer than the patience; the newest sample begins a silence of its own") {
  CHECK(silences_from({}, Seconds{3600}).empty());
  const std::vector<Instant> times{at(3), at(0), at(1), at(1), at(6.5)};
  const std::vector<Silence> expected{{at(1), at(3)}, {at(3), at(6.5)}, {at(6.5), std::nullopt}};
  CHECK(silences_from(times, Seconds{3600}) == expected);
  CHECK(silences_from(times, Seconds{2 * 3600}).size() == 2);
}

TEST_CASE("a silence by day opens when the patience ends and closes when a sample is back") {
  CHECK(silent(9, never, {}, always, 9.99).empty());
  CHECK(silent(9, never, {}, always, 10) == "opened Moderate@10 | ");
  CHECK(silent(9, 12, {}, always, 11) ==
        "opened Moderate@10 | ");  // what is back later is not known
  CHECK(silent(9, 12, {}, always, 12) == "opened Moderate@10 closed none@12 | ");
  CHECK(silent(9, 10, {}, always, 20).empty());
  const auto episodes =
      silences(bench(), std::vector<Silence>{{at(16), at(19.5)}}, {}, always, at(30));
  REQUIRE(episodes.size() == 1);
  CHECK(episodes[0].kind == Kind::no_data);
  CHECK(episodes[0].subject == "bench");
  CHECK(episodes[0].start == at(16));
  CHECK(episodes[0].changes[0].figure == 1.0);
  CHECK(episodes[0].changes[1].figure == 3.5);
  CHECK(episodes[0].closed == at(19.5));
  CHECK(episodes[0].peak == Level::moderate);
  CHECK(episodes[0].level == Level::none);
}

TEST_CASE("patience may be counted from later than the last sample; the silence begins with it") {
  const Silence gap{at(farm(8)), std::nullopt, at(farm(12))};
  const auto by = [&](double hour) {
    return silences(bench(), std::vector{gap}, {}, always, at(farm(hour)));
  };
  CHECK(by(12.9).empty());
  CHECK(told(by(13)) == "opened Moderate@13 | ");
  CHECK(by(13)[0].start == at(farm(8)));
  const Silence earlier{at(farm(8)), std::nullopt, at(farm(2))};
  CHECK(told(silences(bench(), std::vector{earlier}, {}, always, at(farm(9)))) ==
        "opened Moderate@9 | ");
}

TEST_CASE("a silence at night waits until six in the morning") {
  CHECK(silent(21, never, {}, always, 29).empty());
  CHECK(silent(21, never, {}, always, 30) == "opened Moderate@30 | ");  // 22:00 is night
  CHECK(silent(20.9, never, {}, always, 30) == "opened Moderate@21.9 | ");
  CHECK(silent(26, 29.9, {}, always, 40).empty());
  CHECK(silent(26, 30, {}, always, 40).empty());
  CHECK(silent(29, never, {}, always, 40) == "opened Moderate@30 | ");  // 06:00 is day
}

TEST_CASE("severe inside a flowering window, rising when it opens and falling when it closes") {
  CHECK(silent(9, 12, span(farm(0), farm(48)), always, 50) == "opened Severe@10 closed none@12 | ");
  CHECK(silent(9, never, span(farm(24), farm(96)), always, 200) ==
        "opened Moderate@10 raised Severe@30 lowered Moderate@96 | ");
  CHECK(silent(9, never, span(farm(24), farm(28)), always, 200) == "opened Moderate@10 | ");
  // two fields in flower, one after the other
  std::vector<Span> two = span(farm(0), farm(40));
  two.push_back(Span{at(farm(30)), at(farm(60))});
  CHECK(silent(9, never, two, always, 200) == "opened Severe@10 lowered Moderate@60 | ");
}

TEST_CASE("a station is watched only while a field needs it") {
  CHECK(silent(9, never, {}, {}, 100).empty());
  CHECK(silent(9, never, {}, span(farm(-100), farm(10)), 100).empty());
  const auto harvest = silences(bench(), std::vector<Silence>{{at(farm(9)), at(farm(90))}}, {},
                                span(farm(-100), farm(48)), at(farm(100)));
  CHECK(told(harvest) == "opened Moderate@10 closed none@48 | ");
  CHECK(harvest[0].changes.back().detail == season_over);
  // silent since before the sowing: the first day of the season says so
  const auto sown = silences(bench(), std::vector<Silence>{{at(farm(9)), std::nullopt}}, {},
                             span(farm(24), farm(2000)), at(farm(100)));
  CHECK(told(sown) == "opened Moderate@30 | ");
  CHECK(sown[0].start == at(farm(24)));
  CHECK(sown[0].changes[0].figure == 21.0);
}

namespace {
std::vector<FailingHour> hours_of(const std::string& check, const std::string& marks) {
  std::vector<FailingHour> hours;  // x fails, . is well, _ has no data
  for (std::size_t i = 0; i < marks.size(); ++i) {
    hours.push_back(FailingHour{hour_of(at(farm(static_cast<double>(i)))), check, marks[i] == 'x',
                                marks[i] != '_'});
  }
  return hours;
}
std::string doubt(const std::string& marks, const std::vector<Span>& window = {}) {
  return told(
      doubtful(bench(), hours_of("temperature stuck", marks), window, always, at(farm(500))));
}
}  // namespace

TEST_CASE("six failing hours with data open, a day of good ones closes") {
  const std::string day(24, '.');
  CHECK(doubt("xxxxx.xxxxx").empty());
  CHECK(doubt("xxxxxx") == "opened none@6 | ");
  CHECK(doubt("..xxxxxx") == "opened none@8 | ");
  CHECK(doubt("xxx__xxx") == "opened none@8 | ");  // hours without data count neither way
  CHECK(doubt("xxxxxx" + day.substr(1)) == "opened none@6 | ");
  CHECK(doubt("xxxxxx.....x" + day) == "opened none@6 closed none@36 | ");
  CHECK(doubt("xxxxxx......___......" + day.substr(12)) == "opened none@6 closed none@33 | ");
  CHECK(doubt("xxxxxx" + std::string(30, '_')) == "opened none@6 | ");  // silence mends nothing
  CHECK(doubt("xxxxxx" + day + "xxxxxx") == "opened none@6 closed none@30 | opened none@36 | ");
}

TEST_CASE("what fails every night and passes by day is one episode and one letter") {
  // A humidity above 102 % from eight in the evening to six in the morning, for twelve nights.
  std::string marks;
  for (int night = 0; night < 12; ++night) marks += std::string(14, '.') + std::string(10, 'x');
  CHECK(doubt(marks) == "opened none@20 | ");
  const auto hours = hours_of("above 102 %", marks);
  Service service;
  std::string heard;
  for (double hour = 0; hour <= 288; hour += 1) {
    const std::vector<FailingHour> known(hours.begin(), hours.begin() + static_cast<int>(hour));
    const auto episodes =
        doubtful(bench(), known, span(farm(200), farm(900)), always, at(farm(hour)));
    for (const Telling& t : service.tick(episodes, at(farm(hour)))) heard += line(t, hour);
  }
  // Once outside the window, once more at its opening, then the usual reminders.
  CHECK(heard ==
        "opened none@20 raised Moderate@200 reminder Moderate@224 reminder Moderate@248 "
        "reminder Moderate@272 ");
}

TEST_CASE("a fault that comes and goes is told once in seven days outside the window") {
  // Six hours of failing every third day, for thirty days.
  std::string marks;
  for (int i = 0; i < 10; ++i) marks += std::string(66, '.') + "xxxxxx";
  const auto hours = hours_of("temperature stuck", marks);
  Service service;
  std::string heard;
  for (double hour = 0; hour <= 726; hour += 1) {
    const auto so_far = std::min(hours.size(), static_cast<std::size_t>(hour));
    const std::vector<FailingHour> known(hours.begin(),
                                         hours.begin() + static_cast<std::ptrdiff_t>(so_far));
    const auto episodes = doubtful(bench(), known, {}, always, at(farm(hour)));
    for (const Telling& t : service.tick(episodes, at(farm(hour)))) heard += line(t, hour);
  }
  CHECK(heard == "opened none@78 opened none@294 opened none@510 opened none@726 ");  // 06:00
}

TEST_CASE("that readings are back is told by day") {
  Service service;
  service.policy.calendar = &pacific;
  std::string heard;
  for (double hour = 12; hour <= 40; hour += 1) {
    std::vector<Silence> gaps{{at(farm(12)), std::nullopt}};
    if (hour >= 23) gaps[0].back = at(farm(23));  // at eleven at night
    const auto episodes = silences(bench(), gaps, {}, always, at(farm(hour)));
    for (const Telling& t : service.tick(episodes, at(farm(hour)))) {
      heard += line(t, hour);
      if (t.saying == Saying::ended) CHECK(t.about == at(farm(23)));  // the true time is kept
    }
  }
  CHECK(heard == "opened Moderate@13 ended none@30 ");
}

TEST_CASE("a silence that began and ended in one night is not told; two of a night say one thing") {
  // Silent from one to four at night, and seen by every tick: no word of it, then or at six.
  const auto heard_of = [](const std::vector<std::pair<double, double>>& silent) {
    Service service;
    service.policy.calendar = &pacific;
    std::string heard;
    for (double hour = 12; hour <= 60; hour += 0.25) {
      std::vector<Instant> samples;
      for (double t = 0; t <= hour; t += 0.25) {
        const bool gone = std::any_of(silent.begin(), silent.end(), [&](const auto& gap) {
          return t > gap.first && t < gap.second;
        });
        if (!gone) samples.push_back(at(farm(t)));
      }
      const auto gaps = silences_from(samples, patience_of(bench()));
      const auto episodes = silences(bench(), gaps, {}, always, at(farm(hour)));
      for (const Telling& t : service.tick(episodes, at(farm(hour)))) heard += line(t, hour);
    }
    return heard;
  };
  CHECK(heard_of({{25, 28}}).empty());
  CHECK(heard_of({{22, 30}}).empty());
  // Told in the evening, back at eleven: the good news waits for six.
  CHECK(heard_of({{20, 23}}) == "opened Moderate@21 ended none@30 ");
  // ... and is not said when at six the station is silent again; one "back" ends both.
  CHECK(heard_of({{20, 23}, {26, 33}}) == "opened Moderate@21 opened Moderate@30 ended none@33 ");
  // Silent again for a while in the same night only: it is back at six.
  CHECK(heard_of({{20, 23}, {26, 28}}) == "opened Moderate@21 ended none@30 ");
}

TEST_CASE("a doubtful sensor is Moderate in the window") {
  CHECK(doubt("xxxxxx" + std::string(24, '.'), span(farm(0), farm(100))) ==
        "opened Moderate@6 closed none@30 | ");
  CHECK(doubt("xxxxxx", span(farm(9), farm(20))) ==
        "opened none@6 raised Moderate@9 lowered none@20 | ");
  const auto episodes =
      doubtful(bench(), hours_of("temperature stuck", "xxxxxx"), {}, always, at(farm(6)));
  REQUIRE(episodes.size() == 1);
  CHECK(episodes[0].start == at(farm(0)));
  CHECK(episodes[0].changes[0].detail == "temperature stuck");
  CHECK_FALSE(episodes[0].changes[0].figure);
  CHECK(doubtful(bench(), hours_of("x", "xxxxxx"), {}, always, at(farm(5.9))).empty());
}

TEST_CASE("a sensor found doubtful at night is told of at six in the morning") {
  // Six hours from 18:00 are full at midnight; those from 16:00 at 22:00, which is night; those
  // from 15:00 at 21:00, which is day.
  CHECK(doubt(std::string(18, '.') + "xxxxxx") == "opened none@30 | ");
  CHECK(doubt(std::string(16, '.') + "xxxxxx") == "opened none@30 | ");
  CHECK(doubt(std::string(15, '.') + "xxxxxx") == "opened none@21 | ");
  CHECK(doubt(std::string(24, '.') + "xxxxxx") == "opened none@30 | ");  // 06:00 is day
  // A window that opens at midnight wakes nobody either.
  CHECK(doubt("......xxxxxx", span(farm(24), farm(90))) ==
        "opened none@12 raised Moderate@30 lowered none@90 | ");
  // What is known at a moment is what was said then: live and replay agree.
  const auto hours = hours_of("temperature stuck", std::string(18, '.') + "xxxxxx");
  CHECK(doubtful(bench(), hours, {}, always, at(farm(29.9))).empty());
  const auto morning = doubtful(bench(), hours, {}, always, at(farm(30)));
  REQUIRE(morning.size() == 1);
  CHECK(morning[0].start == at(farm(18)));  // the letter names when it began
  // No field needs it any more at six: nothing to tell.
  CHECK(doubtful(bench(), hours, {}, span(farm(-100), farm(28)), at(farm(40))).empty());
}

TEST_CASE("checks that fail together are one episode, in whatever order the hours come") {
  auto hours = hours_of("temperature stuck", "xxxxxx" + std::string(24, '.'));
  const auto more = hours_of("humidity stuck", "xxxxxxxxx" + std::string(24, '.'));
  hours.insert(hours.end(), more.begin(), more.end());
  const auto one = doubtful(bench(), hours, {}, always, at(farm(100)));
  CHECK(told(one) == "opened none@6 closed none@33 | ");
  CHECK(one[0].changes[0].detail == "humidity stuck; temperature stuck");
  std::reverse(hours.begin(), hours.end());
  CHECK(doubtful(bench(), hours, {}, always, at(farm(100))) == one);
}

TEST_CASE("a silent night in the flowering window reaches the reader at six, once") {
  Service service;
  std::string heard;
  for (double hour = 20; hour <= 40; hour += 1) {
    std::vector<Instant> samples;
    for (double t = 0; t <= 21 && t <= hour; t += 0.25) samples.push_back(at(farm(t)));
    if (hour >= 33) samples.push_back(at(farm(33)));
    const auto gaps = silences_from(samples, patience_of(bench()));
    const auto episodes = silences(bench(), gaps, span(farm(0), farm(900)), always, at(farm(hour)));
    for (const Telling& t : service.tick(episodes, at(farm(hour)))) heard += line(t, hour);
  }
  // the single sample of 33:00 is followed by silence again
  CHECK(heard == "opened Severe@30 ended none@33 opened Severe@34 ");
}
