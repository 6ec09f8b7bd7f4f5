// The mail password's file. What it holds never enters a message.
#pragma once

#include <string>

#include "core/failures/result.hpp"

namespace antherd::settings {

/// Reads the password: first a file of that name in $CREDENTIALS_DIRECTORY (the service manager
/// guards those), then `path` itself, which is refused when group or others may read it.
Result<std::string> read_password(const std::string& path);

}  // namespace antherd::settings
