// The texts that go with the season: diary, settings. It must not know the weather.
#pragma once

#include <string>

namespace demo {

/// The diary of the season: irrigation.csv and scouting.csv.
std::string irrigation_csv();
std::string scouting_csv();

/// The settings of the replay: both stations from files.
std::string replay_settings();
/// The settings of the live part: "bench" from a drop folder, "creek" asked over HTTP. The text
/// holds `{port}` where the little station's port is to stand.
std::string live_settings();

}  // namespace demo
