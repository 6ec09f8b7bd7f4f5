// Reads the tree from the disk for the house rules. It must not know the rules.
#pragma once

#include <functional>
#include <string>
#include <vector>

#include "house/rules.hpp"

namespace house {

/// All text files of the tree in order of their paths: no folder whose name begins with a dot but
/// .ci, no picture, no data base, nothing above 1 MiB.
const std::vector<File>& tree();

/// The names at the top of the tree.
std::vector<std::string> top_level();

/// The text of one file; empty where there is none.
std::string text_of(const std::string& path);

/// All complaints of one rule about the files that `wanted` picks, one a line.
std::string complaints_about(const std::function<bool(const File&)>& wanted,
                             const std::function<Complaints(const File&)>& rule);

bool is_code(const std::string& path);  // .cpp .hpp

}  // namespace house
