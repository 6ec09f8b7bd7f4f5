// One thread for one SMTP conversation at a time: the final dot blocks while the server thinks, so
// it must not block the loop. The worker owns nothing but the letter in its hands.
#pragma once

#include <atomic>
#include <condition_variable>
#include <cstdint>
#include <functional>
#include <memory>
#include <mutex>
#include <optional>
#include <thread>

#include "core/letters/letter.hpp"
#include "edge/mail/mail.hpp"

namespace antherd::service {

/// The owner's answer to "may the last dot go?".
class Permission {
 public:
  void give(bool allowed);
  /// Waits at most 10 s, or until `stop`.
  bool wait(const std::atomic<bool>& stop);

 private:
  std::mutex mutex_;
  std::condition_variable given_;
  std::optional<bool> allowed_;
};

class MailWorker {
 public:
  /// Called in the worker's thread; both must only post to the owner.
  using AskBeforeDot = std::function<void(std::int64_t item, std::shared_ptr<Permission>)>;
  using Report = std::function<void(std::int64_t item, mail::Spoken)>;

  MailWorker(AskBeforeDot ask, Report report);
  ~MailWorker();

  /// Hands one letter over. Only when not busy.
  void send(mail::Server server, std::int64_t item, letters::Letter letter);
  bool busy() const { return busy_; }
  /// The owner has read the report.
  void rest() { busy_ = false; }
  /// Ends a conversation under way within 0.2 s and the thread with it.
  void stop();

 private:
  struct Job {
    mail::Server server;
    std::int64_t item = 0;
    letters::Letter letter;
  };
  void work();

  AskBeforeDot ask_;
  Report report_;
  std::atomic<bool> stop_{false};
  std::mutex mutex_;
  std::condition_variable wake_;
  std::optional<Job> job_;
  bool busy_ = false;  // the owner's view
  std::thread thread_;
};

}  // namespace antherd::service
