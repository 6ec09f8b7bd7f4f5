// See encoding.hpp.
#include "edge/mail/encoding.hpp"

#include <algorithm>
#include <array>

namespace antherd::mail {
namespace {

constexpr std::string_view hexadecimal = "0123456789ABCDEF";
constexpr std::string_view replacement = "\xEF\xBF\xBD";
constexpr std::size_t line_columns = 78;     // RFC 5322 §2.1.1, SHOULD
constexpr std::size_t encoded_columns = 76;  // RFC 2045 §6.7, RFC 2047 §2
constexpr std::size_t encoded_word = 75;     // RFC 2047 §2

unsigned char octet(char byte) { return static_cast<unsigned char>(byte); }
bool is_control(char byte) { return octet(byte) < 0x20 || octet(byte) == 0x7F; }
bool is_ascii(char byte) { return octet(byte) < 0x80; }

bool is_letter_or_digit(char byte) {
  return (byte >= 'a' && byte <= 'z') || (byte >= 'A' && byte <= 'Z') ||
         (byte >= '0' && byte <= '9');
}

std::string escaped(char byte) {
  return {'=', hexadecimal[octet(byte) >> 4], hexadecimal[octet(byte) & 15]};
}

/// Length of the well-formed UTF-8 sequence at the start of text, 0 when there is none
/// (RFC 3629 §4: no overlong forms, no surrogates, nothing above U+10FFFF).
std::size_t sequence_length(std::string_view text) {
  const unsigned char first = octet(text[0]);
  if (first < 0x80) return 1;
  const std::size_t length = first >= 0xF0 ? 4U : first >= 0xE0 ? 3U : 2U;
  if (first < 0xC2 || first > 0xF4 || text.size() < length) return 0;
  const unsigned char second = octet(text[1]);
  if ((first == 0xE0 && second < 0xA0) || (first == 0xED && second > 0x9F) ||
      (first == 0xF0 && second < 0x90) || (first == 0xF4 && second > 0x8F)) {
    return 0;
  }
  for (std::size_t n = 1; n < length; ++n) {
    if ((octet(text[n]) & 0xC0) != 0x80) return 0;
  }
  return length;
}

/// Calls `take` for each line of text, without its "\n" or "\r\n"; a last line may lack it.
template <class Take>
void each_line(std::string_view text, Take take) {
  while (!text.empty()) {
    const std::size_t end = text.find('\n');
    std::string_view line = text.substr(0, end);
    text.remove_prefix(end == std::string_view::npos ? text.size() : end + 1);
    if (line.ends_with('\r')) line.remove_suffix(1);
    take(line);
  }
}

/// A folded line of plain ASCII, or nothing when no spaces allow lines of 78 columns.
std::optional<std::string> folded(std::string_view line) {
  std::string lines;
  while (line.size() > line_columns) {
    const std::size_t space = line.rfind(' ', line_columns);
    // a fold after the name, or before a trailing space, would leave an empty line
    if (space == std::string_view::npos || space < 12 || space + 1 == line.size()) return {};
    lines += std::string(line.substr(0, space)) + "\r\n";
    line.remove_prefix(space);
  }
  return lines + std::string(line) + "\r\n";
}

std::string encoded_words(std::string_view name, const std::string& value) {
  constexpr std::string_view opening = "=?UTF-8?Q?", closing = "?=";
  std::string lines = std::string(name) + ": ";
  std::size_t column = lines.size();
  std::string word;
  const auto put_word = [&](bool last) {
    lines += std::string(opening) + word + std::string(closing) + (last ? "\r\n" : "\r\n ");
    word.clear();
    column = 1;
  };
  for (std::string_view rest = value; !rest.empty();) {
    const std::size_t length = sequence_length(rest);  // repaired: never 0
    std::string code;
    for (char byte : rest.substr(0, length)) {
      code += byte == ' ' ? "_" : is_letter_or_digit(byte) ? std::string(1, byte) : escaped(byte);
    }
    rest.remove_prefix(length);
    const std::size_t with = opening.size() + word.size() + code.size() + closing.size();
    if (with > encoded_word || column + with > encoded_columns) put_word(false);
    word += code;
  }
  put_word(true);
  return lines;
}

}  // namespace

std::string repaired_utf8(std::string_view text) {
  std::string repaired;
  while (!text.empty()) {
    const std::size_t length = sequence_length(text);
    repaired += length == 0 ? replacement : text.substr(0, length);
    text.remove_prefix(length == 0 ? 1 : length);
  }
  return repaired;
}

bool has_control(std::string_view text) {
  for (char byte : text) {
    if (is_control(byte)) return true;
  }
  return false;
}

std::optional<std::string> as_seven_bit(std::string_view body) {
  std::string lines;
  bool fits = true;
  each_line(body, [&](std::string_view line) {
    fits = fits && line.size() <= line_columns;
    for (char byte : line) fits = fits && is_ascii(byte) && (byte == '\t' || !is_control(byte));
    lines += std::string(line) + "\r\n";
  });
  if (!fits) return {};
  return lines;
}

std::string as_quoted_printable(std::string_view body) {
  std::string lines;
  each_line(body, [&](std::string_view line) {
    std::size_t column = 0;
    for (std::size_t n = 0; n < line.size(); ++n) {
      const char byte = line[n];
      const bool last = n + 1 == line.size();
      const bool blank = byte == ' ' || byte == '\t';
      const bool plain = is_ascii(byte) && byte != '=' && (blank ? !last : !is_control(byte));
      const std::string code = plain ? std::string(1, byte) : escaped(byte);
      if (column + code.size() > encoded_columns - (last ? 0 : 1)) {
        lines += "=\r\n";
        column = 0;
      }
      lines += code;
      column += code.size();
    }
    lines += "\r\n";
  });
  return lines;
}

std::string header_line(std::string_view name, std::string_view value) {
  bool plain = value.find("=?") == std::string_view::npos && !value.starts_with(' ') &&
               !value.ends_with(' ');
  for (char byte : value) plain = plain && is_ascii(byte);
  if (plain) {
    if (auto line = folded(std::string(name) + ": " + std::string(value))) return *line;
  }
  return encoded_words(name, repaired_utf8(value));
}

std::string date_text(Instant at) {
  constexpr std::array days{"Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"};
  constexpr std::array months{"Jan", "Feb", "Mar", "Apr", "May", "Jun",
                              "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
  const auto day = std::chrono::floor<std::chrono::days>(at);
  const CivilDate date(day);
  const std::chrono::hh_mm_ss time(at - day);
  const auto padded = [](auto number, std::size_t width) {
    std::string digits = std::to_string(number);
    return std::string(digits.size() < width ? width - digits.size() : 0, '0') + digits;
  };
  return std::string(days.at(std::chrono::weekday(day).c_encoding())) + ", " +
         padded(unsigned{date.day()}, 2) + " " + months.at(unsigned{date.month()} - 1) + " " +
         padded(int{date.year()}, 4) + " " + padded(time.hours().count(), 2) + ":" +
         padded(time.minutes().count(), 2) + ":" + padded(time.seconds().count(), 2) + " +0000";
}

std::string base64(std::string_view bytes) {
  constexpr std::string_view alphabet =
      "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
  std::string text;
  for (std::size_t n = 0; n < bytes.size(); n += 3) {
    const std::size_t count = std::min<std::size_t>(3, bytes.size() - n);
    unsigned group = 0;
    for (std::size_t k = 0; k < 3; ++k) group = group << 8 | (k < count ? octet(bytes[n + k]) : 0U);
    for (std::size_t k = 0; k < 4; ++k) {
      text += k <= count ? alphabet[group >> (18 - 6 * k) & 63] : '=';
    }
  }
  return text;
}

std::string tidy(std::string_view text, std::size_t limit) {
  std::string clean;
  std::string spaced(text);
  for (char& byte : spaced) byte = is_control(byte) ? ' ' : byte;
  for (std::string_view rest = spaced; !rest.empty();) {
    const std::size_t length = sequence_length(rest);
    // U+0080…U+009F are control characters too: a terminal obeys them
    const bool hidden =
        length == 0 || (length == 2 && octet(rest[0]) == 0xC2 && octet(rest[1]) < 0xA0);
    const std::string_view piece = hidden ? "?" : rest.substr(0, length);
    rest.remove_prefix(length == 0 ? 1 : length);
    if (piece == " " && (clean.empty() || clean.back() == ' ')) continue;
    if (clean.size() + piece.size() > limit) {
      clean += "…";
      break;
    }
    clean += piece;
  }
  while (clean.ends_with(' ')) clean.pop_back();
  return clean;
}

}  // namespace antherd::mail
