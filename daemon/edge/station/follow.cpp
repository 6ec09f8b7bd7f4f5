// Redirects, one by one, so that each can be judged; see transfer.hpp.
#include "edge/station/limits.hpp"
#include "edge/station/text.hpp"
#include "edge/station/transfer.hpp"

namespace antherd::station {
namespace {

bool is_redirect(long status) {
  return status == 301 || status == 302 || status == 303 || status == 307 || status == 308;
}

/// Why a redirect is not followed, or nothing.
std::string redirect_fault(const std::string& from, const std::string& to) {
  const UrlParts here = parts_of(from);
  const UrlParts there = parts_of(to);
  if (to.empty() || there.scheme.empty()) return "it redirects to nowhere";
  if (there.scheme != "http" && there.scheme != "https") {
    return "it redirects to something that is no web page";
  }
  if (there.host != here.host) {
    return "it redirects to another host, '" + visible(there.host, 100) +
           "': if that is right, name it in the settings";
  }
  if (here.scheme == "https" && there.scheme == "http") {
    return "it redirects from https to http, where nobody vouches for the answer";
  }
  return "";
}

}  // namespace

Response transfer_within_host(Request request, const std::atomic<bool>& stop) {
  Response response;
  for (int redirects = 0;; ++redirects) {
    response = transfer(request, stop);
    request.total -= response.took;
    if (response.stopped || !response.why.empty() || !is_redirect(response.status)) {
      return response;
    }
    if (redirects == limits::http_redirects) {
      response.why = "it redirects more than 3 times";
    } else {
      response.why = redirect_fault(request.url, response.location);
    }
    if (response.why.empty() && request.total <= std::chrono::milliseconds{0}) {
      response.why = "no whole answer within 20 s";
    }
    if (!response.why.empty()) return response;
    request.url = response.location;
  }
}

}  // namespace antherd::station
