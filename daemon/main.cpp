// antherd: picks the command and returns its exit status.
#include <sys/prctl.h>
#include <sys/resource.h>

#include "run/commands/commands.hpp"

namespace {

/// The mail password stands in this process's memory: no core file of it, not even by a handler
/// that the kernel pipes it to, and no look into it by others of the same user.
void keep_memory_private() {
  const rlimit none{0, 0};
  setrlimit(RLIMIT_CORE, &none);
#if !defined(__SANITIZE_ADDRESS__)  // the leak check looks into its own process
  prctl(PR_SET_DUMPABLE, 0);
#endif
}

}  // namespace

int main(int argc, char** argv) {
  keep_memory_private();
  return antherd::commands::main(argc, argv);
}
