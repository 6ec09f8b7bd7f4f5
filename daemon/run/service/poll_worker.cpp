// See poll_worker.hpp.
#include "run/service/poll_worker.hpp"

#include <utility>

namespace antherd::service {
namespace {

constexpr int threads_at_once = 4;  // stations that may be slow at one time

}  // namespace

PollWorker::PollWorker(Report report, std::function<Instant()> now)
    : report_(std::move(report)), now_(std::move(now)) {
  for (int i = 0; i < threads_at_once; ++i) threads_.emplace_back([this] { work(); });
}

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
  for (std::thread& thread : threads_) {
    if (thread.joinable()) thread.join();
  }
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
