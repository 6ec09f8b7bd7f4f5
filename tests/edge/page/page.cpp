// The local page, visited through plain sockets as a browser or an intruder would.
#include "edge/page/page.hpp"

#include <arpa/inet.h>
#include <sys/socket.h>
#include <sys/time.h>
#include <unistd.h>

#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::page;

namespace {

class Visitor {
 public:
  explicit Visitor(int port) : socket_(::socket(AF_INET, SOCK_STREAM, 0)) {
    sockaddr_in place{};
    place.sin_family = AF_INET;
    place.sin_port = htons(static_cast<std::uint16_t>(port));
    place.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
    const timeval patience{5, 0};
    ::setsockopt(socket_, SOL_SOCKET, SO_RCVTIMEO, &patience, sizeof patience);
    connected_ = ::connect(socket_, reinterpret_cast<const sockaddr*>(&place), sizeof place) == 0;
  }
  ~Visitor() { ::close(socket_); }
  Visitor(const Visitor&) = delete;
  Visitor& operator=(const Visitor&) = delete;

  bool connected() const { return connected_; }
  void say(const std::string& text) const {
    const auto sent = ::send(socket_, text.data(), text.size(), MSG_NOSIGNAL);
    static_cast<void>(sent);
  }
  /// All until the other side closes; "(nothing)" when it says nothing in five seconds.
  std::string hear() const {
    std::string heard;
    char piece[4096];
    for (;;) {
      const auto got = ::recv(socket_, piece, sizeof piece, 0);
      if (got < 0) return heard.empty() ? "(nothing)" : heard;
      if (got == 0) return heard;
      heard.append(piece, static_cast<std::size_t>(got));
    }
  }

