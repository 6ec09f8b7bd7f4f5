// A small farm's settings as text, to be broken in one place at a time.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "run/settings/settings.hpp"

namespace antherd::test {

/// Line 1 is "[farm]"; the lines are counted in the right margin.
inline const std::string farm_text = R"([farm]
name = "Larkspur Bench"
time_zone = "America/Los_Angeles"
units = "us"

[mail]
server = "smtps://mail.larkspur.example:465"
from = "alerts@larkspur.example"

[[recipient]]
address = "owner@larkspur.example"

[[station]]
name = "bench"
latitude = 46.73
longitude = -117.18
elevation = "780 m"
interval = "5 min"
[station.drop]
folder = "drop"
time = { column = "time", form = "%Y-%m-%d %H:%M" }
temperature = { column = "temp_f", unit = "degF" }
humidity = { column = "rh_pct", unit = "%" }

[[field]]
name = "north bench"
sown = 2026-04-20
crop_type = "coastal"
irrigation = "overhead"
[[field]]
name = "river flat"
sown = 2026-04-28
crop_type = "early"
irrigation = "drip"
)";

/// The farm's text with one passage replaced by another.
std::string farm_with(std::string_view passage, std::string_view other);
/// The sentences of all complaints, with the file named "farm.toml".
std::vector<std::string> complaints_of(const std::string& text);
/// The settings of a text that must be free of faults.
settings::Settings settings_of(const std::string& text);

}  // namespace antherd::test
