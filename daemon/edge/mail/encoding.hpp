// How words become bytes that every mail server carries: quoted-printable, encoded words, dates.
// It must not know letters nor servers.
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "core/units/time.hpp"

namespace antherd::mail {

/// Text with every byte sequence that is no UTF-8 replaced by U+FFFD.
std::string repaired_utf8(std::string_view text);

/// Whether text holds an ASCII control character (below 0x20, or 0x7F).
bool has_control(std::string_view text);

/// Body lines with CR LF, as they are. Nothing when the text is not plain ASCII with lines ≤ 78.
std::optional<std::string> as_seven_bit(std::string_view body);

/// Body as quoted-printable, lines ≤ 76 (RFC 2045 §6.7).
std::string as_quoted_printable(std::string_view body);

/// One header line with its CR LF, folded; a value that is not ASCII, or could be mistaken for an
/// encoded word, as RFC 2047 encoded words of ≤ 75 characters in lines of ≤ 76.
/// @param value  without control characters
std::string header_line(std::string_view name, std::string_view value);

/// "Tue, 14 Jul 2026 22:00:00 +0000" (RFC 5322 §3.3). Years 1 to 9999.
std::string date_text(Instant at);

/// RFC 4648 base64, padded.
std::string base64(std::string_view bytes);

/// Text for people made of what a server sent: control characters and broken UTF-8 replaced, runs
/// of spaces closed up, at most `limit` bytes.
std::string tidy(std::string_view text, std::size_t limit);

}  // namespace antherd::mail
