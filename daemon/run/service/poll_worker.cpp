// See poll_worker.hpp.
#include "run/service/poll_worker.hpp"

#include <utility>

#include "edge/station/sign_of_life.hpp"

namespace antherd::service {
namespace {

constexpr int threads_at_once = 4;  // stations that may be slow at one time

}  // namespace

PollWorker::PollWorker(Report report, ReportLife life, Now now)
    : report_(std::move(report)), life_(std::move(life)), now_(std::move(now)) {
  for (int i = 0; i < threads_at_once; ++i) threads_.emplace_back([this] { work(); });
}

PollWorker::~PollWorker() { stop(); }

void PollWorker::ask(std::string name, station::HttpForm form, station::PollMemory memory) {
  const std::lock_guard lock(mutex_);
  jobs_.push_back(Job{std::move(name), std::move(form), std::move(memory)});
  wake_.notify_all();
}

void PollWorker::give_sign_of_life(std::string url) {
  const std::lock_guard lock(mutex_);
  jobs_.push_back(Job{"", {}, {}, std::move(url)});
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
    if (!job.sign_of_life.empty()) {
      life_(station::give_sign_of_life(job.sign_of_life, stop_));
      continue;
    }
    report_(job.name, station::poll(
                          job.form, job.memory, [&] { return now_(job.form); }, stop_));
  }
}

}  // namespace antherd::service
