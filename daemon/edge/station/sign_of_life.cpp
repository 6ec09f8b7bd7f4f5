// See sign_of_life.hpp.
#include "edge/station/sign_of_life.hpp"

#include "edge/station/limits.hpp"
#include "edge/station/text.hpp"
#include "edge/station/transfer.hpp"

namespace antherd::station {

std::string shown_host(const std::string& url) {
  const UrlParts parts = parts_of(url);
  return visible(parts.scheme + "://" + parts.host, 300);
}

Outcome give_sign_of_life(const std::string& url, const std::atomic<bool>& stop) {
  const Response response = transfer_within_host({url, {"Accept: */*"}, limits::http_total}, stop);
  if (!response.stopped && response.why.empty() && response.status / 100 == 2) return Done{};
  std::string why = response.stopped ? "antherd stopped" : response.why;
  if (why.empty()) why = "it answered HTTP " + std::to_string(response.status);
  // Clauses about stations speak of "the station"; this is none.
  for (std::size_t at; (at = why.find("the station")) != std::string::npos;) {
    why.replace(at, 11, "it");
  }
  return Failure{"give a sign of life", shown_host(url), why, "it is tried again later"};
}

}  // namespace antherd::station
