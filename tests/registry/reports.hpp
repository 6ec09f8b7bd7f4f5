// 24 hours of real reports of weather stations, 1995-03-17 23:45 to 1995-03-18 23:09 UTC, as
// Debian's libncarg-data carries them (950318HH_sao.cdf), printed by ncdump, and how they go
// through the real intake: settings → drop folder → samples. Not one value is changed; -9999, which
// ncdump prints as "_", is written back as the files hold it.
#pragma once

#include <string>
#include <vector>

#include "core/weather/station.hpp"
#include "edge/station/readings.hpp"

namespace registry {

/// One report, every cell as ncdump prints it; "_" where the file holds its missing value.
struct Report {
  int file = 0;  // 0…23
  std::string station, time, temperature, dew_point;
  std::string latitude, longitude, elevation;
};

/// All reports in the order of the files. Throws std::runtime_error where ncdump fails or a column
/// is not as long as the file's own header says.
const std::vector<Report>& reports();

/// The intake refuses years before 2000 (a clock that was never set), so the rows are moved by 28
/// years, the cycle of the calendar: 2023-03-18 is a Saturday too, and no leap day is near.
constexpr int years_moved = 28;

/// Where a station stands that no report places; a quarter of the reports have no place.
constexpr const char* nowhere[] = {"40.0", "-100.0", "300"};

/// What the intake made of one station's rows, and what its settings say of it.
struct Intake {
  antherd::weather::Station station;
  antherd::station::Look look;
};

/// Writes the reports into files of sixteen stations each, told apart by `where`, and has each
/// station's settings read them. A report without a station's name is in the files and nobody's.
std::vector<Intake> take_in();
/// The same of the first file's stations alone, the years left as they are.
std::vector<Intake> take_in_unmoved();
/// What the settings say when every station's place is put in as it was reported.
std::vector<std::string> complaints_as_reported();

}  // namespace registry
