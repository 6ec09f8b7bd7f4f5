// The only file that knows the TOML library; see document.hpp.
#include "run/settings/document.hpp"

#include <toml++/toml.h>

#include <algorithm>
#include <cstdio>
#include <optional>
#include <sstream>
#include <utility>

namespace antherd::settings {
namespace {

constexpr std::size_t largest_text = 256 * 1024;  // a farm of 1,000 fields needs about 200 KiB
constexpr int most_key_parts = 8;  // ours have three; a long chain would nest without bound

int line_of(const toml::source_region& region) { return static_cast<int>(region.begin.line); }

template <class Value>
std::string written(const Value& value) {
  std::ostringstream stream;
  stream << value;
  return stream.str();
}

/// The line of the first key whose parts are too many, or nothing.
std::optional<int> overlong_key(std::string_view text) {
  int line = 1, dots = 0;
  bool comment = false, header = false, line_start = true;
  for (const char letter : text) {
    if (letter == '\n') {
      ++line, dots = 0, comment = false, header = false, line_start = true;
      continue;
    }
    if (comment) continue;
    if (line_start && letter == '#') comment = true;
    if (line_start && letter == '[') header = true;
    if (letter != ' ' && letter != '\t') line_start = false;
    const bool part_of_chain = letter == '.';
    if (part_of_chain) ++dots;
    const bool key_ends = letter == '=' || (header && letter == ']');
    if (key_ends && dots >= most_key_parts) return line;
    if (key_ends || letter == '{' || letter == ',') dots = 0;
  }
  return {};
}

Node node_of(const toml::node& value);

Node table_of(const toml::table& table) {
  Node node;
  for (const auto& [key, value] : table) {
    const int line = line_of(key.source());
    node.keys.push_back({std::string(key.str()), line});
    node.items.push_back(node_of(value));
    if (node.items.back().line == 0) node.items.back().line = line;
  }
  return node;
}

Node date_of(const toml::date& date) {
  Node node;
  node.kind = Node::Kind::date;
  node.text = written(date);
  node.day = CivilDay(CivilDate(std::chrono::year{date.year}, std::chrono::month{date.month},
                                std::chrono::day{date.day}));
  return node;
}

Node list_of(const toml::array& list) {
  Node node;
  node.kind = Node::Kind::list;
  for (const toml::node& item : list) node.items.push_back(node_of(item));
  return node;
}

Node plain(Node::Kind kind, std::string text, double number = 0) {
  Node node;
  node.kind = kind;
  node.text = std::move(text);
  node.number = number;
  return node;
}

Node node_of(const toml::node& value) {
  using Kind = Node::Kind;
  Node node;
  if (const auto* table = value.as_table()) {
    node = table_of(*table);
  } else if (const auto* list = value.as_array()) {
    node = list_of(*list);
  } else if (const auto* text = value.as_string()) {
    node = plain(Kind::text, text->get());
  } else if (const auto* whole = value.as_integer()) {
    node = plain(Kind::whole, written(whole->get()), static_cast<double>(whole->get()));
  } else if (const auto* number = value.as_floating_point()) {
    node = plain(Kind::number, written(number->get()), number->get());
  } else if (const auto* truth = value.as_boolean()) {
    node = plain(Kind::truth, truth->get() ? "true" : "false");
    node.truth = truth->get();
  } else if (const auto* date = value.as_date()) {
    node = date_of(date->get());
  } else if (const auto* time = value.as_time()) {
    node = plain(Kind::other, "the time " + written(time->get()));
  } else if (const auto* moment = value.as_date_time()) {
    node = plain(Kind::other, "the time " + written(moment->get()));
  }
  node.line = line_of(value.source());
  return node;
}

}  // namespace

const Node* Node::find(std::string_view name) const {
  for (std::size_t i = 0; i < keys.size(); ++i) {
    if (keys[i].name == name) return &items[i];
  }
  return nullptr;
}

std::variant<Node, Unreadable> read_document(std::string_view text) {
  if (text.size() > largest_text) return Unreadable{1, "the file is larger than 256 KiB"};
  if (const auto line = overlong_key(text)) {
    return Unreadable{*line, "a key has more than " + std::to_string(most_key_parts) + " parts"};
  }
  try {
    const toml::table table = toml::parse(text);
    Node node = table_of(table);
    node.line = 1;
    return node;
  } catch (const toml::parse_error& error) {
    return Unreadable{line_of(error.source()), std::string(error.description())};
  }
}

std::string in_quotes(std::string_view text) {
  constexpr std::size_t longest = 60;
  std::string safe = "\"";
  for (const char letter : text.substr(0, longest)) {
    const auto byte = static_cast<unsigned char>(letter);
    if (byte < 0x20 || byte == 0x7F) {
      char hex[8];
      std::snprintf(hex, sizeof hex, "\\x%02X", static_cast<unsigned>(byte));
      safe += hex;
    } else {
      safe += letter;
    }
  }
  if (text.size() > longest) {
    // Do not cut a character of several bytes in two.
    while (!safe.empty() && (static_cast<unsigned char>(safe.back()) & 0xC0) == 0x80) {
      safe.pop_back();
    }
    if (!safe.empty() && static_cast<unsigned char>(safe.back()) >= 0xC0) safe.pop_back();
    safe += "…";
  }
  return safe + "\"";
}

std::string shown(const Node& node) {
  switch (node.kind) {
    case Node::Kind::table:
      return "a table";
    case Node::Kind::list:
      return node.items.empty() ? "an empty list" : "a list";
    case Node::Kind::text:
      return in_quotes(node.text);
    case Node::Kind::whole:
    case Node::Kind::number:
      return "the number " + node.text;
    case Node::Kind::truth:
      return node.text;
    case Node::Kind::date:
      return "the date " + node.text;
    case Node::Kind::other:
      break;
  }
  return node.text;
}

}  // namespace antherd::settings
