// The log: one sentence a line, to a rotating file, or to the journal or standard error. The only
// file that knows spdlog. Text from outside is stripped of control characters before it is written.
#pragma once

#include <string>
#include <string_view>

#include "core/failures/result.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// Opens the log as the settings say. May be called again after new settings.
Outcome open_log(const settings::Log& log);

void log_info(std::string_view sentence);
void log_warning(std::string_view sentence);
void log_error(std::string_view sentence);
void log_debug(std::string_view sentence);

}  // namespace antherd::service
