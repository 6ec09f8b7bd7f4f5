// Which drawing a review shows. Pure: from days to marks.
#pragma once

#include <span>
#include <string>

#include "core/letters/drawing.hpp"
#include "core/letters/letter.hpp"
#include "core/risk/rules.hpp"
#include "core/season/status.hpp"

namespace antherd::letters {

/// What a chart is of and for whom.
struct ChartReader {
  std::string field;
  Units units = Units::us;
  Language language = Language::english;
  risk::HeatRules thresholds;  // of this field
};

/// The days of a field: the warmest hour of each with the thresholds of heat and the flowering
/// window; below it the infection of each morning; below that the levels in words. A day without
/// data is a gap, never a line across it. Made for a week; longer periods lose the words that no
/// longer fit.
/// @param days        of the period, oldest first; days may be missing
/// @param humid_days  likewise
/// @return a drawing of 720 × 470; without any day one that says so
Drawing week_chart(const ChartReader& reader, std::span<const season::HeatDay> days,
                   std::span<const season::HumidDay> humid_days);

}  // namespace antherd::letters
