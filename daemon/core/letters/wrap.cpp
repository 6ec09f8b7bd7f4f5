// See wrap.hpp.
#include "core/letters/wrap.hpp"

#include <algorithm>
#include <cstdint>
#include <optional>

namespace antherd::letters {
namespace {

struct Point {
  char32_t code = 0;
  std::size_t length = 1;
};

std::size_t length_by_lead(unsigned char lead) {
  if (lead < 0x80) return 1;
  if (lead >= 0xc2 && lead <= 0xdf) return 2;
  if (lead >= 0xe0 && lead <= 0xef) return 3;
  if (lead >= 0xf0 && lead <= 0xf4) return 4;
  return 0;
}

/// One code point of well-formed UTF-8 (RFC 3629), or nothing.
std::optional<Point> point_at(std::string_view text, std::size_t at) {
  const auto lead = static_cast<unsigned char>(text[at]);
  const std::size_t length = length_by_lead(lead);
  if (length == 0 || at + length > text.size()) return std::nullopt;
  if (length == 1) return Point{lead, 1};
  char32_t code = lead & (0xffu >> (length + 1));
  for (std::size_t i = 1; i < length; ++i) {
    const auto next = static_cast<unsigned char>(text[at + i]);
    if ((next & 0xc0u) != 0x80u) return std::nullopt;
    code = (code << 6) | (next & 0x3fu);
  }
  const bool too_long = (length == 3 && code < 0x800) || (length == 4 && code < 0x10000);
  const bool surrogate = code >= 0xd800 && code <= 0xdfff;
  if (too_long || surrogate || code > 0x10ffff) return std::nullopt;
  return Point{code, length};
}

/// Marks that print nothing yet move, hide or reverse what follows.
bool unprintable(char32_t code) {
  if (code < 0x20 || (code >= 0x7f && code <= 0xa0) || code == 0xad) return true;
  if (code == 0x061c || code == 0x180e || code == 0xfeff) return true;
  if (code >= 0x200b && code <= 0x200f) return true;
  if (code >= 0x2028 && code <= 0x202f) return true;
  return (code >= 0x2060 && code <= 0x206f) || (code >= 0xfff9 && code <= 0xfffc);
}

std::size_t bytes_of(std::string_view text, std::size_t points) {
  std::size_t at = 0;
  while (at < text.size() && points > 0) {
    const auto point = point_at(text, at);
    at += point ? point->length : 1;
    --points;
  }
  return at;
}

/// A figure and the unit after it stay on one line, also where a sentence was written out.
bool belong_together(std::string_view figure, std::string_view unit) {
  if (figure.empty() || figure.find_first_not_of("0123456789.:") != std::string_view::npos) {
    return false;
  }
  while (!unit.empty() && (unit.back() == '.' || unit.back() == ',' || unit.back() == ';')) {
    unit.remove_suffix(1);
  }
  for (const std::string_view known : {"h", "d", "am", "pm", "mm", "°F", "°C", "min"}) {
    if (unit == known) return true;
  }
  return false;
}

std::vector<std::string> words_of(std::string_view text) {
  std::vector<std::string> words;
  std::size_t at = 0;
  while (at < text.size()) {
    const std::size_t end = std::min(text.find(' ', at), text.size());
    if (end > at) {
      const std::string word = unglued(text.substr(at, end - at));
      if (!words.empty() && belong_together(words.back(), word)) {
        words.back() += " " + word;
      } else {
        words.push_back(word);
      }
    }
    at = end + 1;
  }
  return words;
}

}  // namespace

std::size_t columns(std::string_view text) {
  return static_cast<std::size_t>(std::count_if(text.begin(), text.end(), [](char c) {
    return (static_cast<unsigned char>(c) & 0xc0u) != 0x80u;
  }));
}

std::string plain(std::string_view text) {
  std::string clean;
  const auto space = [&clean] {
    if (!clean.empty() && clean.back() != ' ') clean += ' ';
  };
  for (std::size_t at = 0; at < text.size();) {
    const auto point = point_at(text, at);
    if (!point) {
      clean += '?';
      ++at;
      continue;
    }
    if (point->code == ' ' || unprintable(point->code)) {
      space();
    } else {
      clean += text.substr(at, point->length);
    }
    at += point->length;
  }
  while (!clean.empty() && clean.back() == ' ') clean.pop_back();
  return clean;
}

std::string clip(std::string_view text, std::size_t width) {
  if (columns(text) <= width) return std::string(text);
  if (width == 0) return {};
  std::string cut(text.substr(0, bytes_of(text, width - 1)));
  while (!cut.empty() && (cut.back() == ' ' || cut.back() == glue)) cut.pop_back();
  return cut + "…";
}

std::string unglued(std::string_view text) {
  std::string spaced(text);
  std::replace(spaced.begin(), spaced.end(), glue, ' ');
  return spaced;
}

std::vector<std::string> wrap(std::string_view text, std::size_t width, std::size_t first,
                              std::size_t others) {
  std::vector<std::string> lines;
  std::string line(first, ' ');
  bool empty = true;
  const auto turn = [&] {
    lines.push_back(line);
    line.assign(others, ' ');
    empty = true;
  };
  for (std::string word : words_of(text)) {
    const std::size_t needed = columns(line) + (empty ? 0 : 1) + columns(word);
    if (needed > width && !empty) turn();
    while (columns(line) + columns(word) > width && empty) {
      const std::size_t cut = bytes_of(word, width - columns(line));
      line += word.substr(0, cut);
      word.erase(0, cut);
      turn();
    }
    if (word.empty()) continue;
    if (!empty) line += ' ';
    line += word;
    empty = false;
  }
  if (!empty) lines.push_back(line);
  return lines;
}

}  // namespace antherd::letters
