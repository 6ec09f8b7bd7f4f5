// A TOML text as a small tree with the line of everything, so that only one file of the program
// has to know the TOML library. This file must not know any key.
#pragma once

#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "core/units/time.hpp"

namespace antherd::settings {

struct Key {
  std::string name;
  int line = 0;
};

struct Node {
  enum class Kind { table, list, text, whole, number, truth, date, other };
  Kind kind = Kind::table;
  int line = 0;
  std::string text;   // the text; for date and other: as a person would write it
  double number = 0;  // of whole and number
  bool truth = false;
  CivilDay day{};           // of date
  std::vector<Key> keys;    // of a table, one for each item
  std::vector<Node> items;  // of a table or a list

  /// The value of a key of a table, or nothing.
  const Node* find(std::string_view name) const;
};

/// Why a text is no TOML.
struct Unreadable {
  int line = 1;
  std::string why;
};

/// Reads a whole text. Bounded: refuses texts over 256 KiB, deep nesting and keys of many parts.
std::variant<Node, Unreadable> read_document(std::string_view text);

/// A value as a complaint shows it: "95 F" in quotes, `the number 780`, `a table`; at most 60
/// characters, control characters made visible.
std::string shown(const Node& node);
/// A text of at most `longest` characters, control characters as \x0A or \u202E.
std::string visible(std::string_view text, std::size_t longest);
/// Characters that steer a terminal, a header or the direction of a text instead of being read.
bool steers(char32_t code);
/// The next character of a UTF-8 text, which is shortened by it; the text must not be empty.
char32_t take_character(std::string_view& text);
/// A text in quotes, likewise.
std::string in_quotes(std::string_view text);

}  // namespace antherd::settings
