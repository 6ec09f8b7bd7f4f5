// One poll of a station; see poll.hpp. What the answer means is json.cpp's matter.
#include "edge/station/poll.hpp"

#include <algorithm>
#include <utility>

#include "edge/station/limits.hpp"
#include "edge/station/text.hpp"
#include "edge/station/transfer.hpp"

namespace antherd::station {
namespace {

std::string clause_of(long status) {
  const std::string number = " (HTTP " + std::to_string(status) + ")";
  switch (status) {
    case 204:
      return "the answer is empty" + number;
    case 401:
    case 403:
      return "the station wants a login or forbids it" + number;
    case 404:
    case 410:
      return "the station has no such page" + number + ": is the path right?";
    case 429:
      return "the station is asked too often" + number;
    default:
      break;
  }
  if (status >= 500) return "the station has trouble of its own" + number;
  return "the station answered with something else than its values" + number;
}

std::vector<std::string> header_lines(const PollMemory& memory) {
  std::vector<std::string> lines{"Accept: application/json, */*;q=0.1"};
  if (!memory.etag.empty()) lines.push_back("If-None-Match: " + memory.etag);
  if (!memory.last_modified.empty()) {
    lines.push_back("If-Modified-Since: " + memory.last_modified);
  }
  return lines;
}

Answer failed(const PollMemory& memory, Failure trouble) {
  Answer answer;
  answer.memory = memory;
  answer.memory.failures = std::min(memory.failures + 1, 1000);
  answer.trouble = std::move(trouble);
  return answer;
}

Answer failed(const HttpForm& form, const PollMemory& memory, const std::string& why) {
  return failed(memory, Failure{"read the station over HTTP", shown_url(form.url), why,
                                "it is asked again later"});
}

/// An answer 200: fresh, or the same as the one before.
Answer read_answer(const HttpForm& form, const PollMemory& memory, const Response& response,
                   Instant now) {
  PollMemory next;
  next.mark = memory.mark;
  next.etag = response.etag;
  next.last_modified = response.last_modified;
  next.last_body_hash = hash_hex(response.body);
  if (form.record.time.arrival && next.last_body_hash == memory.last_body_hash) {
    Answer answer;  // no time of its own and no byte changed: nothing says that it is fresh
    answer.not_modified = true;
    answer.memory = next;
    return answer;
  }
  Result<Readings> readings = read_json(response.body, shown_url(form.url), form.record, now);
  if (!readings) return failed(memory, readings.failure());
  Answer answer;
  answer.readings = *std::move(readings);
  answer.memory = next;
  return answer;
}

}  // namespace

Answer poll(const HttpForm& form, const PollMemory& memory, const std::function<Instant()>& now,
            const std::atomic<bool>& stop) {
  const UrlParts parts = parts_of(form.url);
  if ((parts.scheme != "http" && parts.scheme != "https") || parts.host.empty()) {
    return failed(form, memory, "the URL is none of http:// or https://");
  }
  const Response response =
      transfer_within_host({form.url, header_lines(memory), limits::http_total}, stop);
  Answer answer;
  answer.memory = memory;
  if (response.stopped) return answer;
  if (!response.why.empty()) return failed(form, memory, response.why);
  if (response.status == 304) {
    answer.not_modified = true;
    answer.memory.failures = 0;
    return answer;
  }
  if (response.status != 200) return failed(form, memory, clause_of(response.status));
  return read_answer(form, memory, response, now());
}

Seconds poll_delay(const HttpForm& form, const PollMemory& memory, double jitter01) {
  if (memory.failures <= 0) return form.every;
  double delay = static_cast<double>(form.every.count());
  const double longest = static_cast<double>(limits::longest_back_off.count());
  for (int i = 0; i < memory.failures && delay < longest; ++i) delay *= 2;
  delay = std::min(delay, longest);
  delay *= 1.0 - 0.2 * std::clamp(jitter01, 0.0, 1.0);
  return std::max(form.every, Seconds{static_cast<Seconds::rep>(delay)});
}

Seconds longest_poll_delay(const HttpForm& form) {
  return std::max(form.every, limits::longest_back_off);
}

}  // namespace antherd::station
