// Letters that wait for somebody whom the settings do not name any more.
#pragma once

#include <string>
#include <vector>

#include "edge/store/store.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// Parks what waits, in the outbox or for a digest, for an address that is no longer among the
/// recipients. Nothing while the settings send no mail at all. @return sentences for the log
Result<std::vector<std::string>> park_letters_of_former(const settings::Settings& settings,
                                                        store::Store& store, Instant now);

}  // namespace antherd::service
