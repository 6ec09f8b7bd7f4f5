// Fuzzes the diary files: the bytes are an irrigation.csv up to the first NUL, a scouting.csv after
// it. Whatever they are, an entry names a known field, ends after it begins and has a depth and a
// stage in their ranges; all else is refused with a reason.
#include <cstddef>
#include <cstdint>
#include <cstdlib>
#include <fstream>
#include <string>
#include <string_view>

#include "core/failures/result.hpp"
#include "run/service/intake.hpp"
#include "run/settings/plan.hpp"

using namespace antherd;

namespace {

const settings::Settings& farm() {
  static const settings::Settings settings = [] {
    constexpr std::string_view text = R"(
[farm]
name = "Larkspur Bench"
time_zone = "America/Los_Angeles"
[[station]]
name = "bench"
latitude = 46.73
longitude = -117.18
elevation = "780 m"
interval = "5 min"
[station.drop]
folder = "drop"
time = { column = "time", form = "iso" }
temperature = { column = "t", unit = "degC" }
humidity = { column = "h", unit = "%" }
[[field]]
name = "north bench"
station = "bench"
sown = 2026-04-20
crop_type = "coastal"
irrigation = "overhead"
[diary]
folder = "diary"
)";
    settings::Reading reading = settings::read_text(text, "farm.toml", false);
    ANTHERD_CHECK(reading.settings.has_value());
    char folder[] = "/tmp/antherd-fuzz-diary-XXXXXX";
    ANTHERD_CHECK(::mkdtemp(folder) != nullptr);
    reading.settings->diary_folder = folder;
    return *reading.settings;
  }();
  return settings;
}

void write(const char* name, std::string_view text) {
  std::ofstream file(farm().diary_folder + name, std::ios::binary | std::ios::trunc);
  file.write(text.data(), static_cast<std::streamsize>(text.size()));
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  const std::string_view text(reinterpret_cast<const char*>(data), size);
  const std::size_t cut = text.find('\0');
  write("/irrigation.csv", text.substr(0, cut));
  write("/scouting.csv", cut == std::string_view::npos ? "" : text.substr(cut + 1));
  const service::DiaryFiles files = service::read_diary_files(farm());
  for (const field::Irrigation& irrigation : files.diary.irrigations) {
    ANTHERD_CHECK(irrigation.field == "north bench");
    ANTHERD_CHECK(irrigation.end > irrigation.start);
    ANTHERD_CHECK(!irrigation.depth ||
                  (irrigation.depth->value >= 0 && irrigation.depth->value <= 1000));
  }
  for (const field::Scouting& note : files.diary.notes) {
    ANTHERD_CHECK(note.field == "north bench");
    ANTHERD_CHECK(!note.stage || (*note.stage >= 9 && *note.stage <= 99));
    ANTHERD_CHECK(note.seed_set.has_value() == note.seed_looked.has_value());
    ANTHERD_CHECK(!note.seed_set || (*note.seed_set >= 0 && *note.seed_set <= *note.seed_looked));
  }
  for (const station::Refused& row : files.refused) ANTHERD_CHECK(!row.reason.empty());
  return 0;
}
