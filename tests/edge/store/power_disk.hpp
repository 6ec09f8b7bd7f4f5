// A disk in memory that can lose its power: what was not forced to it is then forgotten, kept or
// torn, write by write. It becomes SQLite's default file system while it lives. All in one
// thread: the locks of the log are granted without asking, so a reader must be idle while another
// connection writes.
#pragma once

#include <sqlite3.h>

#include <cstdint>
#include <map>
#include <random>
#include <set>
#include <string>
#include <vector>

namespace ground {

class PowerDisk {
 public:
  explicit PowerDisk(std::uint32_t seed);
  PowerDisk(const PowerDisk&) = delete;
  PowerDisk& operator=(const PowerDisk&) = delete;
  ~PowerDisk();

  /// The power goes at the n-th write, truncation or forced write from now.
  void cut_after(int operations) { left_ = operations; }
  bool dead() const { return dead_; }
  /// The power comes back: the disk holds what was forced, and what chance left of the rest.
  void revive();
  /// The n-th read, write, truncation or forced write from now fails, and the `count` − 1 after it;
  /// the power stays. A write that fails may have reached the disk in part.
  void fail_at(int operation, int count) {
    sound_ = operation - 1;
    failing_ = count;
  }
  /// Whether a failure that was asked for is still to come.
  bool failure_ahead() const { return failing_ > 0; }
  /// The process goes at once, nothing that it still does reaches the disk; see wake().
  void stop() { dead_ = true; }
  /// After stop(): a new process finds what the old one wrote, forced or not.
  void wake();
  /// All that would change the disk fails with this SQLite code; SQLITE_OK ends it.
  void refuse(int code) { refusal_ = code; }
  int refusal() const { return refusal_; }
  /// Another process keeps the lock of those who write.
  void hold_lock(bool held) { held_ = held; }
  bool held() const { return held_; }
  /// A disk that lies: forced writes to files of this ending are acknowledged and not done.
  void lie_about(std::string ending) { lied_about_ = std::move(ending); }

  struct Write {
    bool truncation = false;
    std::int64_t at = 0;  // of a truncation: the new size
    std::string bytes;
  };
  struct File {
    std::string now;                        // as the running system sees it
    std::string durable;                    // as it surely is after a cut
    std::vector<Write> pending;             // not forced yet
    std::vector<std::vector<char>> shared;  // the log's index, memory only
    std::multiset<int> locks;               // of all handles that hold one
  };
  struct Tally {
    int cuts = 0, kept = 0, forgotten = 0, torn = 0, syncs = 0;
  };
  const Tally& tally() const { return tally_; }

  // For the functions that SQLite calls.
  std::map<std::string, File>& files() { return files_; }
  bool count_down();
  bool fails();
  void change(File& file, Write write);
  bool force(const std::string& name, File& file);

 private:
  std::map<std::string, File> files_;
  std::mt19937 random_;
  int left_ = 0;
  int sound_ = 0, failing_ = 0;  // operations until the first failure; failures to come
  bool dead_ = false, held_ = false;
  int refusal_ = 0;
  std::string lied_about_;
  Tally tally_;
  sqlite3_vfs vfs_{};
};

}  // namespace ground
