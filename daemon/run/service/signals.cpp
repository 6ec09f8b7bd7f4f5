// See signals.hpp.
#include "run/service/signals.hpp"

#include <pthread.h>
#include <signal.h>
#include <unistd.h>

#include <utility>

#include "run/service/log.hpp"
#include "run/service/manager.hpp"

namespace antherd::service {
namespace {

sigset_t heard() {
  sigset_t set;
  sigemptyset(&set);
  for (const int number : {SIGTERM, SIGINT, SIGHUP}) sigaddset(&set, number);
  return set;
}

}  // namespace

Signals::Signals() {
  const sigset_t set = heard();
  pthread_sigmask(SIG_BLOCK, &set, nullptr);
  thread_ = std::thread([this] { listen(); });
}

Signals::~Signals() {
  ended_ = true;
  pthread_kill(thread_.native_handle(), SIGHUP);  // it sees that it has ended
  thread_.join();
}

void Signals::heed(Heed heed) {
  const std::lock_guard lock(mutex_);
  heed_ = std::move(heed);
  if (std::exchange(reload_waits_, false)) heed_(SIGHUP);
}

void Signals::heed_reload(std::function<void()> reload) {
  const std::lock_guard lock(mutex_);
  reload_ = std::move(reload);
  if (reload_ && std::exchange(reload_waits_, false)) reload_();
}

void Signals::rest() {
  const std::lock_guard lock(mutex_);
  resting_ = true;
}

void Signals::listen() {
  const sigset_t set = heard();
  for (int number = 0; sigwait(&set, &number) == 0 && !ended_;) take(number);
}

void Signals::take(int number) {
  const std::lock_guard lock(mutex_);
  if (number != SIGHUP) stopping_ = true;
  if (resting_) return;
  if (heed_) {
    heed_(number);
  } else if (number == SIGHUP && reload_) {
    reload_();
  } else if (number == SIGHUP) {
    reload_waits_ = true;
  } else {
    tell_stopping();
    log_info("stopping: told to stop before the watch had begun");
    _exit(0);
  }
}

}  // namespace antherd::service
