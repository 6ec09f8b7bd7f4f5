// Drawings become pictures in memory, with one code for SVG and PNG. This file must not know what
// a drawing is about.
#pragma once

#include <string>

#include "core/failures/result.hpp"
#include "core/letters/drawing.hpp"

namespace antherd::drawing {

/// The largest width or height, in logical units.
constexpr double largest_side = 4000;

/// An SVG 1.1 document, UTF-8, with the drawing's title and description for screen readers. Words
/// are outlines, so that it looks the same everywhere. Fails for sizes outside 1…4000 and for
/// coordinates that are not finite.
Result<std::string> to_svg(const letters::Drawing& drawing);

/// A PNG file of `scale` pixels a logical unit, 0.5…4. Fails like to_svg.
Result<std::string> to_png(const letters::Drawing& drawing, double scale = 2.0);

}  // namespace antherd::drawing
