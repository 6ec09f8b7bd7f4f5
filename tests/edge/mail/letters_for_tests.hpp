// Invented letters and temporary folders for the mail tests.
#pragma once

#include <atomic>
#include <cstdlib>
#include <filesystem>
#include <functional>

#include "edge/mail/mail.hpp"

namespace antherd::mail {

inline letters::Letter letter_for_tests() {
  letters::Letter letter;
  letter.id = "heat-north-bench-2026-07-14.owner";
  letter.recipient = "owner@larkspur.example";
  letter.subject = "HEAT Severe: north bench 96 °F at 3 pm, flower not seen";
  letter.body = "north bench, flower not seen: 96 °F at 3 pm ± 1.\nNo water tonight.\n";
  letter.kind = "heat";
  letter.severity = alerts::Severity::severe;
  letter.decided = std::chrono::sys_days(std::chrono::year(2026) / 7 / 14) +
                   std::chrono::hours(22) + std::chrono::minutes(5);
  return letter;
}

class TemporaryFolder {
 public:
  TemporaryFolder() {
    std::string name = (std::filesystem::temp_directory_path() / "antherd-mail-XXXXXX").string();
    if (::mkdtemp(name.data()) == nullptr) throw std::runtime_error("no temporary folder");
    path_ = name;
  }
  TemporaryFolder(const TemporaryFolder&) = delete;
  TemporaryFolder& operator=(const TemporaryFolder&) = delete;
  ~TemporaryFolder() { std::filesystem::remove_all(path_); }
  std::string path() const { return path_.string(); }

 private:
  std::filesystem::path path_;
};

}  // namespace antherd::mail
