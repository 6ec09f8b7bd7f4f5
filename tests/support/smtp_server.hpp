// A mail server for tests that does what its script says: answers, refuses, drops the line, falls
// silent. Loopback, a free port, one thread, one conversation at a time, in the clear.
#pragma once

#include <arpa/inet.h>
#include <netinet/in.h>
#include <poll.h>
#include <sys/eventfd.h>
#include <sys/socket.h>
#include <unistd.h>

#include <chrono>
#include <condition_variable>
#include <map>
#include <mutex>
#include <stdexcept>
#include <string>
#include <string_view>
#include <thread>
#include <vector>

namespace antherd::testing {

/// Answers that are no answers.
constexpr const char* hang_up = "(hang up)";
constexpr const char* keep_silent = "(keep silent)";

struct SmtpScript {
  std::string greeting = "220 mail.larkspur.example ready";
  std::vector<std::string> offers = {"AUTH PLAIN LOGIN", "8BITMIME"};
  /// By command: HELO, STARTTLS, AUTH (after the credentials), MAIL, RCPT ("RCPT owner@x.example"
  /// for one of them), DATA, dot (after the letter), QUIT. What is not here is answered well.
  std::map<std::string, std::string> answers = {};
  bool hang_up_in_body = false;  // after the first bytes of the letter
  std::chrono::milliseconds thinks{0};  // before each answer
};

class SmtpServer {
 public:
  explicit SmtpServer(SmtpScript script = {}) : script_(std::move(script)) {
    listener_ = ::socket(AF_INET, SOCK_STREAM | SOCK_CLOEXEC, 0);
    sockaddr_in address{};
    address.sin_family = AF_INET;
    address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
    auto* plain = reinterpret_cast<sockaddr*>(&address);
    socklen_t size = sizeof address;
    if (::bind(listener_, plain, size) != 0 || ::listen(listener_, 8) != 0 ||
        ::getsockname(listener_, plain, &size) != 0) {
      throw std::runtime_error("no port for the test's mail server");
    }
    port_ = ntohs(address.sin_port);
    ending_ = ::eventfd(0, EFD_CLOEXEC);
    thread_ = std::thread([this] { serve(); });
  }
  SmtpServer(const SmtpServer&) = delete;
  SmtpServer& operator=(const SmtpServer&) = delete;
  ~SmtpServer() {
    const std::uint64_t one = 1;
    [[maybe_unused]] const ssize_t written = ::write(ending_, &one, sizeof one);
    thread_.join();
    ::close(listener_);
    ::close(ending_);
  }

  std::string url() const { return "smtp://127.0.0.1:" + std::to_string(port_); }
  int port() const { return port_; }
  /// Every byte that came from clients, in order.
  std::string wire() const {
    const std::lock_guard lock(mutex_);
    return wire_;
  }
  /// The letters that were accepted, dots unstuffed, with CR LF.
  std::vector<std::string> letters() const {
    const std::lock_guard lock(mutex_);
    return letters_;
  }
  /// Waits until the clients' bytes end with `text`. @return whether they did within 5 s
  bool wait_for_end(std::string_view text) const {
    std::unique_lock lock(mutex_);
    return came_.wait_for(lock, std::chrono::seconds(5), [&] { return wire_.ends_with(text); });
  }
  void answer(const std::string& command, const std::string& reply) {
    const std::lock_guard lock(mutex_);
    script_.answers[command] = reply;
  }

 private:
  void serve() {
    while (readable(listener_)) {
      client_ = ::accept4(listener_, nullptr, nullptr, SOCK_CLOEXEC);
      if (client_ < 0) continue;
      buffer_.clear();
      talk();
      ::close(client_);
    }
  }

  /// Waits for bytes; false when the test is over.
  bool readable(int socket) const {
    pollfd waits[2] = {{socket, POLLIN, 0}, {ending_, POLLIN, 0}};
    while (::poll(waits, 2, -1) < 0) {
    }
    return waits[1].revents == 0;
  }

  bool receive() {
    char bytes[4096];
    if (!readable(client_)) return false;
    const ssize_t count = ::recv(client_, bytes, sizeof bytes, 0);
    if (count <= 0) return false;
    const std::string_view piece(bytes, static_cast<std::size_t>(count));
    buffer_ += piece;
    const std::lock_guard lock(mutex_);
    wire_ += piece;
    came_.notify_all();
    return true;
  }

