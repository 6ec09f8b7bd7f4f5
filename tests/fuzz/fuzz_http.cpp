// Fuzzes a station's whole answer over HTTP, status line and headers included: whatever the bytes,
// there is an answer or one clear sentence, and what is remembered for the next poll is bounded and
// can stand in a request's header.
#include <atomic>
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>

#include "core/failures/result.hpp"
#include "edge/station/poll.hpp"
#include "fuzz/loopback.hpp"

using namespace antherd;

namespace {

std::string answer;  // of the run under way; set before the request is made

void talk(int line) {
  char request[4096];
  std::string heard;
  while (heard.find("\r\n\r\n") == std::string::npos) {
    const ssize_t got = ::recv(line, request, sizeof request, 0);
    if (got <= 0) return;
    heard.append(request, static_cast<std::size_t>(got));
  }
  fuzzing::write_all(line, answer);
}

bool may_stand_in_a_header(const std::string& text) {
  for (const char letter : text) {
    const auto code = static_cast<unsigned char>(letter);
    if (code < 0x20 || code == 0x7F) return false;
  }
  return text.size() <= 1024;
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  static fuzzing::Loopback server(talk);
  answer.assign(reinterpret_cast<const char*>(data), size);
  station::HttpForm form;
  form.url = "http://127.0.0.1:" + server.port() + "/now.json";
  form.record.time.at = {"/t"};
  form.record.time.form = "unix";
  form.record.temperature = station::ValueForm{"/a", "degF"};
  form.record.humidity = station::ValueForm{"/h", "%"};
  const std::atomic<bool> stop{false};
  const auto now = [] { return Instant{Seconds{1783166400}}; };  // 2026-07-04 12:00 UTC
  const station::Answer got = station::poll(form, {}, now, stop);
  if (got.trouble) {
    ANTHERD_CHECK(!got.trouble->why.empty());
    ANTHERD_CHECK(got.readings.samples.empty());
  }
  ANTHERD_CHECK(may_stand_in_a_header(got.memory.etag));
  ANTHERD_CHECK(may_stand_in_a_header(got.memory.last_modified));
  for (const weather::Sample& sample : got.readings.samples) ANTHERD_CHECK(!sample.empty());
  return 0;
}
