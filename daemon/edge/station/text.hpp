// Small text work that the CSV and the JSON readers share: trimming, numbers, making foreign bytes
// visible, a content hash. Locale-free; knows nothing of stations.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>

#include "edge/station/limits.hpp"

namespace antherd::station {

/// Without spaces, tabs and carriage returns at both ends.
std::string_view trim(std::string_view text);

/// ASCII letters compared without case.
bool equal_fold(std::string_view a, std::string_view b);

/// At most `most` bytes of foreign text, fit for a log or a letter: control characters and bytes
/// that are no UTF-8 are shown as \xNN, never cut inside a character.
std::string visible(std::string_view text, std::size_t most = limits::refused_text_bytes);

/// The same between single quotes.
std::string quoted(std::string_view text, std::size_t most);

enum class NumberFault { none, not_a_number, not_finite, too_large };

/// The whole text as one finite number of magnitude ≤ limits::largest_value; a leading + is read.
/// @param decimal_comma  12,5 is read as 12.5 (12.5 too; a text with both is no number)
/// @return the fault, or none and the number in `number`
NumberFault read_number(std::string_view text, bool decimal_comma, double& number);

/// "temperature: 'abc' is not a number", without its start.
std::string say(NumberFault fault, std::string_view text);

/// FNV-1a, 64 bit, as 16 hexadecimal digits (Fowler, Noll, Vo; constants (from memory), checked
/// by the tests' published vectors). Tells files apart; no defence against forgery.
std::string hash_hex(std::string_view bytes);

}  // namespace antherd::station
