// A station as the service meets it: what it measures, what it makes of that on a bad day, and how
// its rows travel. It remembers each row that it handed over; the checks count from there.
#pragma once

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "edge/station/poll.hpp"
#include "menu.hpp"
#include "support/weather_generator.hpp"

namespace simulation {

/// A row that was handed over whole.
struct Sent {
  Instant time;
  std::optional<double> temperature, humidity;  // as written; nothing where it is no number
  bool sure = true;                             // it must be in the store at the end
  Instant handed_over;
};

class StationLife {
 public:
  StationLife(const Kind& kind, std::uint64_t seed, int number, std::string folder,
              Calendar calendar);

  void begin(const Fault& fault);
  void end(const Fault& fault);
  /// Measures up to `now` and writes what is to be written into the drop folder.
  void live(Instant now);
  /// Answers one question over HTTP, by the service's clock for what is too far ahead.
  station::Answer answer(const station::HttpForm& form, const station::PollMemory& memory,
                         Instant now, Instant service_time);
  /// Rows handed over since then need not have arrived.
  void doubt_since(Instant when);

  const std::vector<Sent>& sent() const { return sent_; }
  int number() const { return number_; }
  bool over_http() const { return number_ != 0; }
  /// The reading has two meanings by the farm's clock.
  bool ambiguous(Instant at) const;

 private:
  bool has(What what) const { return active_.count(what) != 0; }
  void measure(Instant at);
  void bend(weather::Sample& sample, Instant at);
  std::string row_of(const weather::Sample& sample, Sent& sent);
  void put(const std::string& row, const Sent& sent);
  void append(const std::string& name, const std::string& text) const;
  void give_held(bool shuffle);

  const Kind& kind_;
  std::uint64_t seed_;
  int number_;
  std::string folder_;
  Calendar calendar_;
  synthetic::Dice dice_;
  std::map<What, Fault> active_;
  std::optional<Instant> measured_;
  std::optional<weather::Sample> frozen_, latest_;
  std::optional<Sent> latest_sent_;
  std::vector<std::pair<std::string, Sent>> fresh_, held_;
  std::string half_;  // the rest of a row of which the beginning is written
  std::optional<Sent> half_sent_;
  std::vector<Sent> sent_;
  int files_ = 0;
};

}  // namespace simulation
