// What the service manager is told (sd_notify): ready, status, alive, stopping. Without a service
// manager these do nothing.
#pragma once

#include <string>

namespace antherd::service {

void tell_ready();
void tell_status(const std::string& sentence);
void tell_alive();  // the watchdog; only the working loop calls it
void tell_reloading();
void tell_stopping();

}  // namespace antherd::service
