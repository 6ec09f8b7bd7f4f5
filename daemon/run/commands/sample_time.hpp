// How a station's file writes its time, guessed from its cells. It must not know values.
#pragma once

#include <optional>
#include <string>
#include <vector>

namespace antherd::commands {

/// A way of writing time, as the settings spell it.
struct TimeGuess {
  std::string form;           // "%Y-%m-%d %H:%M", "unix", "iso"
  bool date = false;          // it gives the day
  bool clock = false;         // it gives the time of day
  bool zoned = false;         // each text says its zone itself
  bool utc = false;           // it ends in the word UTC or GMT
  bool day_or_month = false;  // nothing tells which of two numbers is the day
};

/// The way in which all of a column's cells are written that are written in any way; nothing
/// where none is, or where they differ. Where the day may come first, a number above 12 says so.
std::optional<TimeGuess> guess_time_form(const std::vector<std::string>& cells);

}  // namespace antherd::commands
