// See station_life.hpp.
#include "station_life.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdio>
#include <filesystem>
#include <fstream>

#include "complaints.hpp"

namespace simulation {
namespace fs = std::filesystem;
namespace {

constexpr const char* header = "time,temp_c,rh_pct,rain_mm\n";
constexpr std::array garbage{"nan", "", "abc", "1e308", "--", "-9999", "inf", "12,5,9"};

bool of_the_sensor(What what) { return what <= What::twofold; }

}  // namespace

StationLife::StationLife(const Kind& kind, std::uint64_t seed, int number, std::string folder,
                         Calendar calendar)
    : kind_(kind),
      seed_(seed),
      number_(number),
      folder_(std::move(folder)),
      calendar_(std::move(calendar)),
      dice_(seed * 31 + static_cast<std::uint64_t>(number) + 5) {
  fs::create_directories(folder_);
  if (!over_http()) append("bench.csv", header);
}

void StationLife::append(const std::string& name, const std::string& text) const {
  std::ofstream(folder_ + "/" + name, std::ios::binary | std::ios::app) << text;
}

bool StationLife::ambiguous(Instant at) const {
  return kind_.local_stamps && !over_http() &&
         calendar_.meaning_of(calendar_.civil(at)).second.has_value();
}

void StationLife::begin(const Fault& fault) {
  // Of two stations one falls ill at a time.
  const bool mine = static_cast<int>(fault.dice % 2) == number_ || !kind_.second_station;
  if (of_the_sensor(fault.what) && !mine) return;
  if (over_http() && fault.what > What::twofold && fault.what < What::not_modified) return;
  if (fault.what == What::rotated) {
    const std::string old = "bench-old-" + std::to_string(++files_) + ".csv";
    fs::rename(folder_ + "/bench.csv", folder_ + "/" + old);
    if (!half_.empty()) append(old, half_);
    half_.clear();
    if (half_sent_) sent_.push_back(*half_sent_);
    half_sent_.reset();
    append("bench.csv", header);
  } else if (fault.what == What::repeated) {
    const std::string copy = "bench-copy-" + std::to_string(++files_) + ".csv";
    fs::copy_file(folder_ + "/bench.csv", folder_ + "/" + copy);
    if (!half_.empty()) append(copy, "\n");
  } else {
    active_.insert_or_assign(fault.what, fault);
    frozen_.reset();
  }
}

void StationLife::end(const Fault& fault) {
  const auto active = active_.find(fault.what);
  if (active == active_.end() || active->second.from != fault.from) return;
  active_.erase(active);
  if (fault.what == What::late) give_held(false);
  if (fault.what == What::shuffled) give_held(true);
}

void StationLife::give_held(bool shuffle) {
  if (held_.empty() || has(What::late) || has(What::shuffled)) return;
  if (shuffle) {
    for (std::size_t i = held_.size(); i > 1; --i) {
      std::swap(held_[i - 1], held_[static_cast<std::size_t>(dice_.uniform() * double(i))]);
    }
  }
  std::string text = header;
  for (auto& [row, sent] : held_) {
    text += row;
    sent_.push_back(sent);
    if (ambiguous(sent.time)) sent_.back().sure = false;
  }
  held_.clear();
  append("bench-late-" + std::to_string(++files_) + ".csv", text);
}

void StationLife::bend(weather::Sample& sample, Instant at) {
  if (has(What::frozen)) {
    if (!frozen_) frozen_ = sample;
    sample.temperature = frozen_->temperature;
    sample.humidity = frozen_->humidity;
  }
  if (has(What::flapping)) {
    const long step = at.time_since_epoch().count() / (60L * kind_.interval);
    sample.temperature = Celsius(step % 2 == 0 ? 32.1 : 32.3);
  }
  if (has(What::spikes) && dice_.uniform() < 0.15) {
    sample.temperature = Celsius(sample.temperature->value + (dice_.uniform() < 0.5 ? 22 : -19));
  }
  if (has(What::out_of_range)) sample.temperature = Celsius(85);
  if (has(What::fahrenheit)) sample.temperature = Celsius(sample.temperature->value * 1.8 + 32);
}

std::string StationLife::row_of(const weather::Sample& sample, Sent& sent) {
  sent.time = sample.time;
  sent.temperature = sample.temperature->value;
  sent.humidity = sample.humidity->value;
  char text[120];
  std::snprintf(text, sizeof text, "%.2f,%.1f,%.1f", sample.temperature->value,
                sample.humidity->value, sample.rain.value_or(Millimetre(0)).value);
  std::string values = text;
  if (has(What::garbage) && dice_.uniform() < 0.4) {
    const auto which = static_cast<std::size_t>(dice_.uniform() * double(garbage.size()));
    values = std::string(garbage.at(which)) + values.substr(values.find(','));
    sent.temperature.reset();
    sent.sure = false;
  }
  const std::string stamp = clock_text(kind_.local_stamps ? calendar_ : Calendar(), sample.time);
  return stamp + "," + values + "\n";
}

void StationLife::measure(Instant at) {
  weather::Sample sample = air_at(kind_, seed_, number_, at);
  bend(sample, at);
  if (has(What::silent)) return;
  Sent sent;
  std::string row = row_of(sample, sent);
  if (over_http()) {
    latest_ = sample;
    latest_sent_ = sent;
    return;
  }
  auto& line = has(What::late) || has(What::shuffled) ? held_ : fresh_;
  line.emplace_back(row, sent);
  if (has(What::twofold)) {
    sample.temperature = Celsius(sample.temperature->value + 0.3);
    Sent second;
    row = row_of(sample, second);
    line.emplace_back(row, second);
  }
}

void StationLife::live(Instant now) {
  const auto interval = minutes{kind_.interval};
  Instant next = measured_ ? *measured_ + interval : std::chrono::ceil<hours>(now);
  for (; next <= now; next += interval) {
    measure(next);
    measured_ = next;
  }
  if (over_http() || (fresh_.empty() && half_.empty())) return;
  std::string text = half_;
  half_.clear();
  const auto take = [&](Sent sent) {
    sent.handed_over = now;
    sent_.push_back(sent);
  };
  if (half_sent_) take(*half_sent_);
  half_sent_.reset();
  for (std::size_t i = 0; i < fresh_.size(); ++i) {
    const auto& [row, sent] = fresh_[i];
    if (has(What::half_rows) && i + 1 == fresh_.size()) {
      const std::size_t cut = row.size() / 2;
      text += row.substr(0, cut);
      half_ = row.substr(cut);
      half_sent_ = sent;
    } else {
      text += row;
      take(sent);
    }
  }
  fresh_.clear();
  append("bench.csv", text);
  for (auto& [row, sent] : held_) sent.handed_over = now;
}

station::Answer StationLife::answer(const station::HttpForm& form,
                                    const station::PollMemory& memory, Instant now,
                                    Instant service_time) {
  station::Answer answer;
  answer.memory = memory;
  if (has(What::unreachable) || has(What::offline)) {
    ++answer.memory.failures;
    answer.trouble = Failure{"ask the station", form.url, "no route to host", "it is asked again"};
    return answer;
  }
  answer.memory.failures = 0;
  answer.not_modified = has(What::not_modified) || !latest_;
  if (answer.not_modified) return answer;
  char text[160];
  std::snprintf(text, sizeof text, R"({"time": %lld, "t": %.2f, "rh": %.1f})",
                static_cast<long long>(latest_->time.time_since_epoch().count()),
                latest_->temperature->value, latest_->humidity->value);
  auto readings = station::read_json(text, form.url, form.record, service_time);
  if (!readings) {
    ++answer.memory.failures;
    answer.trouble = readings.failure();
    return answer;
  }
  answer.readings = *readings;
  if (!readings->samples.empty() && (sent_.empty() || sent_.back().time != latest_->time)) {
    Sent sent = *latest_sent_;
    sent.temperature = latest_->temperature->value;
    sent.sure = true;
    sent.handed_over = now;
    sent_.push_back(sent);
  }
  return answer;
}

void StationLife::doubt_since(Instant when) {
  for (auto sent = sent_.rbegin(); sent != sent_.rend() && sent->handed_over >= when; ++sent) {
    sent->sure = false;
  }
}

}  // namespace simulation
