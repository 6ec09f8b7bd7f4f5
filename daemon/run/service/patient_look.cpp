// See patient_look.hpp.
#include "run/service/patient_look.hpp"

#include <algorithm>
#include <condition_variable>
#include <mutex>
#include <thread>
#include <utility>

namespace antherd::service {

struct PatientLook::Answer {
  std::mutex mutex;
  std::condition_variable came;
  std::optional<station::Look> look;

  bool wait(std::chrono::milliseconds patience, const std::atomic<bool>* stopping);
};

/// Whether the answer came within `patience`.
bool PatientLook::Answer::wait(std::chrono::milliseconds patience,
                               const std::atomic<bool>* stopping) {
  constexpr std::chrono::milliseconds slice{50};
  std::unique_lock lock(mutex);
  for (auto left = patience; !look && left.count() > 0; left -= slice) {
    if (stopping != nullptr && *stopping) break;
    came.wait_for(lock, std::min(left, slice));
  }
  return look.has_value();
}

std::optional<station::Look> PatientLook::look(const Looker& looker, const station::DropForm& form,
                                               const std::vector<station::Bookmark>& bookmarks,
                                               Instant now, std::chrono::milliseconds patience,
                                               const std::atomic<bool>* stopping) {
  // It was waited for in full once; a folder that is silent is only asked whether it has answered.
  if (awaited_ && !awaited_->wait({}, stopping)) return std::nullopt;
  awaited_ = std::make_shared<Answer>();
  // No call can be taken back from a share that hangs, so the thread is left to it.
  std::thread([answer = awaited_, looker, form, bookmarks, now] {
    station::Look found = looker(form, bookmarks, now);
    const std::lock_guard lock(answer->mutex);
    answer->look = std::move(found);
    answer->came.notify_all();
  }).detach();
  if (!awaited_->wait(patience, stopping)) return std::nullopt;
  return std::move(std::exchange(awaited_, nullptr)->look);
}

}  // namespace antherd::service
