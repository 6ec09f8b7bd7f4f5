// HTTP requests (RFC 9110) by libcurl, bounded in time and bytes, ended by `stop`. Parses nothing.
#pragma once

#include <atomic>
#include <chrono>
#include <string>
#include <vector>

namespace antherd::station {

struct Request {
  std::string url;
  std::vector<std::string> header_lines;
  std::chrono::milliseconds total{0};  // what is left of the whole conversation's time
};

struct Response {
  long status = 0;  // 0: there was no answer
  std::string body;
  std::string etag;
  std::string last_modified;
  std::string location;  // absolute, of a redirect
  std::chrono::milliseconds took{0};
  bool stopped = false;
  std::string why;  // empty: an answer came whole; else one clause saying why not
};

/// Asks once. Never throws; ends within 0.2 s of `stop`.
Response transfer(const Request& request, const std::atomic<bool>& stop);

/// Asks, following at most 3 redirects, each within the host and never from https to http.
Response transfer_within_host(Request request, const std::atomic<bool>& stop);

/// A URL taken apart: only what the redirect rule needs. Empty scheme: no URL of ours.
struct UrlParts {
  std::string scheme, host;  // lower case
};
UrlParts parts_of(const std::string& url);

/// A URL as it may be shown: without user name, password and query, which may hold keys.
std::string shown_url(const std::string& url);

}  // namespace antherd::station
