// See url.hpp.
#include "run/settings/url.hpp"

#include <algorithm>
#include <charconv>
#include <optional>

namespace antherd::settings {
namespace {

bool is_host_letter(char letter) {
  return (letter >= 'a' && letter <= 'z') || (letter >= 'A' && letter <= 'Z') ||
         (letter >= '0' && letter <= '9') || letter == '.' || letter == '-' || letter == '_';
}

std::optional<int> port_from(std::string_view digits) {
  int port = 0;
  const char* const end = digits.data() + digits.size();
  const auto read = std::from_chars(digits.data(), end, port);
  if (read.ec != std::errc{} || read.ptr != end || port < 1 || port > 65535) return {};
  return port;
}

}  // namespace

Result<Url> parse_url(std::string_view text) {
  const auto refused = [&](const char* why) {
    return Failure{"read the address", std::string(text.substr(0, 60)), why, ""};
  };
  for (const char letter : text) {
    if (letter <= ' ' || letter > '~') return refused("it holds a blank or a special character");
  }
  const std::size_t colon = text.find("://");
  if (colon == std::string_view::npos || colon == 0) return refused("it has no scheme");
  Url url;
  for (const char letter : text.substr(0, colon)) {
    url.scheme += letter >= 'A' && letter <= 'Z' ? static_cast<char>(letter - 'A' + 'a') : letter;
  }
  std::string_view rest = text.substr(colon + 3);
  const std::size_t slash = std::min(rest.find_first_of("/?#"), rest.size());
  std::string_view host = rest.substr(0, slash);
  url.path = std::string(rest.substr(slash));
  if (url.path.find('#') != std::string::npos) return refused("it holds a \"#\"");
  if (host.find('@') != std::string_view::npos) {
    return refused("names and passwords do not belong into an address");
  }
  const std::size_t bracket = host.starts_with('[') ? host.find(']') : std::string_view::npos;
  if (host.starts_with('[') && bracket == std::string_view::npos)
    return refused("\"]\" is missing");
  const std::size_t port_colon = host.find(':', bracket == std::string_view::npos ? 0 : bracket);
  if (port_colon != std::string_view::npos) {
    const auto port = port_from(host.substr(port_colon + 1));
    if (!port) return refused("its port is not a number from 1 to 65535");
    url.port = *port;
    host = host.substr(0, port_colon);
  }
  const bool bracketed = bracket != std::string_view::npos;
  const std::string_view letters = bracketed ? host.substr(1, bracket - 1) : host;
  const bool fine = std::all_of(letters.begin(), letters.end(), [&](char letter) {
    return is_host_letter(letter) || (bracketed && letter == ':');
  });
  if (letters.empty() || !fine || (bracketed && bracket + 1 != host.size())) {
    return refused("its host is not a name or an address");
  }
  url.host = std::string(host);
  return url;
}

bool is_loopback(const std::string& host) {
  if (host == "localhost" || host == "[::1]") return true;
  if (!host.starts_with("127.")) return false;
  return std::count(host.begin(), host.end(), '.') == 3 &&
         host.find_first_not_of("0123456789.") == std::string::npos;
}

std::string without_query(const std::string& url) { return url.substr(0, url.find('?')); }

}  // namespace antherd::settings
