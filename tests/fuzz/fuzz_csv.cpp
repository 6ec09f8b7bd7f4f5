// Fuzzes the CSV reader: whatever the bytes, the text read whole and the text read in two pieces
// give the same samples and refusals, every value is finite, every sample's time in range.
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <string_view>

#include "core/failures/result.hpp"
#include "edge/station/csv.hpp"
#include "edge/station/limits.hpp"

using namespace antherd;
using namespace antherd::station;

namespace {

RecordForm form_by(unsigned char choice) {
  static const char* const forms[] = {
      "%Y-%m-%d %H:%M",       "iso",         "unix", "unix_ms", "%d.%m.%y %H:%M",
      "%e %b %Y %I:%M %p %z", "%Y %j %H%M%S"};
  RecordForm form;
  form.time.form = forms[choice % 7];
  form.time.at = {"t"};
  if (choice & 8) form.time.at.push_back("u");
  if (choice & 16) form.where = {{"w", "A"}};
  if (choice & 32) {
    form.time.zone = Calendar("zone", {{Instant{Seconds{1362898800}}, Seconds{-14400}},
                                       {Instant{Seconds{1383458400}}, Seconds{-18000}}});
  }
  form.temperature = ValueForm{"a", choice & 64 ? "degF" : "K"};
  form.rain = ValueForm{"b", "in"};
  if (choice & 128) form.wetness = ValueForm{"c", "1"};
  form.missing = {"", "NA", "-99"};
  return form;
}

void check_values(const Readings& readings) {
  for (const weather::Sample& sample : readings.samples) {
    ANTHERD_CHECK(!sample.empty());
    ANTHERD_CHECK(sample.time >= limits::first_instant && sample.time < limits::end_instant);
    ANTHERD_CHECK(!sample.temperature || std::isfinite(sample.temperature->value));
    ANTHERD_CHECK(!sample.rain || std::isfinite(sample.rain->value));
    ANTHERD_CHECK(!sample.wet_minutes || (*sample.wet_minutes >= 0 && *sample.wet_minutes <= 15));
  }
  ANTHERD_CHECK(readings.refused.size() <= limits::refused_listed + 1);
  for (const Refused& row : readings.refused) {
    ANTHERD_CHECK(row.text.size() <= limits::refused_text_bytes);
  }
}

Readings in_two(std::string_view text, std::size_t cut, const RecordForm& form) {
  Result<CsvReader> reader = CsvReader::make(form, "fuzz", std::nullopt);
  ANTHERD_CHECK(reader);
  const Header header = find_header(text, true);
  ANTHERD_CHECK(reader->open(header.line));
  reader->resume(header.lines, std::nullopt, false);
  const std::string_view rows = text.substr(header.bytes);
  cut = rows.empty() ? 0 : cut % (rows.size() + 1);
  const std::size_t eaten = reader->eat(rows.substr(0, cut), false);
  ANTHERD_CHECK(eaten <= cut);
  reader->eat(rows.substr(eaten), true);
  return reader->take();
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  if (size < 3) return 0;
  const RecordForm form = form_by(data[0]);
  const std::size_t cut = static_cast<std::size_t>(data[1]) * 256 + data[2];
  const std::string_view text(reinterpret_cast<const char*>(data) + 3, size - 3);
  const Result<Readings> whole = read_csv(text, "fuzz", form, std::nullopt);
  if (!whole) return 0;
  check_values(*whole);
  const Readings pieces = in_two(text, cut, form);
  ANTHERD_CHECK(pieces.samples == whole->samples);
  ANTHERD_CHECK(pieces.refused.size() == whole->refused.size());
  for (std::size_t i = 0; i < pieces.refused.size(); ++i) {
    ANTHERD_CHECK(pieces.refused[i].line == whole->refused[i].line);
    ANTHERD_CHECK(pieces.refused[i].reason == whole->refused[i].reason);
  }
  return 0;
}
