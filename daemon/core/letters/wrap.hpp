// Plain text on a page: counting, cleaning, cutting and wrapping by code points. This file must not
// know what the text says.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace antherd::letters {

constexpr std::size_t page_width = 78;     // a phone and an old terminal both show it
constexpr std::size_t subject_width = 70;  // more is cut off in most lists of mail
constexpr std::size_t brief_width = 160;   // one message of a phone gateway

/// Stands for a space at which a line must not break ("97 °F"); never leaves this room.
constexpr char glue = '\x1f';

/// Number of code points of valid UTF-8.
std::size_t columns(std::string_view text);

/// What the world calls something, made harmless: control and direction marks become spaces,
/// bytes that are not UTF-8 become '?', runs of spaces one space, none at the ends.
std::string plain(std::string_view text);

/// At most `width` code points; what is cut ends in "…". Nothing is cut inside a code point.
std::string clip(std::string_view text, std::size_t width);

/// Turns glue into spaces.
std::string unglued(std::string_view text);

/// Lines of at most `width` columns, the first indented by `first`, the others by `others`.
/// A word longer than a line is cut hard. Glue is turned into spaces.
std::vector<std::string> wrap(std::string_view text, std::size_t width, std::size_t first = 0,
                              std::size_t others = 0);

}  // namespace antherd::letters
