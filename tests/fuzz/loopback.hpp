// A loopback server for fuzzers that answers with bytes it is given and nothing else. One thread,
// one conversation at a time.
#pragma once

#include <arpa/inet.h>
#include <netinet/in.h>
#include <sys/socket.h>
#include <unistd.h>

#include <functional>
#include <string>
#include <thread>

namespace fuzzing {

class Loopback {
 public:
  /// @param talk  holds one conversation on the socket it is given; the socket is closed after it
  explicit Loopback(std::function<void(int)> talk) : talk_(std::move(talk)) {
    listener_ = ::socket(AF_INET, SOCK_STREAM | SOCK_CLOEXEC, 0);
    sockaddr_in address{};
    address.sin_family = AF_INET;
    address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
    auto* plain = reinterpret_cast<sockaddr*>(&address);
    socklen_t size = sizeof address;
    if (::bind(listener_, plain, size) != 0 || ::listen(listener_, 8) != 0 ||
        ::getsockname(listener_, plain, &size) != 0) {
      ::abort();
    }
    port_ = ntohs(address.sin_port);
    std::thread([this] {
      for (;;) {
        const int line = ::accept4(listener_, nullptr, nullptr, SOCK_CLOEXEC);
        if (line < 0) continue;
        // A peer that waits for more than there is to say must not hold the next run up: silence
        // ends the conversation. What a peer makes of that is one more thing to try.
        const timeval patience{0, 5'000};
        ::setsockopt(line, SOL_SOCKET, SO_RCVTIMEO, &patience, sizeof patience);
        ::setsockopt(line, SOL_SOCKET, SO_SNDTIMEO, &patience, sizeof patience);
        talk_(line);
        ::close(line);
      }
    }).detach();
  }
  std::string port() const { return std::to_string(port_); }

 private:
  std::function<void(int)> talk_;
  int listener_ = -1;
  int port_ = 0;
};

/// Writes all of it, or as much as the peer takes.
inline void write_all(int line, std::string_view bytes) {
  while (!bytes.empty()) {
    const ssize_t written = ::send(line, bytes.data(), bytes.size(), MSG_NOSIGNAL);
    if (written <= 0) return;
    bytes.remove_prefix(static_cast<std::size_t>(written));
  }
}

}  // namespace fuzzing
