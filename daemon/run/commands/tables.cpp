// See tables.hpp.
#include "run/commands/tables.hpp"

#include <iostream>
#include <nlohmann/json.hpp>

namespace antherd::commands {
namespace {

std::string cell(const nlohmann::ordered_json& value) {
  if (value.is_null()) return "";
  if (!value.is_string()) return value.dump();
  const auto text = value.get<std::string>();
  if (text.find_first_of(",\"\r\n") == std::string::npos) return text;
  std::string quoted = "\"";
  for (const char c : text) quoted += c == '"' ? std::string("\"\"") : std::string(1, c);
  return quoted + "\"";
}

}  // namespace

bool Table::write(const nlohmann::ordered_json& row) {
  if (lines_) {
    std::cout << row.dump(-1, ' ', false, nlohmann::ordered_json::error_handler_t::replace) << "\n";
    return true;
  }
  if (!csv_) return false;
  std::string header, line;
  for (const auto& [key, value] : row.items()) {
    header += (header.empty() ? "" : ",") + key;
    line += (line.empty() && &value == &row.begin().value() ? "" : ",") + cell(value);
  }
  if (!headed_) std::cout << header << "\r\n";
  headed_ = true;
  std::cout << line << "\r\n";
  return true;
}

}  // namespace antherd::commands
