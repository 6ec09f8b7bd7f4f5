// Rows for programs: JSON lines or CSV (RFC 4180) of one set of columns.
#pragma once

#include <nlohmann/json_fwd.hpp>
#include <string>

#include "run/commands/commands.hpp"

namespace antherd::commands {

class Table {
 public:
  explicit Table(const Invocation& call) : lines_(call.lines), csv_(call.csv) {}
  /// Whether rows go out for programs.
  bool machine() const { return lines_ || csv_; }
  /// Writes a row to standard output; false when neither form was asked for.
  bool write(const nlohmann::ordered_json& row);

 private:
  bool lines_, csv_, headed_ = false;
};

}  // namespace antherd::commands
