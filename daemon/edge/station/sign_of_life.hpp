// A sign of life to somebody else's watch: one GET, nothing in it but that it came. Blocking, for a
// worker's thread; bounded like a poll.
#pragma once

#include <atomic>
#include <string>

#include "core/failures/result.hpp"

namespace antherd::station {

/// Asks the address once; an answer 2xx is a success. TLS is verified, redirects stay within the
/// host. The failure names the host alone: the rest of such an address is often a key.
Outcome give_sign_of_life(const std::string& url, const std::atomic<bool>& stop);

/// "https://watch.example": what may be shown of such an address.
std::string shown_host(const std::string& url);

}  // namespace antherd::station
