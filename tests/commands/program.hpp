// Runs the program itself, without a shell: a command to its end, or the service for as long as a
// test likes. Waiting is done on descriptors with generous bounds, never by sleeping.
#pragma once

#include <sys/types.h>

#include <chrono>
#include <optional>
#include <string>
#include <vector>

namespace program {

struct Ended {
  int status = -1;  // exit status; 128 + signal when it was killed
  std::string out, err;
};

/// Runs `antherd` with arguments in a folder. Ends it after 60 s.
Ended run(const std::vector<std::string>& arguments, const std::string& folder = "");

/// The service in a folder, told to stop at the latest when the test ends.
class Service {
 public:
  Service(const std::string& folder, std::vector<std::string> more = {});
  Service(const Service&) = delete;
  Service& operator=(const Service&) = delete;
  ~Service();

  /// Waits until the service manager would have been told this, e.g. "READY=1".
  bool told(const std::string& word, std::chrono::seconds at_most = std::chrono::seconds{30});
  /// Waits until standard error holds a text.
  bool said(const std::string& text, std::chrono::seconds at_most = std::chrono::seconds{30});
  void signal(int number) const;
  bool running();
  /// Waits for its end. @return the status, and how long it took
  std::optional<std::pair<int, std::chrono::milliseconds>> wait(std::chrono::seconds at_most);
  const std::string& words() const { return words_; }
  pid_t process() const { return process_; }

 private:
  void listen(int milliseconds);

  std::string folder_, socket_path_;
  pid_t process_ = -1;
  int notices_ = -1, errors_ = -1;
  std::string words_, news_;
  std::optional<int> status_;
};

}  // namespace program
