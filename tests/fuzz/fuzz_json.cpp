// Fuzzes the JSON reader: the first line of the bytes is a pointer, the rest an answer. Whatever
// they are, a sample's values are finite and its time is in range.
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>

#include "core/failures/result.hpp"
#include "edge/station/limits.hpp"
#include "edge/station/readings.hpp"

using namespace antherd;
using namespace antherd::station;

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  if (size < 1) return 0;
  static const char* const forms[] = {"iso", "unix", "unix_ms", "%Y-%m-%d %H:%M"};
  const std::string_view text(reinterpret_cast<const char*>(data) + 1, size - 1);
  const std::size_t line = text.find('\n');
  RecordForm form;
  form.time.at = {"/t"};
  form.time.form = forms[data[0] % 4];
  form.time.arrival = (data[0] & 4) != 0;
  form.temperature = ValueForm{std::string(text.substr(0, line)), "degF"};
  form.humidity = ValueForm{"/o/h", "1"};
  if (data[0] & 8) form.where = {{"/o/w", "A"}};
  const Instant now{Seconds{1783166400}};  // 2026-07-04 12:00 UTC
  const std::string_view answer = line == std::string_view::npos ? text : text.substr(line + 1);
  const Result<Readings> readings = read_json(answer, "http://fuzz/", form, now);
  if (!readings) {
    ANTHERD_CHECK(!readings.failure().why.empty());
    return 0;
  }
  ANTHERD_CHECK(readings->samples.size() <= 1);
  for (const weather::Sample& sample : readings->samples) {
    ANTHERD_CHECK(!sample.empty());
    ANTHERD_CHECK(sample.time >= limits::first_instant && sample.time <= now + limits::ahead);
    ANTHERD_CHECK(!sample.temperature || std::isfinite(sample.temperature->value));
    ANTHERD_CHECK(!sample.humidity || std::isfinite(sample.humidity->value));
  }
  return 0;
}
