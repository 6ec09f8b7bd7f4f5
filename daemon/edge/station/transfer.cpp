// See transfer.hpp. The transfer is driven step by step instead of in one blocking call, so that
// `stop` is looked at ten times a second whatever the server does.
#include "edge/station/transfer.hpp"

#include <curl/curl.h>

#include <algorithm>
#include <cctype>
#include <cstring>
#include <memory>
#include <string_view>

#include "edge/station/limits.hpp"
#include "edge/station/text.hpp"

namespace antherd::station {
namespace {

struct EasyDeleter {
  void operator()(CURL* handle) const { curl_easy_cleanup(handle); }
};
struct MultiDeleter {
  void operator()(CURLM* handle) const { curl_multi_cleanup(handle); }
};
struct ListDeleter {
  void operator()(curl_slist* list) const { curl_slist_free_all(list); }
};
struct UrlDeleter {
  void operator()(CURLU* url) const { curl_url_cleanup(url); }
};

bool start_library() {
  static const bool started = curl_global_init(CURL_GLOBAL_DEFAULT) == CURLE_OK;
  return started;
}

struct Conversation {
  Response response;
  std::size_t header_bytes = 0;
  bool too_big = false;
  bool head_too_big = false;
  const std::atomic<bool>* stop = nullptr;
};

std::size_t take_body(char* bytes, std::size_t, std::size_t count, void* user) {
  auto& talk = *static_cast<Conversation*>(user);
  if (talk.response.body.size() + count > limits::http_bytes) {
    talk.too_big = true;
    return 0;
  }
  talk.response.body.append(bytes, count);
  return count;
}

/// Validators are kept as they came, bounded, and only of printable characters: they are sent back.
std::string validator(std::string_view line, std::size_t name_length) {
  while (!line.empty() && (line.back() == '\n' || line.back() == '\r')) line.remove_suffix(1);
  const std::string_view value = trim(line.substr(name_length));
  const bool plain = std::all_of(value.begin(), value.end(), [](char c) {
    return static_cast<unsigned char>(c) >= 0x20 && c != 0x7F;
  });
  return plain && value.size() <= 200 ? std::string(value) : "";
}

std::size_t take_header(char* bytes, std::size_t, std::size_t count, void* user) {
  auto& talk = *static_cast<Conversation*>(user);
  talk.header_bytes += count;
  if (talk.header_bytes > limits::http_header_bytes) {
    talk.head_too_big = true;
    return 0;
  }
  const std::string_view line(bytes, count);
  const auto named = [&](std::string_view name) {
    return line.size() > name.size() && equal_fold(line.substr(0, name.size()), name);
  };
  if (named("etag:")) talk.response.etag = validator(line, 5);
  if (named("last-modified:")) talk.response.last_modified = validator(line, 14);
  return count;
}

int watch(void* user, curl_off_t, curl_off_t, curl_off_t, curl_off_t) {
  return static_cast<const Conversation*>(user)->stop->load() ? 1 : 0;
}

constexpr const char* no_name = "no such host name, or the name server does not answer";

/// One clause for each way in which no whole answer came.
std::string clause(CURLcode code, CURL* handle, const Conversation& talk, const char* detail) {
  if (talk.too_big || code == CURLE_FILESIZE_EXCEEDED) return "the answer is longer than 1 MiB";
  if (talk.head_too_big) return "the head of the answer is longer than 64 KiB";
  double connected = 0, named = 0;
  curl_easy_getinfo(handle, CURLINFO_CONNECT_TIME, &connected);
  curl_easy_getinfo(handle, CURLINFO_NAMELOOKUP_TIME, &named);
  long reason = 0;
  curl_easy_getinfo(handle, CURLINFO_OS_ERRNO, &reason);
  switch (code) {
    case CURLE_COULDNT_RESOLVE_HOST:
      return no_name;
    case CURLE_COULDNT_CONNECT:
      return std::string("the station cannot be reached: ") +
             (reason ? std::strerror(static_cast<int>(reason)) : "no connection");
    case CURLE_OPERATION_TIMEDOUT:
      if (named <= 0) return no_name;
      return connected > 0 ? "no whole answer within 20 s"
                           : "no connection within 5 s: is the station on?";
    case CURLE_PEER_FAILED_VERIFICATION:
    case CURLE_SSL_CONNECT_ERROR:
    case CURLE_SSL_CACERT_BADFILE:
    case CURLE_SSL_CERTPROBLEM:
      return std::string("no trusted TLS connection: ") + visible(detail, 120);
    case CURLE_GOT_NOTHING:
      return "the station closed the connection without an answer";
    case CURLE_PARTIAL_FILE:
    case CURLE_RECV_ERROR:
    case CURLE_SEND_ERROR:
      return "the connection ended in the middle of the answer";
    case CURLE_UNSUPPORTED_PROTOCOL:
    case CURLE_WEIRD_SERVER_REPLY:
      return "what answers does not speak HTTP";
    case CURLE_URL_MALFORMAT:
      return "the URL cannot be understood";
    default:
      return std::string("the transfer failed: ") + curl_easy_strerror(code);
  }
}

void set_options(CURL* handle, const Request& request, Conversation& talk, curl_slist* lines,
                 char* detail) {
  curl_easy_setopt(handle, CURLOPT_URL, request.url.c_str());
  curl_easy_setopt(handle, CURLOPT_PROTOCOLS_STR, "http,https");
  curl_easy_setopt(handle, CURLOPT_FOLLOWLOCATION, 0L);
  curl_easy_setopt(handle, CURLOPT_PROXY, "");  // a station stands in the farm's own network
  curl_easy_setopt(handle, CURLOPT_NETRC, static_cast<long>(CURL_NETRC_IGNORED));
  curl_easy_setopt(handle, CURLOPT_NOSIGNAL, 1L);
  curl_easy_setopt(handle, CURLOPT_QUICK_EXIT, 1L);  // a dead name server must not hold us
  curl_easy_setopt(handle, CURLOPT_SSL_VERIFYPEER, 1L);
  curl_easy_setopt(handle, CURLOPT_SSL_VERIFYHOST, 2L);
  curl_easy_setopt(handle, CURLOPT_CONNECTTIMEOUT_MS,
                   static_cast<long>(limits::http_connect.count()));
  curl_easy_setopt(handle, CURLOPT_TIMEOUT_MS, static_cast<long>(request.total.count()));
  curl_easy_setopt(handle, CURLOPT_MAXFILESIZE, static_cast<long>(limits::http_bytes));
  curl_easy_setopt(handle, CURLOPT_USERAGENT, "antherd");
  curl_easy_setopt(handle, CURLOPT_HTTPHEADER, lines);
  curl_easy_setopt(handle, CURLOPT_ERRORBUFFER, detail);
  curl_easy_setopt(handle, CURLOPT_WRITEFUNCTION, take_body);
  curl_easy_setopt(handle, CURLOPT_WRITEDATA, &talk);
  curl_easy_setopt(handle, CURLOPT_HEADERFUNCTION, take_header);
  curl_easy_setopt(handle, CURLOPT_HEADERDATA, &talk);
  curl_easy_setopt(handle, CURLOPT_NOPROGRESS, 0L);
  curl_easy_setopt(handle, CURLOPT_XFERINFOFUNCTION, watch);
  curl_easy_setopt(handle, CURLOPT_XFERINFODATA, &talk);
}

/// Drives the transfer to its end; CURLE_ABORTED_BY_CALLBACK when stopped.
CURLcode drive(CURLM* multi, const std::atomic<bool>& stop) {
  int running = 1;
  while (running > 0) {
    if (stop.load()) return CURLE_ABORTED_BY_CALLBACK;
    if (curl_multi_perform(multi, &running) != CURLM_OK) return CURLE_FAILED_INIT;
    if (running == 0) break;
    const int wait = static_cast<int>(limits::http_stop_check.count());
    if (curl_multi_poll(multi, nullptr, 0, wait, nullptr) != CURLM_OK) return CURLE_FAILED_INIT;
  }
  int left = 0;
  const CURLMsg* message = curl_multi_info_read(multi, &left);
  return message ? message->data.result : CURLE_FAILED_INIT;
}

std::string url_part(const std::string& url, CURLUPart part) {
  const std::unique_ptr<CURLU, UrlDeleter> handle(curl_url());
  if (!handle || curl_url_set(handle.get(), CURLUPART_URL, url.c_str(), 0) != CURLUE_OK) return "";
  char* text = nullptr;
  if (curl_url_get(handle.get(), part, &text, 0) != CURLUE_OK) return "";
  std::string copy = text;
  curl_free(text);
  std::transform(copy.begin(), copy.end(), copy.begin(),
                 [](char c) { return c >= 'A' && c <= 'Z' ? static_cast<char>(c + 32) : c; });
  return copy;
}

}  // namespace

UrlParts parts_of(const std::string& url) {
  return UrlParts{url_part(url, CURLUPART_SCHEME), url_part(url, CURLUPART_HOST)};
}

std::string shown_url(const std::string& url) {
  std::string shown = url.substr(0, url.find_first_of("?#"));
  const std::size_t scheme = shown.find("://");
  const std::size_t start = scheme == std::string::npos ? 0 : scheme + 3;
  const std::size_t path = std::min(shown.find('/', start), shown.size());
  const std::size_t user = shown.rfind('@', path);
  if (user != std::string::npos && user >= start) shown.erase(start, user - start + 1);
  return visible(shown, 300);
}

Response transfer(const Request& request, const std::atomic<bool>& stop) {
  Conversation talk;
  talk.stop = &stop;
  const std::unique_ptr<CURLM, MultiDeleter> multi(start_library() ? curl_multi_init() : nullptr);
  const std::unique_ptr<CURL, EasyDeleter> handle(multi ? curl_easy_init() : nullptr);
  if (!handle) {
    talk.response.why = "the HTTP library could not be started";
    return talk.response;
  }
  std::unique_ptr<curl_slist, ListDeleter> lines;
  for (const std::string& line : request.header_lines) {
    curl_slist* const longer = curl_slist_append(lines.get(), line.c_str());
    if (!longer) continue;
    static_cast<void>(lines.release());
    lines.reset(longer);
  }
  char detail[CURL_ERROR_SIZE] = "";
  set_options(handle.get(), request, talk, lines.get(), detail);
  curl_multi_add_handle(multi.get(), handle.get());
  const CURLcode code = drive(multi.get(), stop);
  Response& response = talk.response;
  if (stop.load() && code != CURLE_OK) {
    response.stopped = true;
  } else if (code != CURLE_OK) {
    response.why = clause(code, handle.get(), talk, detail);
  }
  curl_easy_getinfo(handle.get(), CURLINFO_RESPONSE_CODE, &response.status);
  char* location = nullptr;
  curl_easy_getinfo(handle.get(), CURLINFO_REDIRECT_URL, &location);
  if (location) response.location = location;
  curl_off_t microseconds = 0;
  curl_easy_getinfo(handle.get(), CURLINFO_TOTAL_TIME_T, &microseconds);
  response.took = std::chrono::milliseconds(microseconds / 1000);
  curl_multi_remove_handle(multi.get(), handle.get());
  return response;
}

}  // namespace antherd::station
