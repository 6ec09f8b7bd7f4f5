// See manager.hpp.
#include "run/service/manager.hpp"

#ifdef ANTHERD_SYSTEMD
#include <systemd/sd-daemon.h>
#include <time.h>
#endif

namespace antherd::service {
namespace {

void tell(const std::string& state) {
#ifdef ANTHERD_SYSTEMD
  sd_notify(0, state.c_str());
#else
  (void)state;
#endif
}

}  // namespace

void tell_ready() { tell("READY=1"); }
void tell_status(const std::string& sentence) { tell("STATUS=" + sentence); }
void tell_alive() { tell("WATCHDOG=1"); }
void tell_stopping() { tell("STOPPING=1"); }

void tell_reloading() {
#ifdef ANTHERD_SYSTEMD
  timespec now{};
  clock_gettime(CLOCK_MONOTONIC, &now);
  const long long micro = static_cast<long long>(now.tv_sec) * 1000000 + now.tv_nsec / 1000;
  tell("RELOADING=1\nMONOTONIC_USEC=" + std::to_string(micro));
#endif
}

}  // namespace antherd::service
