// Every key that the settings know, by table: the one list behind "unknown key" complaints.
// This file must not know what any key means.
#pragma once

#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace antherd::settings {

/// One table as people see it in the file, and its keys.
struct KnownTable {
  std::string name;  // "[farm]", "[[station]]", "[station.drop] temperature"
  std::vector<std::string> keys;
};

std::span<const KnownTable> known_tables();
/// The keys of a table; a name that is not in the list is our own mistake.
const std::vector<std::string>& keys_of(std::string_view table);
/// What to do about an unknown key: the nearest known one, and the table it belongs to.
std::string advice_on(std::string_view key, std::string_view table);

}  // namespace antherd::settings
