// An invented farm on a July afternoon, for the tests of the letters.
#pragma once

#include <string>
#include <vector>

#include "core/letters/compose.hpp"

namespace scene {

using namespace antherd;

/// Tue 14 Jul 2026, 4:05 pm at Larkspur Bench.
Instant at(int day, int hour, int minute = 0);  // July 2026, farm clock
CivilDay july(int day);

const Calendar& calendar();

/// "north bench": overhead, scouted, in flower, 97 °F; a careful ordinary afternoon.
season::FieldStatus north();
/// "south bench": drip, flower not seen, in its window.
season::FieldStatus south();

/// Desk with both fields and station "bench".
letters::Desk desk();

letters::Recipient owner();

alerts::Telling heat(alerts::Saying saying, risk::Level level);
alerts::Telling humid(alerts::Saying saying, risk::Level level);
alerts::Telling silent(alerts::Saying saying);
alerts::Telling doubtful();
alerts::Telling notice(alerts::Kind kind, const std::string& key);

letters::Review review();
letters::Review quiet_review();

}  // namespace scene
