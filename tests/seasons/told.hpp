// A season in words: what was said and when, and what stood behind it. The text that is approved.
#pragma once

#include <string>

#include "seasons/live.hpp"

namespace antherd::seasons {

std::string told(const Scenario& scenario, const Lived& lived);

/// Lines of `approved` that are gone (-) and lines that are new (+), with their places.
std::string difference(const std::string& approved, const std::string& fresh);

std::string clock_text(const Calendar& calendar, Instant at);  // "2026-07-12 15:00"
std::string day_text(CivilDay day);
const char* level_text(risk::Level level);

}  // namespace antherd::seasons
