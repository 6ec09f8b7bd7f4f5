// See text.hpp.
#include "edge/station/text.hpp"

#include <charconv>
#include <cmath>
#include <cstdint>
#include <cstring>

namespace antherd::station {
namespace {

bool blank(char c) { return c == ' ' || c == '\t' || c == '\r'; }

char lower(char c) { return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c; }

/// The length of the UTF-8 character at the start of the text, 0 where there is none (RFC 3629).
std::size_t character_length(std::string_view text) {
  const auto byte = [&](std::size_t i) { return static_cast<unsigned char>(text[i]); };
  const auto follows = [&](std::size_t i) { return i < text.size() && (byte(i) & 0xC0) == 0x80; };
  const unsigned char first = byte(0);
  if (first < 0x80) return 1;
  if (first >= 0xC2 && first <= 0xDF) return follows(1) ? 2 : 0;
  if (first >= 0xE0 && first <= 0xEF) {
    if (!follows(1) || !follows(2)) return 0;
    const bool overlong = first == 0xE0 && byte(1) < 0xA0;
    const bool surrogate = first == 0xED && byte(1) > 0x9F;
    return overlong || surrogate ? 0 : 3;
  }
  if (first >= 0xF0 && first <= 0xF4) {
    if (!follows(1) || !follows(2) || !follows(3)) return 0;
    const bool overlong = first == 0xF0 && byte(1) < 0x90;
    const bool beyond = first == 0xF4 && byte(1) > 0x8F;
    return overlong || beyond ? 0 : 4;
  }
  return 0;
}

bool control(std::string_view text) {
  const auto first = static_cast<unsigned char>(text[0]);
  if (first < 0x20 || first == 0x7F) return true;
  return first == 0xC2 && text.size() > 1 && static_cast<unsigned char>(text[1]) < 0xA0;  // C1
}

}  // namespace

std::string_view trim(std::string_view text) {
  while (!text.empty() && blank(text.front())) text.remove_prefix(1);
  while (!text.empty() && blank(text.back())) text.remove_suffix(1);
  return text;
}

bool equal_fold(std::string_view a, std::string_view b) {
  if (a.size() != b.size()) return false;
  for (std::size_t i = 0; i < a.size(); ++i) {
    if (lower(a[i]) != lower(b[i])) return false;
  }
  return true;
}

std::string visible(std::string_view text, std::size_t most) {
  static constexpr char digits[] = "0123456789abcdef";
  std::string shown;
  while (!text.empty()) {
    const std::size_t length = character_length(text);
    std::string piece;
    if (length > 0 && !control(text)) {
      piece.assign(text.substr(0, length));
    } else {
      const auto byte = static_cast<unsigned char>(text[0]);
      piece = {'\\', 'x', digits[byte >> 4], digits[byte & 15]};
    }
    if (shown.size() + piece.size() > most) break;
    shown += piece;
    text.remove_prefix(length > 0 && !control(text) ? length : 1);
  }
  return shown;
}

std::string quoted(std::string_view text, std::size_t most) {
  std::string shown(1, '\'');
  shown += visible(text, most);
  shown += '\'';
  return shown;
}

NumberFault read_number(std::string_view text, bool decimal_comma, double& number) {
  char buffer[limits::number_bytes];
  if (text.size() > sizeof buffer || text.empty()) return NumberFault::not_a_number;
  if (decimal_comma) {
    const std::size_t comma = text.find(',');
    if (comma != std::string_view::npos) {
      if (text.find('.') != std::string_view::npos) return NumberFault::not_a_number;
      std::memcpy(buffer, text.data(), text.size());
      buffer[comma] = '.';
      text = std::string_view(buffer, text.size());
    }
  }
  if (text.front() == '+') {
    text.remove_prefix(1);
    if (text.empty() || text.front() == '-') return NumberFault::not_a_number;
  }
  double value = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (end != text.data() + text.size()) return NumberFault::not_a_number;
  if (error == std::errc::result_out_of_range) return NumberFault::too_large;
  if (error != std::errc{}) return NumberFault::not_a_number;
  if (!std::isfinite(value)) return NumberFault::not_finite;
  if (std::fabs(value) > limits::largest_value) return NumberFault::too_large;
  number = value;
  return NumberFault::none;
}

std::string say(NumberFault fault, std::string_view text) {
  const std::string shown = quoted(text, 40);
  switch (fault) {
    case NumberFault::not_finite:
      return shown + " is not a finite number";
    case NumberFault::too_large:
      return shown + " is beyond any value that can be measured";
    case NumberFault::not_a_number:
    case NumberFault::none:
      break;
  }
  return shown + " is not a number";
}

std::string hash_hex(std::string_view bytes) {
  std::uint64_t hash = 0xcbf29ce484222325u;
  for (const char c : bytes) {
    hash ^= static_cast<unsigned char>(c);
    hash *= 0x100000001b3u;
  }
  static constexpr char digits[] = "0123456789abcdef";
  std::string text(16, '0');
  for (std::size_t i = 0; i < 16; ++i) text[i] = digits[(hash >> (60 - 4 * i)) & 15];
  return text;
}

}  // namespace antherd::station
