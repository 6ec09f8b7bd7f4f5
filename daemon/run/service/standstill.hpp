// The watch cannot begin, because the disk of its store is full, worn or gone. The service stays
// up, tries again, and says so: in the log, in the status, and by the letter that goes past the
// store. It must not know what a desk does.
#pragma once

#include <chrono>
#include <memory>

#include "run/service/desk_work.hpp"
#include "run/service/loop.hpp"

namespace antherd::service {

constexpr Seconds opened_again_after{30};

/// Opens the desk of the service. While that fails for a trouble that passes, waits and tries
/// again: until it succeeds, or fails for another reason. SIGTERM and SIGINT end the process with 0
/// meanwhile, SIGHUP reads the settings anew.
/// @param options  `stop_after` grows shorter by the time that was waited
/// @return nothing when stop_after was over before
Result<std::unique_ptr<DeskWork>> open_desk(std::shared_ptr<const settings::Settings> settings,
                                            RunOptions& options, Signals& signals);

}  // namespace antherd::service
