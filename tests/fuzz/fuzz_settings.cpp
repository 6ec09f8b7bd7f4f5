// Settings from any bytes: no crash, no hang, complaints or settings but never neither.
#include <cstddef>
#include <cstdint>
#include <string_view>

#include "core/failures/result.hpp"
#include "run/settings/plan.hpp"
#include "run/settings/quantities.hpp"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  using namespace antherd;
  const std::string_view text(reinterpret_cast<const char*>(data), size);
  const settings::Reading reading = settings::read_text(text, "farm.toml", false);
  ANTHERD_CHECK(reading.settings.has_value() == reading.complaints.empty());
  for (const settings::Complaint& complaint : reading.complaints) {
    ANTHERD_CHECK(complaint.line >= 1);
    for (const char letter : complaint.sentence()) {
      ANTHERD_CHECK(static_cast<unsigned char>(letter) >= 0x20);
    }
  }
  if (reading.settings) ANTHERD_CHECK(!describe(*reading.settings).empty());
  (void)settings::parse_temperature(text);
  (void)settings::parse_duration(text);
  (void)settings::parse_civil_time(text);
  (void)settings::parse_number(text);
  return 0;
}
