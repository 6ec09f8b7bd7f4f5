// A little weather station for the demo, on loopback only: serves the creek's newest reading as
// JSON and lets the bench's drop file grow, both by a clock that runs at a pace. The clock starts
// a second after the first question, so that it never runs ahead of the service that asks. It ends
// by itself.
#include <arpa/inet.h>
#include <netinet/in.h>
#include <poll.h>
#include <sys/socket.h>
#include <unistd.h>

#include <algorithm>
#include <charconv>
#include <chrono>
#include <cstdio>
#include <cstring>
#include <optional>
#include <stdexcept>
#include <string>

#include "little_files.hpp"

namespace {

using namespace demo;
using Steady = std::chrono::steady_clock;
constexpr std::chrono::seconds one_second_behind{1};

const char* const help =
    "demo_little_station --season FOLDER --live FOLDER [--clock-from \"2026-07-14 13:58\"]\n"
    "                    [--pace 600] [--seconds 75] [--port 0]\n"
    "Serves the creek of a season on http://127.0.0.1:PORT/now.json and fills LIVE/drop with the\n"
    "bench's rows, PACE times as fast as in life. Prints the port; stops after SECONDS.\n";

struct Options {
  std::string season, live, clock_from = "2026-07-14 13:58";
  int pace = 600, seconds = 75, port = 0;
};

int number(const std::string& text, int low, int high) {
  int value = 0;
  const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
  if (error != std::errc() || end != text.data() + text.size() || value < low || value > high)
    throw std::invalid_argument("'" + text + "' is not a number from " + std::to_string(low) +
                                " to " + std::to_string(high));
  return value;
}

Options read_options(int argc, char** argv) {
  Options options;
  for (int i = 1; i < argc; i += 2) {
    const std::string name = argv[i];
    if (i + 1 >= argc) throw std::invalid_argument("'" + name + "' needs a value");
    const std::string value = argv[i + 1];
    if (name == "--season")
      options.season = value;
    else if (name == "--live")
      options.live = value;
    else if (name == "--clock-from")
      options.clock_from = value;
    else if (name == "--pace")
      options.pace = number(value, 1, 86400);
    else if (name == "--seconds")
      options.seconds = number(value, 1, 86400);
    else if (name == "--port")
      options.port = number(value, 0, 65535);
    else
      throw std::invalid_argument("no option '" + name + "'");
  }
  if (options.season.empty() || options.live.empty())
    throw std::invalid_argument("--season and --live are needed");
  return options;
}

/// A socket that closes itself.
class Socket {
 public:
  explicit Socket(int handle) : handle_(handle) {}
  Socket(const Socket&) = delete;
  Socket& operator=(const Socket&) = delete;
  ~Socket() {
    if (handle_ >= 0) close(handle_);
  }
  int handle() const { return handle_; }

 private:
  int handle_;
};

/// Listens on 127.0.0.1; returns the port it got.
int listen_on_loopback(const Socket& socket, int port) {
  const int yes = 1;
  setsockopt(socket.handle(), SOL_SOCKET, SO_REUSEADDR, &yes, sizeof yes);
  sockaddr_in address{};
  address.sin_family = AF_INET;
  address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
  address.sin_port = htons(static_cast<std::uint16_t>(port));
  socklen_t size = sizeof address;
  auto* const any = reinterpret_cast<sockaddr*>(&address);
  if (bind(socket.handle(), any, size) != 0 || listen(socket.handle(), 8) != 0 ||
      getsockname(socket.handle(), any, &size) != 0)
    throw std::runtime_error(std::string("cannot listen on loopback: ") + std::strerror(errno));
  return ntohs(address.sin_port);
}

/// Reads the head of one question; a slow or overlong one is given up.
std::string read_question(const Socket& client) {
  const timeval patience{1, 0};
  setsockopt(client.handle(), SOL_SOCKET, SO_RCVTIMEO, &patience, sizeof patience);
  std::string text;
  char buffer[1024];
  while (text.find("\r\n\r\n") == std::string::npos && text.size() < 8192) {
    const ssize_t got = recv(client.handle(), buffer, sizeof buffer, 0);
    if (got <= 0) break;
    text.append(buffer, static_cast<std::size_t>(got));
  }
  return text;
}

std::string answer(const std::string& question, const Creek* reading) {
  std::string status = "404 Not Found", body = "{\"error\":\"only /now.json\"}\n", more;
  if (question.starts_with("GET /now.json ")) {
    if (reading == nullptr) {
      status = "503 Service Unavailable";
      body = "{\"error\":\"no reading yet\"}\n";
    } else {
      const std::string time = std::to_string(reading->time.time_since_epoch().count());
      const std::string tag = "\"" + time + "\"";
      more = "ETag: " + tag + "\r\n";
      if (question.find("If-None-Match: " + tag) != std::string::npos)
        return "HTTP/1.1 304 Not Modified\r\nConnection: close\r\n" + more + "\r\n";
      status = "200 OK";
      body = "{\"station\":\"creek\",\"obs\":{\"time\":" + time + ",\"t\":" + reading->temperature +
             ",\"rh\":" + reading->humidity + ",\"wind\":" + reading->wind + "}}\n";
    }
  }
  return "HTTP/1.1 " + status + "\r\nContent-Type: application/json\r\nConnection: close\r\n" +
         more + "Content-Length: " + std::to_string(body.size()) + "\r\n\r\n" + body;
}

void serve(const Options& options) {
  const Season season = read_season(options.season);
  const Instant start = from_farm_clock(options.clock_from);
  const Socket listener(socket(AF_INET, SOCK_STREAM | SOCK_CLOEXEC, 0));
  const int port = listen_on_loopback(listener, options.port);
  LiveFolder live(season, options.live, start, port);
  std::printf("port %d\n", port);
  std::fflush(stdout);

  const Steady::time_point end = Steady::now() + std::chrono::seconds(options.seconds);
  std::optional<Steady::time_point> first_question;
  const auto clock = [&] {
    if (!first_question) return start;
    const auto lived =
        std::max(Steady::now() - *first_question - one_second_behind, Steady::duration::zero());
    return start + std::chrono::floor<std::chrono::seconds>(lived * options.pace);
  };
  while (Steady::now() < end) {
    pollfd waiting{listener.handle(), POLLIN, 0};
    if (poll(&waiting, 1, 50) > 0) {
      const Socket client(accept(listener.handle(), nullptr, nullptr));
      if (client.handle() >= 0) {
        const std::string question = read_question(client);
        if (!first_question) first_question = Steady::now();
        const std::string text = answer(question, creek_at(season, clock()));
        send(client.handle(), text.data(), text.size(), MSG_NOSIGNAL);
      }
    }
    live.append_until(clock());
  }
  std::printf("the station's clock stopped at %s\n", farm_clock(clock()).c_str());
}

}  // namespace

int main(int argc, char** argv) {
  if (argc == 2 && std::strcmp(argv[1], "--help") == 0) return std::fputs(help, stdout), 0;
  try {
    serve(read_options(argc, argv));
  } catch (const std::invalid_argument& trouble) {
    std::fprintf(stderr, "demo_little_station: %s\n%s", trouble.what(), help);
    return 2;
  } catch (const std::exception& trouble) {
    std::fprintf(stderr, "demo_little_station: %s\n", trouble.what());
    return 1;
  }
  return 0;
}
