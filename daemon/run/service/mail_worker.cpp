// See mail_worker.hpp.
#include "run/service/mail_worker.hpp"

#include <chrono>
#include <utility>

namespace antherd::service {

void Permission::give(bool allowed) {
  const std::lock_guard lock(mutex_);
  allowed_ = allowed;
  given_.notify_all();
}

bool Permission::wait(const std::atomic<bool>& stop) {
  using namespace std::chrono_literals;
  std::unique_lock lock(mutex_);
  for (int i = 0; i < 100 && !allowed_ && !stop; ++i) given_.wait_for(lock, 100ms);
  return allowed_.value_or(false);
}

MailWorker::MailWorker(AskBeforeDot ask, Report report)
    : ask_(std::move(ask)), report_(std::move(report)), thread_([this] { work(); }) {}

MailWorker::~MailWorker() { stop(); }

void MailWorker::send(mail::Server server, std::int64_t item, letters::Letter letter) {
  const std::lock_guard lock(mutex_);
  job_ = Job{std::move(server), item, std::move(letter)};
  busy_ = true;
  wake_.notify_all();
}

void MailWorker::stop() {
  {
    const std::lock_guard lock(mutex_);
    stop_ = true;
    wake_.notify_all();
  }
  if (thread_.joinable()) thread_.join();
}

void MailWorker::work() {
  while (true) {
    std::unique_lock lock(mutex_);
    wake_.wait(lock, [this] { return stop_ || job_.has_value(); });
    if (stop_) return;
    const Job job = std::move(*job_);
    job_.reset();
    lock.unlock();
    const auto before_dot = [&] {
      auto permission = std::make_shared<Permission>();
      ask_(job.item, permission);
      return permission->wait(stop_);
    };
    report_(job.item, mail::send(job.server, job.letter, before_dot, stop_));
  }
}

}  // namespace antherd::service
