// From judged values to hours; see gather in hour.hpp. One pass in time order.
// This file must not know what an hour is used for.
#include <algorithm>
#include <chrono>
#include <cmath>
#include <cstddef>
#include <tuple>

#include "core/failures/result.hpp"
#include "core/weather/evaporation.hpp"
#include "core/weather/hour.hpp"
#include "core/weather/judge.hpp"
#include "core/weather/rain.hpp"
#include "core/weather/whole_degrees.hpp"

namespace antherd::weather {
namespace {

constexpr double dry_air = 50.0;        // %, mean of the hour
constexpr double rain_to_wonder = 0.5;  // mm in the hour

static_assert(longest_rain_gap + one_hour <= context_before &&
              longest_rain_gap <= hours_touched_after);

double rounded(double value) { return std::round(value * 1e6) / 1e6; }

/// Sum, count and extremes of one element in one hour.
struct Tally {
  double sum = 0.0, least = 0.0, most = 0.0;
  int n = 0;

  void add(double value) {
    least = n == 0 ? value : std::min(least, value);
    most = n == 0 ? value : std::max(most, value);
    sum += value;
    ++n;
  }
  double mean() const { return rounded(sum / n); }
};

/// The flags of one hour while it is made: few, so a list is searched.
class Flags {
 public:
  void raise(Element element, Verdict verdict, Reason reason, Instant at, double value,
             int count = 1) {
    for (Flag& flag : list_) {
      if (flag.element != element || flag.verdict != verdict || flag.reason != reason) continue;
      flag.count += count;
      return;
    }
    list_.push_back(Flag{element, verdict, reason, count, at, value});
  }
  void raise_marks(const Judged& judged) {
    if (judged.marks == 0) return;
    for (const auto& [mark, verdict, reason] : meanings) {
      if ((judged.marks & mark) != 0) {
        raise(judged.element, verdict, reason, judged.time, judged.value);
      }
    }
  }
  std::vector<Flag> take() {
    std::sort(list_.begin(), list_.end(), [](const Flag& a, const Flag& b) {
      return std::tie(a.element, a.reason, a.verdict) < std::tie(b.element, b.reason, b.verdict);
    });
    std::vector<Flag> taken = list_;
    list_.clear();
    return taken;
  }

 private:
  struct Meaning {
    Marks mark;
    Verdict verdict;
    Reason reason;
  };
  static constexpr Meaning meanings[] = {
      {mark_out_of_range, Verdict::wrong, Reason::out_of_range},
      {mark_dew_above_temperature, Verdict::wrong, Reason::dew_above_temperature},
      {mark_spike_wrong, Verdict::wrong, Reason::spike},
      {mark_spike_suspect, Verdict::suspect, Reason::spike},
      {mark_unconfirmed, Verdict::suspect, Reason::unconfirmed},
      {mark_stuck, Verdict::suspect, Reason::stuck},
      {mark_above_saturation, Verdict::suspect, Reason::above_saturation},
  };
  std::vector<Flag> list_;
};

/// One hour while it is made.
class HourMaker {
 public:
  explicit HourMaker(const Station& station)
      : station_(station),
        expected_(station.interval > one_hour
                      ? 1.0
                      : 3600.0 / static_cast<double>(station.interval.count())) {}

  void add_temperature(const Judged& judged) {
    flags_.raise_marks(judged);
    if (judged.used()) temperature_.add(judged.value);
  }
  void add_humidity(const Judged& judged) {
    flags_.raise_marks(judged);
    if (!judged.used()) return;
    if (humidity_.n == 0) first_humidity_ = judged;
    humidity_.add(std::min(100.0, judged.value));
  }
  void add_fall(Instant at, Millimetre raw, const Fall& fall) {
    if (fall.wrong)
      return flags_.raise(Element::rain, Verdict::wrong, Reason::out_of_range, at, raw.value);
    rain_.add(fall.amount.value);
    if (!fall.across_gap) rain_for_wetness_ += fall.amount.value;
  }
  void add_others(const Sample& sample) {
    if (sample.wind) add_ranged(Element::wind, wind_, wind_range, sample.time, sample.wind->value);
    if (sample.solar) {
      add_ranged(Element::solar, solar_, solar_range, sample.time, sample.solar->value);
    }
    if (sample.wet_minutes) {
      add_ranged(Element::wetness, wet_, wet_minutes_range, sample.time, *sample.wet_minutes);
    }
  }
  /// The finished record; the maker is empty again.
  Hour take(HourStart start, bool whole_degrees) {
    Hour hour;
    hour.start = start;
    hour.whole_degrees = whole_degrees;
    put_air(hour);
    put_others(hour);
    if (hour.humidity && hour.humidity->value < dry_air && hour.rain_for_wetness &&
        hour.rain_for_wetness->value >= rain_to_wonder) {
      flags_.raise(Element::humidity, Verdict::suspect, Reason::rain_in_dry_air,
                   first_humidity_.time, first_humidity_.value, hour.n_humidity);
    }
    hour.flags = flags_.take();
    temperature_ = humidity_ = rain_ = wind_ = solar_ = wet_ = Tally{};
    rain_for_wetness_ = 0.0;
    return hour;
  }

