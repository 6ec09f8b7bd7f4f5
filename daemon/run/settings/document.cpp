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
constexpr int most_key_parts = 6;  // ours have four; a long chain would nest without bound
constexpr int deepest = 16;        // ours nest four deep; each level costs stack

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

Node node_of(const toml::node& value, int depth);

Node table_of(const toml::table& table, int depth) {
  Node node;
  for (const auto& [key, value] : table) {
    const int line = line_of(key.source());
    node.keys.push_back({std::string(key.str()), line});
    node.items.push_back(node_of(value, depth + 1));
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

Node list_of(const toml::array& list, int depth) {
  Node node;
  node.kind = Node::Kind::list;
  for (const toml::node& item : list) node.items.push_back(node_of(item, depth + 1));
  return node;
}

Node plain(Node::Kind kind, std::string text, double number = 0) {
  Node node;
  node.kind = kind;
  node.text = std::move(text);
  node.number = number;
  return node;
}

Node node_of(const toml::node& value, int depth) {
  using Kind = Node::Kind;
  Node node;
  if (depth > deepest) {
    node = plain(Kind::other, "a value inside too many others");
  } else if (const auto* table = value.as_table()) {
    node = table_of(*table, depth);
  } else if (const auto* list = value.as_array()) {
    node = list_of(*list, depth);
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

bool steers(char32_t code) {
  return code < 0x20 || (code >= 0x7F && code <= 0x9F) || code == 0x200E || code == 0x200F ||
         (code >= 0x2028 && code <= 0x202E) || (code >= 0x2066 && code <= 0x2069) || code == 0xFEFF;
}

char32_t take_character(std::string_view& text) {
  const auto first = static_cast<unsigned char>(text.front());
  const std::size_t length = first < 0x80 ? 1 : first < 0xE0 ? 2 : first < 0xF0 ? 3 : 4;
  char32_t code = length == 1 ? first : first & (0x7FU >> length);
  for (std::size_t i = 1; i < length && i < text.size(); ++i) {
    code = (code << 6) | (static_cast<unsigned char>(text[i]) & 0x3FU);
  }
  text.remove_prefix(std::min(length, text.size()));
  return code;
}

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
    Node node = table_of(table, 0);
    node.line = 1;
    return node;
  } catch (const toml::parse_error& error) {
    return Unreadable{line_of(error.source()), visible(error.description(), 200)};
  }
}

std::string visible(std::string_view text, std::size_t longest) {
  std::string safe;
  std::size_t length = 0;
  while (!text.empty()) {
    if (length++ == longest) return safe + "…";
    const std::string_view before = text;
    const char32_t code = take_character(text);
    if (steers(code)) {
      char hex[16];
      std::snprintf(hex, sizeof hex, code < 0x80 ? "\\x%02X" : "\\u%04X",
                    static_cast<unsigned>(code));
      safe += hex;
    } else {
      safe += before.substr(0, before.size() - text.size());
    }
  }
  return safe;
}

std::string in_quotes(std::string_view text) { return "\"" + visible(text, 60) + "\""; }

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