 private:
  int socket_;
  bool connected_ = false;
};

std::string ask(int port, const std::string& request) {
  const Visitor visitor(port);
  visitor.say(request);
  return visitor.hear();
}

std::string get(int port, const std::string& path, const std::string& host = "127.0.0.1") {
  return ask(port, "GET " + path + " HTTP/1.1\r\nHost: " + host + "\r\n\r\n");
}

bool has(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

std::string status(const std::string& answer) { return answer.substr(0, 12); }

PageContent content() {
  PageContent page;
  page.farm = "Larkspur Bench";
  page.made = "Tue 14 Jul 3:05 pm";
  page.now_text = "north bench: full flower <script>alert(1)</script> & more";
  page.review_text = "Week 2026-W28";
  page.caution = "Scout before acting.";
  page.json = "{\"farm\":\"Larkspur Bench\"}";
  page.charts.push_back(
      Chart{"week of \"north bench\"", "<svg xmlns=\"http://www.w3.org/2000/svg\"/>"});
  return page;
}

std::unique_ptr<Page> open_page(PageOptions options = {}) {
  auto page = Page::listen(options);
  REQUIRE(page);
  return std::move(*page);
}

}  // namespace

TEST_CASE("the page shows what it was given, escaped, with the caution") {
  const auto page = open_page();
  page->show(content());
  const std::string answer = get(page->port(), "/");
  CHECK(status(answer) == "HTTP/1.1 200");
  CHECK(has(answer, "<h1>Larkspur Bench</h1>"));
  CHECK(has(answer, "full flower &lt;script&gt;alert(1)&lt;/script&gt; &amp; more"));
  CHECK_FALSE(has(answer, "<script"));
  CHECK(has(answer, "Week 2026-W28"));
  CHECK(has(answer, "Scout before acting."));
  CHECK(has(answer, "<img src=\"/chart-0.svg\" alt=\"week of &quot;north bench&quot;\">"));
  CHECK_FALSE(has(answer, "class=\"warning\""));
  CHECK(has(answer, "Content-Security-Policy: default-src 'none';"));
  CHECK(has(answer, "X-Content-Type-Options: nosniff"));
  CHECK(has(answer, "Cache-Control: no-store"));
  CHECK_FALSE(has(answer, "Server:"));
  PageContent other = content();
  other.farm = "Elsewhere";
  page->show(other);
  CHECK(has(get(page->port(), "/"), "<h1>Elsewhere</h1>"));
}

TEST_CASE("charts, style and JSON are served as they are") {
  const auto page = open_page();
  page->show(content());
  CHECK(has(get(page->port(), "/now.json"), "application/json"));
  CHECK(has(get(page->port(), "/now.json?x=1"), "\r\n\r\n{\"farm\":\"Larkspur Bench\"}"));
  CHECK(has(get(page->port(), "/chart-0.svg"), "image/svg+xml"));
  CHECK(has(get(page->port(), "/style.css"), "text/css"));
  for (const char* path : {"/chart-1.svg", "/chart-.svg", "/../etc/passwd", "//", "/index.html"}) {
    CHECK(status(get(page->port(), path)) == "HTTP/1.1 404");
  }
}

TEST_CASE("nothing can be written") {
  const auto page = open_page();
  page->show(content());
  for (const char* method : {"POST", "PUT", "DELETE", "OPTIONS", "HEAD", "TRACE", "BREW"}) {
    const std::string answer =
        ask(page->port(), std::string(method) +
                              " / HTTP/1.1\r\nHost: localhost\r\nContent-Length: 5\r\n\r\nhello");
    INFO(method);
    CHECK(status(answer) == "HTTP/1.1 405");
    CHECK(has(answer, "Allow: GET"));
  }
}

TEST_CASE("a foreign name is refused, so that no web page reads the farm through the browser") {
  PageOptions options;
  options.names = {"barn"};
  const auto page = open_page(options);
  page->show(content());
  for (const char* host :
       {"localhost", "localhost:80", "127.0.0.1:8080", "[::1]:8080", "barn:80"}) {
    INFO(host);
    CHECK(status(get(page->port(), "/", host)) == "HTTP/1.1 200");
  }
  for (const char* host :
       {"evil.example", "127.0.0.1.evil.example", "", "[::1", "[", "localhost.x"}) {
    INFO(host);
    CHECK(status(get(page->port(), "/", host)) == "HTTP/1.1 421");
  }
}

TEST_CASE("a page that nobody renews says so") {
  const auto fresh = open_page();
  CHECK(status(get(fresh->port(), "/")) == "HTTP/1.1 503");
  PageOptions options;
  options.stale_after = Seconds{0};
  const auto page = open_page(options);
  page->show(content());
  std::string answer;
  for (int i = 0; i < 1000 && !has(answer, "class=\"warning\""); ++i)
    answer = get(page->port(), "/");
  CHECK(status(answer) == "HTTP/1.1 503");
  CHECK(has(answer, "the watch itself may be down"));
  CHECK(has(answer, "full flower"));
}

TEST_CASE("what is too long or no HTTP gets a short answer, and the page goes on") {
  const auto page = open_page();
  page->show(content());
  const std::string start = "GET / HTTP/1.1\r\nHost: localhost\r\nX: ";
  CHECK(status(ask(page->port(), start + std::string(9000, 'x') + "\r\n\r\n")) == "HTTP/1.1 431");
  CHECK(status(ask(page->port(), "\x16\x03\x01 hello\r\n\r\n")) == "HTTP/1.1 400");
  CHECK(status(ask(page->port(), "GET / HTTP/9.9\r\n\r\n")) == "HTTP/1.1 400");
  { const Visitor leaves_at_once(page->port()); }
  CHECK(status(get(page->port(), "/")) == "HTTP/1.1 200");
}

TEST_CASE("more visitors than it can hold are sent away, and the page ends with them in it") {
  const auto page = open_page();
  page->show(content());
  {
    std::vector<std::unique_ptr<Visitor>> idle;
    for (int i = 0; i < 16; ++i) {
      idle.push_back(std::make_unique<Visitor>(page->port()));
      REQUIRE(idle.back()->connected());
    }
    CHECK(Visitor(page->port()).hear().empty());  // closed without a word
  }
  std::string answer;
  for (int i = 0; i < 1000 && status(answer) != "HTTP/1.1 200"; ++i)
    answer = get(page->port(), "/");
  CHECK(status(answer) == "HTTP/1.1 200");
  const Visitor waiting(page->port());
  waiting.say("GET /");
  page->stop();
  page->stop();
  CHECK_FALSE(Visitor(page->port()).connected());
}

TEST_CASE("addresses are checked before anything is opened") {
  PageOptions options;
  options.address = "0.0.0.0";
  REQUIRE_FALSE(Page::listen(options));
  CHECK(has(Page::listen(options).failure().why, "others could reach"));
  options.beyond_loopback = true;
  CHECK(Page::listen(options));
  options.address = "localhost";
  CHECK(has(Page::listen(options).failure().why, "127.0.0.1"));
  const auto page = open_page();
  PageOptions taken;
  taken.port = static_cast<std::uint16_t>(page->port());
  CHECK(has(Page::listen(taken).failure().why, "in use"));
}