 private:
  void add_ranged(Element element, Tally& tally, Range range, Instant at, double value) {
    if (range.holds(value)) return tally.add(std::max(0.0, value));
    flags_.raise(element, Verdict::wrong, Reason::out_of_range, at, value);
  }
  void put_air(Hour& hour) const {
    hour.n = temperature_.n;
    hour.n_humidity = humidity_.n;
    hour.coverage = std::min(1.0, hour.n / expected_);
    hour.humidity_coverage = std::min(1.0, hour.n_humidity / expected_);
    if (hour.n > 0) {
      hour.temperature = Celsius(temperature_.mean());
      hour.temperature_max = Celsius(temperature_.most);
      hour.temperature_min = Celsius(temperature_.least);
    }
    if (hour.n_humidity > 0) {
      hour.humidity = Percent(humidity_.mean());
      hour.humidity_max = Percent(humidity_.most);
      hour.humidity_min = Percent(humidity_.least);
    }
  }
  void put_others(Hour& hour) const {
    if (rain_.n > 0) {
      hour.rain = Millimetre(rounded(rain_.sum));
      hour.rain_for_wetness = Millimetre(rounded(rain_for_wetness_));
    }
    if (wind_.n > 0) {
      const auto at_2m = wind_at_2m(MetrePerSecond(wind_.sum / wind_.n), station_.wind_height);
      hour.wind = MetrePerSecond(rounded(at_2m.value));
    }
    if (solar_.n > 0) hour.solar = WattPerSquareMetre(solar_.mean());
    put_wetness(hour);
  }
  /// Minutes that never arrived are not dry ones: with less than 45 seen the hour is wet when those
  /// seen make it so, else the sensor said nothing.
  void put_wetness(Hour& hour) const {
    constexpr double minutes_to_know = 45.0, wet_for_sure = 30.0;
    if (wet_.n == 0) return;
    const Seconds each = station_.wetness_interval.value_or(std::min(station_.interval, one_hour));
    const double seen = wet_.n * static_cast<double>(each.count()) / 60.0;
    const double wet = std::min(60.0, rounded(wet_.sum));
    if (seen >= minutes_to_know || wet >= wet_for_sure) hour.wet_minutes = wet;
  }

  const Station& station_;
  double expected_;
  Tally temperature_, humidity_, rain_, wind_, solar_, wet_;
  double rain_for_wetness_ = 0.0;
  Judged first_humidity_;
  Flags flags_;
};

/// The judged value of sample `place`, if it has one; `cursor` moves through the series.
const Judged* at_sample(const Series& series, std::size_t& cursor, std::size_t place) {
  while (cursor < series.size() && series[cursor].sample < place) ++cursor;
  const bool found = cursor < series.size() && series[cursor].sample == place;
  return found ? &series[cursor] : nullptr;
}

/// Adds the hours of one span of time; `samples` hold it and its context.
void gather_span(std::span<const Sample> samples, const Station& station, HourStart from,
                 HourStart to, std::vector<Hour>& hours) {
  Series temperature = judge_temperature(samples);
  Series humidity = judge_humidity(samples, temperature);
  judge_stuck(temperature, humidity, station.interval);

  // A sample stamped at the end of its interval speaks of the time before.
  const Seconds shift = station.stamp == Stamp::end ? station.interval : Seconds{0};
  RainGauge gauge(station);
  WholeDegrees whole_degrees(temperature, shift);
  HourMaker maker(station);
  std::optional<HourStart> open;
  const auto close = [&] {
    if (open) hours.push_back(maker.take(*open, whole_degrees.in(*open)));
  };
  std::size_t next_temperature = 0, next_humidity = 0;
  for (std::size_t i = 0; i < samples.size(); ++i) {
    const Sample& sample = samples[i];
    const Instant time = sample.time - shift;
    if (time >= Instant(to)) break;
    const auto fall = sample.rain ? gauge.read(sample.time, *sample.rain) : Fall{};
    if (time < Instant(from)) continue;
    if (!open || time >= end_of(*open)) {
      close();
      open = hour_of(time);
    }
    if (const auto* value = at_sample(temperature, next_temperature, i)) {
      maker.add_temperature(*value);
    }
    if (const auto* value = at_sample(humidity, next_humidity, i)) maker.add_humidity(*value);
    if (sample.rain) maker.add_fall(sample.time, *sample.rain, fall);
    maker.add_others(sample);
  }
  close();
}

/// What is made at once: a long record needs no more memory than this and its context.
constexpr std::chrono::hours span_length{24 * 14};

/// The samples of [from, to), found by their time order.
std::span<const Sample> between(std::span<const Sample> samples, Instant from, Instant to) {
  const auto earlier = [](const Sample& sample, Instant time) { return sample.time < time; };
  const auto first = std::lower_bound(samples.begin(), samples.end(), from, earlier);
  return {first, std::lower_bound(first, samples.end(), to, earlier)};
}

}  // namespace

std::vector<Hour> gather(std::span<const Sample> samples, const Station& station, HourStart from,
                         HourStart to) {
  ANTHERD_CHECK(station.interval > Seconds{0});
  std::vector<Hour> hours;
  if (samples.empty()) return hours;
  // Only where there are samples: a caller may ask for all time.
  from = std::max(from, hour_of(samples.front().time - station.interval));
  to = std::min(to, hour_of(samples.back().time) + std::chrono::hours{1});
  while (from < to) {
    const HourStart next = std::min(to, from + span_length);
    gather_span(between(samples, Instant(from) - context_before, Instant(next) + context_after),
                station, from, next, hours);
    from = next;
  }
  return hours;
}

}  // namespace antherd::weather
