// The page's server; see page.hpp. The only file that knows Beast.
#include "edge/page/page.hpp"

// clang-format off
#include <utility>  // Asio of Boost 1.74 needs it first
// clang-format on

#include <algorithm>
#include <array>
#include <boost/asio/io_context.hpp>
#include <boost/asio/ip/tcp.hpp>
#include <boost/asio/post.hpp>
#include <boost/asio/steady_timer.hpp>
#include <boost/beast/core.hpp>
#include <boost/beast/http.hpp>
#include <optional>
#include <thread>

namespace antherd::page {

namespace asio = boost::asio;
namespace beast = boost::beast;
namespace http = beast::http;
using tcp = asio::ip::tcp;

namespace {

constexpr int most_visitors = 16;                   // a household and its phones
constexpr std::uint32_t longest_header = 8 * 1024;  // browsers send about 1 KiB
constexpr int most_scraps = 16;                     // reads of what nobody asked for
constexpr std::chrono::seconds patience{10};        // for each step of a conversation

using Answer = http::response<http::string_body>;

constexpr const char* page_policy =
    "default-src 'none'; style-src 'self'; img-src 'self'; base-uri 'none'; form-action 'none'; "
    "frame-ancestors 'none'";
constexpr const char* picture_policy = "default-src 'none'; style-src 'unsafe-inline'";

Answer answer(http::status status, const char* type, std::string body,
              const char* policy = page_policy) {
  Answer result{status, 11};
  result.set(http::field::content_type, type);
  result.set(http::field::cache_control, "no-store");
  result.set("Content-Security-Policy", policy);
  result.set("X-Content-Type-Options", "nosniff");
  result.set("Referrer-Policy", "no-referrer");
  result.set("Cross-Origin-Resource-Policy", "same-origin");
  result.keep_alive(false);
  result.body() = std::move(body);
  result.prepare_payload();
  return result;
}

Answer sentence(http::status status, std::string text) {
  return answer(status, "text/plain; charset=utf-8", std::move(text) + "\n");
}

// "[::1]:8080" → "::1", "localhost:8080" → "localhost".
std::string host_name(beast::string_view host) {
  if (!host.empty() && host.front() == '[') {
    return std::string(host.substr(1, host.find(']') == host.npos ? 0 : host.find(']') - 1));
  }
  return std::string(host.substr(0, host.find(':')));
}

}  // namespace

struct Page::Inside {
  explicit Inside(PageOptions wished)
      : options(std::move(wished)), acceptor(context), rest(context), age(context) {}

  PageOptions options;
  int visitors = 0;  // outlives the context and the visits in it
  asio::io_context context{1};
  tcp::acceptor acceptor;
  asio::steady_timer rest;  // after a failed accept
  asio::steady_timer age;   // of the content
  std::optional<PageContent> content;
  bool stale = true;
  int port = 0;
  std::thread thread;

  void accept();
  void renew(PageContent fresh);
  bool names_us(beast::string_view host) const;
  Answer answer_to(const http::request<http::empty_body>& request) const;
};

namespace {

// One conversation: one request, one answer, the end.
struct Visit : std::enable_shared_from_this<Visit> {
  Visit(tcp::socket socket, int& count) : stream(std::move(socket)), visitors(count) { ++visitors; }
  ~Visit() { --visitors; }
  Visit(const Visit&) = delete;
  Visit& operator=(const Visit&) = delete;

  beast::tcp_stream stream;
  int& visitors;
  beast::flat_buffer buffer{longest_header};
  http::request_parser<http::empty_body> parser;
  std::optional<Answer> reply;
  std::array<char, 4096> scrap{};

  template <class Reply>
  void begin(Reply make_reply) {
    parser.header_limit(longest_header);
    stream.expires_after(patience);
    http::async_read_header(
        stream, buffer, parser,
        [self = shared_from_this(), make_reply](beast::error_code error, std::size_t) {
          if (error == http::error::header_limit || error == http::error::buffer_overflow) {
            self->send(sentence(http::status::request_header_fields_too_large, "too long"));
          } else if (error.category() == beast::error_code(http::error::bad_method).category() &&
                     error != http::error::end_of_stream && error != http::error::partial_message) {
            self->send(sentence(http::status::bad_request, "not a request of HTTP"));
          } else if (!error) {
            self->send(make_reply(self->parser.get()));
          }
        });
  }

  void send(Answer ready) {
    reply.emplace(std::move(ready));
    stream.expires_after(patience);
    http::async_write(stream, *reply, [self = shared_from_this()](beast::error_code, std::size_t) {
      beast::error_code ignored;
      self->stream.socket().shutdown(tcp::socket::shutdown_send, ignored);
      self->drain(most_scraps);
    });
  }

