// See poll_worker.hpp.
#include "run/service/poll_worker.hpp"

#include <utility>

namespace antherd::service {

PollWorker::PollWorker(Report report, std::function<Instant()> now)
    : report_(std::move(report)), now_(std::move(now)), thread_([this] { work(); }) {}

PollWorker::~PollWorker() { stop(); }

void PollWorker::ask(std::string name, station::HttpForm form, station::PollMemory memory) {
  const std::lock_guard lock(mutex_);
  jobs_.push_back(Job{std::move(name), std::move(form), std::move(memory)});
  wake_.notify_all();
}

void PollWorker::stop() {
  {
    const std::lock_guard lock(mutex_);
    stop_ = true;
    wake_.notify_all();
  }
  if (thread_.joinable()) thread_.join();
}

void PollWorker::work() {
  while (true) {
    std::unique_lock lock(mutex_);
    wake_.wait(lock, [this] { return stop_ || !jobs_.empty(); });
    if (stop_) return;
    const Job job = std::move(jobs_.front());
    jobs_.pop_front();
    lock.unlock();
    report_(job.name, station::poll(job.form, job.memory, now_, stop_));
  }
}

}  // namespace antherd::service
