// The addresses of mail servers and stations, taken apart. Pure.
#pragma once

#include <string>
#include <string_view>

#include "core/failures/result.hpp"

namespace antherd::settings {

struct Url {
  std::string scheme;  // small letters
  std::string host;    // [::1] with its brackets
  int port = 0;        // 0: none was given
  std::string path;    // with the query; empty or beginning with "/" or "?"
};

/// scheme://host[:port][path]. Refuses blanks, control characters, other characters than ASCII,
/// names and passwords inside ("user@"), empty hosts and ports outside 1…65535.
Result<Url> parse_url(std::string_view text);
/// localhost, 127.0.0.0/8 or [::1].
bool is_loopback(const std::string& host);
/// An address for people: a query may hold a key, so it is left out.
std::string without_query(const std::string& url);

}  // namespace antherd::settings
