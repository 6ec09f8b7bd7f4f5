// The signals of the service: heard by a thread of their own from the service's first moment on, so
// that none of them ends it halfway. It must not know what is done about them.
#pragma once

#include <atomic>
#include <functional>
#include <mutex>
#include <thread>

namespace antherd::service {

/// Make one before any other thread is made: those made later do not hear these signals.
class Signals {
 public:
  /// @param number  SIGTERM, SIGINT or SIGHUP
  using Heed = std::function<void(int number)>;

  Signals();
  ~Signals();
  Signals(const Signals&) = delete;
  Signals& operator=(const Signals&) = delete;

  /// From now on each signal is handed to `heed`, in this class's thread, and a SIGHUP that came
  /// before at once. Until here SIGTERM and SIGINT end the process with 0: nothing is in memory
  /// that is not made again, and the store stands power cuts.
  void heed(Heed heed);
  /// Until `heed`: a SIGHUP is handed to this, in this class's thread; nothing: it waits again.
  void heed_reload(std::function<void()> reload);
  /// From now on signals do nothing: the service is ending.
  void rest();
  /// Whether the service was told to stop; may be looked at from any thread.
  const std::atomic<bool>& stopping() const { return stopping_; }

 private:
  void listen();
  void take(int number);

  std::atomic<bool> stopping_{false}, ended_{false};
  std::mutex mutex_;
  Heed heed_;
  std::function<void()> reload_;
  bool resting_ = false, reload_waits_ = false;
  std::thread thread_;
};

}  // namespace antherd::service
