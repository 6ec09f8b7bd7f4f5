// One station asked over HTTP. Blocking, for a worker's thread; bounded in time and bytes.
#pragma once

#include <atomic>
#include <functional>
#include <optional>
#include <string>

#include "core/failures/result.hpp"
#include "edge/station/readings.hpp"

namespace antherd::station {

/// What is remembered between two polls.
struct PollMemory {
  std::string etag;
  std::string last_modified;
  std::string last_body_hash;  // an unchanged answer without validators is not fresh either,
                               // unless it carries its own time
  int failures = 0;            // in a row: back-off to 15 min
  std::int64_t mark = 0;       // the asker's own, given back as it was
  bool operator==(const PollMemory&) const = default;
};

struct Answer {
  Readings readings;  // empty on trouble or when nothing changed
  bool not_modified = false;
  std::optional<Failure> trouble;  // one clear sentence
  PollMemory memory;
};

/// Asks once. `stop` ends it within 0.2 s. Rules: contracts.md "Ingest rules", HTTP: connect 5 s,
/// total 20 s, 1 MiB, redirects only within the host (at most 3), TLS verified, http/https only,
/// ETag and If-Modified-Since.
/// @param now  asked after the answer came: its time is the arrival time of a station without one
Answer poll(const HttpForm& form, const PollMemory& memory, const std::function<Instant()>& now,
            const std::atomic<bool>& stop);

/// When to ask again: the form's `every`, after failures doubled up to 15 min with jitter 0…1 of
/// 20 %.
Seconds poll_delay(const HttpForm& form, const PollMemory& memory, double jitter01);
/// The longest of these.
Seconds longest_poll_delay(const HttpForm& form);

}  // namespace antherd::station
