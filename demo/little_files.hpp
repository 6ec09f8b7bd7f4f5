// The little station's side of the disk: the season's files read back, and the live folder that
// fills as its clock runs. It must not know sockets or clocks.
#pragma once

#include <chrono>
#include <cstdint>
#include <filesystem>
#include <string>
#include <vector>

namespace demo {

using Instant = std::chrono::sys_seconds;  // UTC

/// One reading at the creek.
struct Creek {
  Instant time;
  std::string temperature, humidity, wind;  // as the season's file has them: °C, %, m/s
};

/// One row of the bench as it stands in the season's file, and the file's name.
struct BenchRow {
  Instant time;
  std::string file, row;
};

struct Season {
  std::vector<Creek> creek;
  std::vector<BenchRow> bench;
  std::string bench_header, irrigation, scouting, settings;
};

/// "2026-07-14 13:58" on the farm's clock (seven hours behind UTC all season); throws on other
/// text.
Instant from_farm_clock(const std::string& text);
std::string farm_clock(Instant at);

/// Reads a folder that demo_season wrote. Throws std::runtime_error naming what is missing.
Season read_season(const std::filesystem::path& folder);

/// The folder that the service watches.
class LiveFolder {
 public:
  /// Fills `folder` with all that was known at `start`: the bench's rows up to it, the diary up to
  /// it and the settings with the port in place.
  LiveFolder(const Season& season, const std::filesystem::path& folder, Instant start, int port);
  /// Appends the bench's rows up to `now`; returns how many.
  int append_until(Instant now);

 private:
  const Season& season_;
  std::filesystem::path drop_;
  std::size_t next_ = 0;
};

/// The reading that the station shows at `now`: the newest not after it; nullptr before the first.
const Creek* creek_at(const Season& season, Instant now);

}  // namespace demo
