// A table of a season's file, read by its keys; a key that nobody reads is a mistake of the file.
#pragma once

#include <toml++/toml.h>

#include <optional>
#include <set>
#include <stdexcept>
#include <string>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::seasons {

class Table {
 public:
  Table(const toml::table& table, std::string where) : table_(table), where_(std::move(where)) {}

  bool has(const std::string& key) const { return table_.contains(key); }
  std::string text(const std::string& key) { return need<std::string>(key); }
  std::string text(const std::string& key, const std::string& usual) {
    return has(key) ? text(key) : usual;
  }
  std::optional<double> number(const std::string& key) {
    return has(key) ? std::optional(need<double>(key)) : std::nullopt;
  }
  int whole(const std::string& key, int usual) {
    return has(key) ? static_cast<int>(need<std::int64_t>(key)) : usual;
  }
  bool yes(const std::string& key) { return has(key) && need<bool>(key); }
  CivilDay day(const std::string& key) {
    const auto date = need<toml::date>(key);
    return std::chrono::local_days(std::chrono::year(date.year) / date.month / date.day);
  }
  std::optional<CivilDay> day_if(const std::string& key) {
    return has(key) ? std::optional(day(key)) : std::nullopt;
  }
  /// "2026-07-12 15:00" by the farm's clock.
  CivilTime clock(const std::string& key) {
    return whole_of(key, settings::parse_civil_time(text(key)));
  }
  std::optional<CivilTime> clock_if(const std::string& key) {
    return has(key) ? std::optional(clock(key)) : std::nullopt;
  }
  /// "20:00"
  std::chrono::minutes minutes(const std::string& key) {
    return std::chrono::minutes{whole_of(key, settings::parse_clock(text(key)))};
  }
  std::optional<double> celsius_if(const std::string& key) {
    if (!has(key)) return std::nullopt;
    return whole_of(key, settings::parse_temperature(text(key))).value;
  }
  double celsius(const std::string& key) {
    return whole_of(key, settings::parse_temperature(text(key))).value;
  }
  std::optional<double> difference_if(const std::string& key) {
    if (!has(key)) return std::nullopt;
    return whole_of(key, settings::parse_difference(text(key))).value;
  }
  double difference(const std::string& key) {
    return whole_of(key, settings::parse_difference(text(key))).value;
  }
  double millimetres(const std::string& key) {
    return whole_of(key, settings::parse_depth(text(key))).value;
  }
  Seconds duration(const std::string& key) {
    return whole_of(key, settings::parse_duration(text(key)));
  }
  /// All keys were read, or the file says something that nobody hears.
  void end() const {
    for (const auto& [key, value] : table_) {
      if (!read_.contains(std::string(key.str())))
        refuse(std::string(key.str()), "nobody reads it");
    }
  }
  [[noreturn]] void refuse(const std::string& key, const std::string& why) const {
    throw std::runtime_error(where_ + ", " + key + ": " + why);
  }

 private:
  template <class Value>
  Value need(const std::string& key) {
    read_.insert(key);
    const auto value = table_[key].value<Value>();
    if (!value) refuse(key, has(key) ? "another kind of value is needed" : "it is missing");
    return *value;
  }
  template <class Value>
  Value whole_of(const std::string& key, Result<Value> result) const {
    if (!result) refuse(key, result.failure().why);
    return *result;
  }

  const toml::table& table_;
  std::string where_;
  std::set<std::string> read_;
};

}  // namespace antherd::seasons
