// What holds for every letter, whatever it is about (contracts, "Letters").
#pragma once

#include <string>
#include <vector>

#include "core/letters/letter.hpp"
#include "core/units/time.hpp"

namespace rules {

/// Complaints about one letter; empty when it keeps the rules.
std::vector<std::string> broken_by(const antherd::letters::Letter& letter, bool brief,
                                   const antherd::Calendar& calendar);
/// The same for any text of several lines.
std::vector<std::string> broken_by_text(const std::string& text, antherd::CivilDay today);
/// The first of the words that are never said, or nothing.
std::string forbidden_in(const std::string& text);

/// A date ahead without "±", as "Tue 14 Jul" in 2026, or nothing. The text is one line.
std::string bare_date_ahead(const std::string& text, antherd::CivilDay today);

std::size_t code_points(const std::string& text);

}  // namespace rules
