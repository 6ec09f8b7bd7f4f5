// A few threads that ask the HTTP stations. A slow station holds one of them for at most its 20 s;
// the others go on, and the loop is never delayed.
#pragma once

#include <atomic>
#include <condition_variable>
#include <deque>
#include <functional>
#include <mutex>
#include <string>
#include <thread>
#include <vector>

#include "edge/station/poll.hpp"

namespace antherd::service {

class PollWorker {
 public:
  using Report = std::function<void(std::string station, station::Answer)>;
  using ReportLife = std::function<void(Outcome)>;

  using Now = std::function<Instant(const station::HttpForm&)>;

  /// @param report, life  called in a worker's thread; must only post to the owner
  /// @param now  the service's time, for stations without their own; called in a worker's thread
  PollWorker(Report report, ReportLife life, Now now);
  ~PollWorker();

  void ask(std::string name, station::HttpForm form, station::PollMemory memory);
  /// One sign of life, after the stations that wait to be asked.
  void give_sign_of_life(std::string url);
  void stop();

 private:
  struct Job {
    std::string name;
    station::HttpForm form;
    station::PollMemory memory;
    std::string sign_of_life = {};  // an address: no station is asked, this is
  };
  void work();

  Report report_;
  ReportLife life_;
  Now now_;
  std::atomic<bool> stop_{false};
  std::mutex mutex_;
  std::condition_variable wake_;
  std::deque<Job> jobs_;
  std::vector<std::thread> threads_;
};

}  // namespace antherd::service
