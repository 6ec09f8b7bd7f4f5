// See program.hpp.
#include "program.hpp"
#include "support/paths.hpp"

#include <fcntl.h>
#include <poll.h>
#include <signal.h>
#include <stdlib.h>
#include <sys/socket.h>
#include <sys/syscall.h>
#include <sys/un.h>
#include <sys/wait.h>
#include <unistd.h>

#include <array>
#include <cerrno>
#include <cstring>
#include <stdexcept>

namespace program {
namespace {

using Clock = std::chrono::steady_clock;

const std::string binary = paths::build() + "/daemon/antherd";

[[noreturn]] void become(const std::vector<std::string>& arguments, const std::string& folder) {
  std::vector<char*> words{const_cast<char*>(binary.c_str())};
  for (const auto& argument : arguments) words.push_back(const_cast<char*>(argument.c_str()));
  words.push_back(nullptr);
  if (!folder.empty() && chdir(folder.c_str()) != 0) _exit(126);
  execv(binary.c_str(), words.data());
  _exit(127);
}

int status_of(int waited) {
  return WIFEXITED(waited) ? WEXITSTATUS(waited) : 128 + WTERMSIG(waited);
}

/// Reads what is there; false at the end.
bool take(int descriptor, std::string& into) {
  std::array<char, 65536> bytes;
  const ssize_t n = read(descriptor, bytes.data(), bytes.size());
  if (n > 0) into.append(bytes.data(), static_cast<std::size_t>(n));
  return n > 0 || (n < 0 && errno == EINTR);
}

}  // namespace

Ended run(const std::vector<std::string>& arguments, const std::string& folder) {
  int out[2], err[2];
  if (pipe2(out, O_CLOEXEC) != 0 || pipe2(err, O_CLOEXEC) != 0) throw std::runtime_error("pipe");
  const pid_t process = fork();
  if (process < 0) throw std::runtime_error("fork");
  if (process == 0) {
    dup2(out[1], STDOUT_FILENO);
    dup2(err[1], STDERR_FILENO);
    become(arguments, folder);
  }
  close(out[1]);
  close(err[1]);
  Ended ended;
  bool out_open = true, err_open = true;
  const auto end = Clock::now() + std::chrono::seconds{60};
  while ((out_open || err_open) && Clock::now() < end) {
    pollfd wanted[2] = {{out_open ? out[0] : -1, POLLIN, 0}, {err_open ? err[0] : -1, POLLIN, 0}};
    if (poll(wanted, 2, 1000) <= 0) continue;
    if (wanted[0].revents != 0) out_open = take(out[0], ended.out);
    if (wanted[1].revents != 0) err_open = take(err[0], ended.err);
  }
  if (out_open || err_open) kill(process, SIGKILL);
  close(out[0]);
  close(err[0]);
  int waited = 0;
  waitpid(process, &waited, 0);
  ended.status = status_of(waited);
  return ended;
}

Service::Service(const std::string& folder, std::vector<std::string> more) : folder_(folder) {
  static int count = 0;
  socket_path_ = folder + "/notices-" + std::to_string(++count);
  notices_ = socket(AF_UNIX, SOCK_DGRAM | SOCK_CLOEXEC | SOCK_NONBLOCK, 0);
  sockaddr_un address{};
  address.sun_family = AF_UNIX;
  std::strncpy(address.sun_path, socket_path_.c_str(), sizeof address.sun_path - 1);
  if (bind(notices_, reinterpret_cast<sockaddr*>(&address), sizeof address) != 0) {
    throw std::runtime_error("bind " + socket_path_);
  }
  int err[2];
  if (pipe2(err, O_CLOEXEC) != 0) throw std::runtime_error("pipe");
  std::vector<std::string> arguments{"run", "--settings", folder + "/antherd.toml"};
  arguments.insert(arguments.end(), more.begin(), more.end());
  process_ = fork();
  if (process_ < 0) throw std::runtime_error("fork");
  if (process_ == 0) {
    setenv("NOTIFY_SOCKET", socket_path_.c_str(), 1);
    dup2(err[1], STDERR_FILENO);
    become(arguments, folder);
  }
  close(err[1]);
  errors_ = err[0];
}

Service::~Service() {
  if (!status_) {
    kill(process_, SIGKILL);
    waitpid(process_, nullptr, 0);
  }
  close(errors_);
  close(notices_);
}

void Service::listen(int milliseconds) {
  pollfd wanted[2] = {{notices_, POLLIN, 0}, {errors_, POLLIN, 0}};
  if (poll(wanted, 2, milliseconds) <= 0) return;
  if ((wanted[0].revents & POLLIN) != 0 && take(notices_, news_)) news_ += "\n";
  if (wanted[1].revents != 0 && !take(errors_, words_)) {
    close(errors_);
    errors_ = -1;
  }
}

bool Service::told(const std::string& word, std::chrono::seconds at_most) {
  const auto end = Clock::now() + at_most;
  news_.clear();
  while (Clock::now() < end && running()) {
    listen(200);
    if (news_.find(word) != std::string::npos) return true;
  }
  return news_.find(word) != std::string::npos;
}

bool Service::said(const std::string& text, std::chrono::seconds at_most) {
  const auto end = Clock::now() + at_most;
  while (words_.find(text) == std::string::npos && Clock::now() < end && running()) listen(200);
  return words_.find(text) != std::string::npos;
}

void Service::signal(int number) const { kill(process_, number); }

bool Service::running() {
  int waited = 0;
  if (!status_ && waitpid(process_, &waited, WNOHANG) == process_) {
    status_ = status_of(waited);
    while (errors_ >= 0 && take(errors_, words_)) {
    }
  }
  return !status_;
}

std::optional<std::pair<int, std::chrono::milliseconds>> Service::wait(
    std::chrono::seconds at_most) {
  const auto from = Clock::now();
  while (running() && Clock::now() < from + at_most) listen(10);
  if (!status_) return std::nullopt;
  return std::pair{*status_,
                   std::chrono::duration_cast<std::chrono::milliseconds>(Clock::now() - from)};
}

}  // namespace program
