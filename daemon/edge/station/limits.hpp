// Every bound of the intake, each with its reason. What comes from outside may be broken, endless
// or hostile: past a bound it is refused by name, never followed.
#pragma once

#include <chrono>
#include <cstddef>

#include "core/units/time.hpp"

namespace antherd::station::limits {

// --- text ---------------------------------------------------------------------------------------
/// The longest line: a row of 1,000 columns of 60 characters still fits.
constexpr std::size_t line_bytes = 64 * 1024;
/// The lines that one quoted row may span (RFC 4180 allows line breaks inside quotes). A quote
/// that is never closed must cost one row and not the rest of the file.
constexpr int record_lines = 8;
/// The columns of a row: more than any logger writes, few enough to hold.
constexpr std::size_t columns = 4096;
/// The longest time of a row, all its columns joined.
constexpr std::size_t time_bytes = 128;
/// The longest number: shorter than this holds every double written out in full trade precision.
constexpr std::size_t number_bytes = 63;
/// What is kept of a refused row: enough to find it again.
constexpr std::size_t refused_text_bytes = 200;
/// Refused rows listed one by one per file and look; the rest are counted in one last entry, so
/// that a file of rubbish fills neither memory nor disk.
constexpr std::size_t refused_listed = 1000;

// --- values -------------------------------------------------------------------------------------
/// The largest value of any quantity: a rain counter in hundredths of a millimetre stays below it
/// for 10,000 years, sums of values cannot overflow.
constexpr double largest_value = 1e9;
/// Rows may be this far ahead of the computer's clock (science §3, "time").
constexpr Seconds ahead{600};
/// Years that a row may bear: before 2000 is a clock that was never set; 2106 is where a 32-bit
/// clock ends, and no reading comes from there.
constexpr int first_year = 2000;
constexpr int last_year = 2099;
constexpr Instant first_instant{std::chrono::sys_days{std::chrono::year{first_year} / 1 / 1}};
constexpr Instant end_instant{std::chrono::sys_days{std::chrono::year{last_year + 1} / 1 / 1}};
/// The largest offset from UTC of any zone (IANA: −12:00 to +14:00).
constexpr Seconds largest_offset{14 * 3600};

// --- drop folder --------------------------------------------------------------------------------
/// What is read of one file in one look: a slice that parses in some 10 ms, so that the loop
/// breathes; two or more files get on even while one of them is huge.
constexpr std::size_t bytes_per_file = 2 * 1024 * 1024;
/// What is read in one look at all: bounds the memory of its samples to some 20 MB.
constexpr std::size_t bytes_per_look = 4 * 1024 * 1024;
/// Files looked at in one folder: one a day for 27 years. Asking 10,000 takes some 20 ms a minute.
constexpr std::size_t files = 10'000;
/// Directory entries read at all: memory for names stays below some 20 MB.
constexpr std::size_t entries = 200'000;
/// The part of a file whose hash tells whether it is still the same (contracts, ingest rules).
constexpr std::size_t head_bytes = 4096;

// --- HTTP and JSON ------------------------------------------------------------------------------
/// The largest answer: a station's current values are a few KiB.
constexpr std::size_t http_bytes = 1024 * 1024;
/// The largest head of an answer, all lines together.
constexpr std::size_t http_header_bytes = 64 * 1024;
constexpr std::chrono::milliseconds http_connect{5'000};  // a station on the farm answers or is off
constexpr std::chrono::milliseconds http_total{20'000};  // a byte a second must not hold the worker
constexpr std::chrono::milliseconds http_stop_check{100};  // stop is felt within 0.2 s
constexpr int http_redirects = 3;         // http → https → with a slash, and one more
constexpr Seconds longest_back_off{900};  // a station that is back is noticed within 15 min
/// The deepest nesting of an answer: real ones have 3 to 6 levels.
constexpr int json_depth = 64;

}  // namespace antherd::station::limits
