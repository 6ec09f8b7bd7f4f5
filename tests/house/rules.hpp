// The rules of the house as functions of text, so that each can be shown to fail. They must not
// know where the tree lies: tree.hpp reads it.
#pragma once

#include <map>
#include <set>
#include <string>
#include <string_view>
#include <vector>

namespace house {

/// A file of the tree: its path from the top, with forward slashes, and its text.
struct File {
  std::string path;
  std::string text;
};

/// "daemon/core/x.cpp:12: …"
using Complaints = std::vector<std::string>;

/// Which rooms each room may include, e.g. "core/weather" → {"core/units", "core/failures"}.
using RoomTable = std::map<std::string, std::set<std::string>>;

/// Reads the rows "| `room` | what it may include | … |" of DEVELOPERS.md. The second column holds
/// last parts of room names, or `core`, `edge` for all of them, or – for none. Complains of names
/// that no row has and of rows that stand twice.
RoomTable read_room_table(std::string_view developers, Complaints& complaints);

/// The room of a path below daemon/: "core/weather", "main.cpp" for the one file outside.
std::string room_of(std::string_view path);

/// Includes of a file below daemon/ that its row does not allow, and rooms without a row.
Complaints check_includes(const File& file, const RoomTable& table);

/// Words that a file of daemon/core must not hold outside comments and texts, and system headers
/// that would give it a clock, a thread, a file, an environment, a locale or chance.
Complaints check_core_words(const File& file);

/// `::now(` stands nowhere below daemon/ but in edge/clock.
Complaints check_clock(const File& file);

/// No shell and no other program is started below daemon/, and SQL is a fixed text: values go
/// through bound parameters. (One PRAGMA takes a number, which binds nowhere.)
Complaints check_commands(const File& file);

/// At most 400 lines, 100 columns (characters, not bytes) and, for C++, 60 lines a function.
Complaints check_sizes(const File& file, bool functions_too);

/// In the headers of core/weather, core/crop and core/risk every function that returns a number
/// says in the comment above it where it comes from: "Source:" or "science §".
Complaints check_sources(const File& file);

/// Words that belong into no file: the workshop's, not the house's; and work left undone.
Complaints check_words(const File& file);

/// Names at the top of the tree that are not on the fixed list.
Complaints check_top_level(const std::vector<std::string>& names);

/// How many tests a C++ file registers.
int count_tests(std::string_view text);

/// The code with comments, string and character literals blanked out; lines stay lines.
std::string without_comments_and_texts(std::string_view code);

std::vector<std::string> lines_of(std::string_view text);

}  // namespace house