  // Closing on unread bytes would reset the line and lose the answer on its way.
  void drain(int scraps) {
    if (scraps == 0) return;
    stream.async_read_some(asio::buffer(scrap),
                           [self = shared_from_this(), scraps](beast::error_code error, auto) {
                             if (!error) self->drain(scraps - 1);
                           });
  }
};

}  // namespace

bool Page::Inside::names_us(beast::string_view host) const {
  const std::string name = host_name(host);
  if (name == "localhost" || name == options.address) return true;
  if (std::count(options.names.begin(), options.names.end(), name) > 0) return true;
  boost::system::error_code not_an_address;
  asio::ip::make_address(name, not_an_address);
  return !not_an_address;  // a number cannot be pointed here by somebody's name server
}

Answer Page::Inside::answer_to(const http::request<http::empty_body>& request) const {
  if (request.method() != http::verb::get) {
    Answer refusal = sentence(http::status::method_not_allowed, "this page can only be read");
    refusal.set(http::field::allow, "GET");
    return refusal;
  }
  if (!names_us(request[http::field::host])) {
    return sentence(http::status::misdirected_request, "this computer does not go by that name");
  }
  const auto target = request.target();
  const std::string path(target.substr(0, target.find('?')));
  if (path == "/style.css") {
    return answer(http::status::ok, "text/css; charset=utf-8", style_sheet());
  }
  if (!content) return sentence(http::status::service_unavailable, "antherd has just started");
  const http::status status = stale ? http::status::service_unavailable : http::status::ok;
  if (path == "/") return answer(status, "text/html; charset=utf-8", html_of(*content, stale));
  if (path == "/now.json") return answer(status, "application/json", content->json);
  for (std::size_t i = 0; i < content->charts.size(); ++i) {
    if (path != "/chart-" + std::to_string(i) + ".svg") continue;
    return answer(http::status::ok, "image/svg+xml", content->charts[i].svg, picture_policy);
  }
  return sentence(http::status::not_found, "there is no such page; begin at /");
}

void Page::Inside::accept() {
  acceptor.async_accept([this](boost::system::error_code error, tcp::socket socket) {
    if (error == asio::error::operation_aborted) return;
    if (error) {  // no descriptors left, say: not at once again
      rest.expires_after(std::chrono::seconds{1});
      rest.async_wait([this](boost::system::error_code ended) {
        if (!ended) accept();
      });
      return;
    }
    if (visitors < most_visitors) {
      std::make_shared<Visit>(std::move(socket), visitors)->begin([this](const auto& request) {
        return answer_to(request);
      });
    }
    accept();
  });
}

void Page::Inside::renew(PageContent fresh) {
  content = std::move(fresh);
  stale = false;
  age.expires_after(options.stale_after);
  age.async_wait([this](boost::system::error_code ended) {
    if (!ended) stale = true;
  });
}

Result<std::unique_ptr<Page>> Page::listen(const PageOptions& options) {
  const auto failed = [&](const std::string& why) {
    return Failure{"open the local page", options.address + ":" + std::to_string(options.port), why,
                   "the service goes on without it"};
  };
  boost::system::error_code error;
  const asio::ip::address address = asio::ip::make_address(options.address, error);
  if (error) return failed("not an address like 127.0.0.1 or ::1");
  if (!address.is_loopback() && !options.beyond_loopback) {
    return failed("others could reach this address, and that was not asked for");
  }
  auto inside = std::make_unique<Inside>(options);
  const tcp::endpoint place(address, options.port);
  tcp::acceptor& acceptor = inside->acceptor;
  if (!error) acceptor.open(place.protocol(), error);
  if (!error) acceptor.set_option(tcp::acceptor::reuse_address(true), error);
  if (!error) acceptor.bind(place, error);
  if (!error) acceptor.listen(most_visitors, error);
  if (error) return failed(error.message());
  inside->port = acceptor.local_endpoint().port();
  inside->accept();
  inside->thread = std::thread([context = &inside->context] { context->run(); });
  return std::unique_ptr<Page>(new Page(std::move(inside)));
}

Page::Page(std::unique_ptr<Inside> inside) : inside_(std::move(inside)) {}
Page::~Page() { stop(); }

void Page::show(PageContent content) {
  asio::post(inside_->context, [inside = inside_.get(), fresh = std::move(content)]() mutable {
    inside->renew(std::move(fresh));
  });
}

int Page::port() const { return inside_->port; }

void Page::stop() {
  inside_->context.stop();
  if (inside_->thread.joinable()) inside_->thread.join();
  boost::system::error_code ignored;
  inside_->acceptor.close(ignored);
}

}  // namespace antherd::page
