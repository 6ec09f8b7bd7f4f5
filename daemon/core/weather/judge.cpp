// Range, saturation, dew point and spike checks; see judge.hpp.
// This file must not know hours.
#include "core/weather/judge.hpp"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <cstddef>
#include <utility>

#include "core/failures/result.hpp"
#include "core/weather/air.hpp"

namespace antherd::weather {
namespace {

using namespace std::chrono_literals;

/// Decimal readings subtract to a hair above their decimal difference.
constexpr double hair = 1e-9;

/// A run of wild values could hand its verdicts on for ever, and an hour would depend on all the
/// past. In each such block of the clock the first value takes the one before it as its neighbour,
/// whatever that one's verdict.
constexpr Seconds chain_block{3 * 3600};

constexpr std::size_t none = static_cast<std::size_t>(-1);

/// How far `to` is from `from` as a multiple of the limit; nothing where there is no test.
std::optional<double> jump(const Judged& from, const Judged& to, const SpikeLimit& limits) {
  const Seconds apart = from.time < to.time ? to.time - from.time : from.time - to.time;
  const auto limit = limits.by_time(apart);
  if (!limit) return std::nullopt;
  const double difference = to.value - from.value;
  const double size = std::abs(difference);
  const double times = size > 2.0 * *limit + hair ? 3.0 : size > *limit + hair ? 1.5 : 0.0;
  return difference < 0.0 ? -times : times;
}

/// The marks of a value between two neighbours, either of which may be absent.
Marks spike_marks(const Judged& value, const Judged* earlier, const Judged* later,
                  const SpikeLimit& limit) {
  if (!earlier || std::abs(value.value - earlier->value) <= limit.least) return 0;
  const auto before = jump(*earlier, value, limit);
  if (!before || *before == 0.0) return 0;
  const auto after = later ? jump(*later, value, limit) : std::nullopt;
  // Only what is near enough to test against can confirm; a value left alone stays in doubt.
  if (!after) return mark_unconfirmed;
  if (*after == 0.0 || (*after > 0.0) != (*before > 0.0)) return 0;
  const bool twice = std::min(std::abs(*before), std::abs(*after)) > 2.0;
  return twice ? mark_spike_wrong : mark_spike_suspect;
}

/// The places of the values that are not wrong.
std::vector<std::uint32_t> standing_places(const Series& series) {
  std::vector<std::uint32_t> places;
  places.reserve(series.size());
  for (std::size_t i = 0; i < series.size(); ++i) {
    if (!series[i].wrong()) places.push_back(static_cast<std::uint32_t>(i));
  }
  return places;
}

/// First pass: in time order, so that a value judged wrong is no earlier neighbour to the next.
/// Whether there was any.
bool find_wrong_spikes(Series& series, const std::vector<std::uint32_t>& places,
                       const SpikeLimit& limit) {
  bool found = false;
  std::size_t earlier = none;
  auto block = std::chrono::sys_seconds::min();
  for (std::size_t k = 0; k < places.size(); ++k) {
    Judged& value = series[places[k]];
    if (k > 0 && value.time >= block + chain_block) earlier = places[k - 1];
    if (k == 0 || value.time >= block + chain_block) {
      block = Instant(value.time.time_since_epoch() / chain_block * chain_block);
    }
    const Judged* before = earlier == none ? nullptr : &series[earlier];
    const Judged* after = k + 1 < places.size() ? &series[places[k + 1]] : nullptr;
    if (spike_marks(value, before, after, limit) == mark_spike_wrong) {
      value.marks |= mark_spike_wrong;
      found = true;
    } else {
      earlier = places[k];
    }
  }
  return found;
}

/// The humidity of a sample that reports a dew point. Nothing where its temperature is unusable.
std::optional<Judged> from_dew_point(const Sample& sample, const Judged* temperature) {
  const double dew = sample.dew_point->value;
  Judged judged{.time = sample.time, .value = dew, .element = Element::dew_point};
  if (!dew_point_range.holds(dew)) {
    judged.marks = mark_out_of_range;
    return judged;
  }
  if (!temperature || !temperature->used()) return std::nullopt;
  const double air = temperature->value;
  if (dew > air + dew_rounding + hair) {
    judged.marks = mark_dew_above_temperature;
    return judged;
  }
  judged.element = Element::humidity;
  judged.value =
      dew >= air ? 100.0 : relative_humidity(Celsius(air), saturation_pressure(Celsius(dew))).value;
  return judged;
}

}  // namespace

std::optional<double> temperature_spike_limit(Seconds apart) {
  if (apart <= 10min) return 3.0;
  if (apart <= 60min) return 4.0;
  if (apart <= 2h) return 7.0;
  if (apart <= 3h) return 9.0;
  return std::nullopt;
}

std::optional<double> humidity_spike_limit(Seconds apart) {
  if (apart <= 10min) return 15.0;
  if (apart <= 60min) return 45.0;
  return std::nullopt;
}

void judge_spikes(Series& series, const SpikeLimit& limit) {
  auto before = standing_places(series);
  const bool found = find_wrong_spikes(series, before, limit);
  // Second pass, among those that stand after the first: a wild neighbour that came later is out
  // of the way now too.
  const auto places = found ? standing_places(series) : std::move(before);
  for (std::size_t k = 0; k < places.size(); ++k) {
    Judged& value = series[places[k]];
    const Judged* earlier = k > 0 ? &series[places[k - 1]] : nullptr;
    const Judged* later = k + 1 < places.size() ? &series[places[k + 1]] : nullptr;
    value.marks |= spike_marks(value, earlier, later, limit);
  }
}

Series judge_temperature(std::span<const Sample> samples) {
  Series series;
  series.reserve(samples.size());
  for (std::size_t i = 0; i < samples.size(); ++i) {
    const Sample& sample = samples[i];
    ANTHERD_CHECK(i == 0 || samples[i - 1].time < sample.time);
    if (!sample.temperature) continue;
    Judged judged{.time = sample.time,
                  .value = sample.temperature->value,
                  .sample = static_cast<std::uint32_t>(i)};
    if (!temperature_range.holds(judged.value)) judged.marks = mark_out_of_range;
    series.push_back(judged);
  }
  judge_spikes(series, {3.0, temperature_spike_limit});
  return series;
}

Series judge_humidity(std::span<const Sample> samples, const Series& temperature) {
  Series series;
  series.reserve(samples.size());
  auto next = temperature.begin();
  for (std::size_t i = 0; i < samples.size(); ++i) {
    const Sample& sample = samples[i];
    while (next != temperature.end() && next->sample < i) ++next;
    std::optional<Judged> judged;
    if (sample.humidity) {
      const double value = sample.humidity->value;
      judged = Judged{.time = sample.time, .value = value, .element = Element::humidity};
      if (!humidity_range.holds(value))
        judged->marks = mark_out_of_range;
      else if (value > saturation_doubt)
        judged->marks = mark_above_saturation;
    } else if (sample.dew_point) {
      const bool together = next != temperature.end() && next->sample == i;
      judged = from_dew_point(sample, together ? &*next : nullptr);
    }
    if (!judged) continue;
    judged->sample = static_cast<std::uint32_t>(i);
    series.push_back(*judged);
  }
  judge_spikes(series, {15.0, humidity_spike_limit});
  return series;
}

}  // namespace antherd::weather