  /// @return the text before `end`, or nothing when the line is gone
  bool read_until(std::string_view end, std::string& text) {
    std::size_t at = 0;
    while ((at = buffer_.find(end)) == std::string::npos) {
      if (!receive()) return false;
    }
    text = buffer_.substr(0, at);
    buffer_.erase(0, at + end.size());
    return true;
  }

  /// @return whether the conversation goes on
  bool say(const std::string& reply) {
    if (script_.thinks.count() > 0) std::this_thread::sleep_for(script_.thinks);
    if (reply == hang_up) return false;
    if (reply == keep_silent) {
      while (receive()) {
      }
      return false;
    }
    const std::string line = reply + "\r\n";
    return ::send(client_, line.data(), line.size(), MSG_NOSIGNAL) ==
           static_cast<ssize_t>(line.size());
  }

  std::string reply_to(const std::string& command, const std::string& otherwise) const {
    const std::lock_guard lock(mutex_);
    const auto found = script_.answers.find(command);
    return found == script_.answers.end() ? otherwise : found->second;
  }

  void talk() {
    std::string line;
    if (!say(script_.greeting)) return;
    while (read_until("\r\n", line)) {
      const std::string verb = line.substr(0, line.find(' '));
      bool goes_on = false;
      if (verb == "EHLO") {
        goes_on = say(hello());
      } else if (verb == "AUTH") {
        goes_on = login(line);
      } else if (verb == "DATA") {
        goes_on = data();
      } else if (verb == "QUIT") {
        say(reply_to("QUIT", "221 2.0.0 bye"));
      } else if (verb == "RCPT") {
        goes_on = say(reply_to("RCPT " + address_in(line), reply_to("RCPT", "250 2.1.5 ok")));
      } else if (verb == "MAIL" || verb == "HELO") {
        goes_on = say(reply_to(verb, "250 2.1.0 ok"));
      } else {
        goes_on = say(reply_to(verb, "502 5.5.2 what?"));
      }
      if (!goes_on) return;
    }
  }

  static std::string address_in(const std::string& line) {
    const std::size_t begin = line.find('<'), end = line.find('>');
    return begin < end && end != std::string::npos ? line.substr(begin + 1, end - begin - 1) : "";
  }

  std::string hello() const {
    std::string reply;
    for (const std::string& offer : script_.offers) reply += "250-" + offer + "\r\n";
    return reply_to("EHLO", reply + "250 HELP");
  }

  bool login(const std::string& line) {
    std::string credentials;
    if (line == "AUTH PLAIN" && !(say("334 ") && read_until("\r\n", credentials))) return false;
    if (line == "AUTH LOGIN") {
      if (!say("334 VXNlcm5hbWU6") || !read_until("\r\n", credentials)) return false;
      if (!say("334 UGFzc3dvcmQ6") || !read_until("\r\n", credentials)) return false;
    }
    return say(reply_to("AUTH", "235 2.7.0 welcome"));
  }

  bool data() {
    const std::string reply = reply_to("DATA", "354 go on");
    if (!say(reply)) return false;
    if (!reply.starts_with("354")) return true;
    if (script_.hang_up_in_body) {
      receive();
      return false;
    }
    std::string text;
    if (!read_until("\r\n.\r\n", text)) return false;
    const std::string outcome = reply_to("dot", "250 2.0.0 queued as 4F1");
    if (outcome.starts_with("2")) {
      const std::lock_guard lock(mutex_);
      letters_.push_back(without_stuffing(text + "\r\n"));
    }
    return say(outcome);
  }

  static std::string without_stuffing(const std::string& text) {
    std::string plain;
    bool line_begins = true;
    for (char byte : text) {
      if (!(line_begins && byte == '.')) plain += byte;
      line_begins = byte == '\n';
    }
    return plain;
  }

  SmtpScript script_;
  int listener_ = -1;
  int client_ = -1;
  int ending_ = -1;
  int port_ = 0;
  std::string buffer_;
  mutable std::mutex mutex_;
  mutable std::condition_variable came_;
  std::string wire_;
  std::vector<std::string> letters_;
  std::thread thread_;
};

}  // namespace antherd::testing
