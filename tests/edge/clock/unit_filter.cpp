// Whether the shipped unit lets the service ask the kernel for the clock's state. The system calls
// that the unit lets through by name are read from it; a filter of the kernel's own (seccomp, Linux
// since 3.5) then forbids all other calls of systemd's group @clock, as the unit does.
#include <linux/audit.h>
#include <linux/filter.h>
#include <linux/seccomp.h>
#include <sys/prctl.h>
#include <sys/syscall.h>
#include <sys/timex.h>
#include <sys/wait.h>
#include <unistd.h>

#include <cerrno>
#include <cstddef>
#include <fstream>
#include <map>
#include <set>
#include <sstream>
#include <string>
#include <vector>

#include "support/catch.hpp"
#include "support/paths.hpp"

namespace {

/// Group @clock of systemd.exec(5), `systemd-analyze syscall-filter @clock` (systemd 252).
const std::map<std::string, unsigned> clock_calls{
    {"adjtimex", SYS_adjtimex},
    {"clock_adjtime", SYS_clock_adjtime},
    {"clock_settime", SYS_clock_settime},
    {"settimeofday", SYS_settimeofday},
};

std::set<std::string> allowed_by_unit() {
  std::ifstream unit(paths::source() + "/systemd/antherd.service");
  REQUIRE(unit.good());
  const std::string key = "SystemCallFilter=";
  std::set<std::string> names;
  for (std::string line; std::getline(unit, line);) {
    if (line.rfind(key, 0) != 0 || line[key.size()] == '@' || line[key.size()] == '~') continue;
    std::istringstream words(line.substr(key.size()));
    for (std::string name; words >> name;) names.insert(name);
  }
  return names;
}

/// Whether adjtimex() may be called in a process of its own that is refused all calls of the group
/// but these.
bool may_ask(const std::set<std::string>& allowed) {
  std::vector<sock_filter> filter{BPF_STMT(BPF_LD | BPF_W | BPF_ABS, offsetof(seccomp_data, nr))};
  for (const auto& [name, number] : clock_calls) {
    if (allowed.contains(name)) continue;
    filter.push_back(BPF_JUMP(BPF_JMP | BPF_JEQ | BPF_K, number, 0, 1));
    filter.push_back(BPF_STMT(BPF_RET | BPF_K, SECCOMP_RET_ERRNO | EPERM));
  }
  filter.push_back(BPF_STMT(BPF_RET | BPF_K, SECCOMP_RET_ALLOW));
  const pid_t child = ::fork();
  REQUIRE(child >= 0);
  if (child == 0) {
    const sock_fprog program{static_cast<unsigned short>(filter.size()), filter.data()};
    if (::prctl(PR_SET_NO_NEW_PRIVS, 1, 0, 0, 0) != 0) ::_exit(3);
    if (::prctl(PR_SET_SECCOMP, SECCOMP_MODE_FILTER, &program) != 0) ::_exit(3);
    timex state{};
    ::_exit(::adjtimex(&state) == -1 ? 1 : 0);
  }
  int status = 0;
  REQUIRE(::waitpid(child, &status, 0) == child);
  REQUIRE(WIFEXITED(status));
  REQUIRE(WEXITSTATUS(status) != 3);
  return WEXITSTATUS(status) == 0;
}

}  // namespace

TEST_CASE("the shipped unit lets the service ask whether the clock is set") {
  CHECK_FALSE(may_ask({}));  // the filter bites
  CHECK(may_ask(allowed_by_unit()));
}
