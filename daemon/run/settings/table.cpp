// See table.hpp.
#include "run/settings/table.hpp"

#include <algorithm>
#include <cmath>

#include "run/settings/keys.hpp"

namespace antherd::settings {
namespace {

char small(char letter) {
  return letter >= 'A' && letter <= 'Z' ? static_cast<char>(letter - 'A' + 'a') : letter;
}

}  // namespace

std::optional<std::string> fault_of_name(std::string_view text, std::size_t longest) {
  if (text.empty()) return "it is empty";
  if (text.front() == ' ' || text.back() == ' ') return "it begins or ends with a blank";
  std::size_t length = 0;
  for (std::string_view rest = text; !rest.empty(); ++length) {
    if (steers(take_character(rest))) return "it holds a control character";
  }
  if (length > longest) return "it is longer than " + std::to_string(longest) + " characters";
  return {};
}

std::string either(const std::vector<std::string>& words) {
  std::string text;
  for (std::size_t i = 0; i < words.size(); ++i) {
    text += (i == 0 ? "" : i + 1 == words.size() ? " or " : ", ") + words[i];
  }
  return text;
}

bool same_word(std::string_view one, std::string_view other) {
  return std::equal(one.begin(), one.end(), other.begin(), other.end(),
                    [](char a, char b) { return small(a) == small(b); });
}

Table::Table(const Node& node, std::string kind, std::string where, std::string prefix,
             Faults& faults)
    : node_(node),
      kind_(std::move(kind)),
      where_(std::move(where)),
      prefix_(std::move(prefix)),
      faults_(faults) {
  const auto& known = keys_of(kind_);
  for (std::size_t i = 0; i < node_.keys.size(); ++i) {
    const Key& key = node_.keys[i];
    if (std::find(known.begin(), known.end(), key.name) != known.end()) continue;
    const bool plain = where_.empty() && node_.items[i].kind != Node::Kind::table &&
                       node_.items[i].kind != Node::Kind::list;
    const char* const what = !where_.empty() || plain ? "the unknown key " : "the unknown table ";
    Complaint complaint{faults_.file,
                        key.line,
                        where_,
                        what + in_quotes(key.name),
                        "",
                        "",
                        advice_on(key.name, kind_)};
    if (!prefix_.empty()) complaint.where += ", " + prefix_.substr(0, prefix_.size() - 1);
    faults_.complaints.push_back(std::move(complaint));
  }
}

const Node* Table::find(std::string_view key) const {
  const auto& known = keys_of(kind_);
  ANTHERD_CHECK(std::find(known.begin(), known.end(), key) != known.end());
  return node_.find(key);
}

int Table::line_of(std::string_view key) const {
  for (const Key& known : node_.keys) {
    if (known.name == key) return known.line;
  }
  return node_.line;
}

void Table::complain(std::string_view key, std::string got, const Wanted& wanted) const {
  faults_.complaints.push_back({faults_.file, line_of(key),
                                where_ + ", " + prefix_ + std::string(key), std::move(got),
                                wanted.allowed, wanted.example, ""});
}

void Table::refuse(std::string_view key, const Wanted& wanted) const {
  const Node* const node = find(key);
  complain(key, node == nullptr ? "" : shown(*node), wanted);
}

void Table::miss(std::string_view key, const Wanted& wanted) const { complain(key, "", wanted); }

void Table::object(std::string_view key, std::string got, std::string advice,
                   std::string example) const {
  faults_.complaints.push_back({faults_.file, line_of(key),
                                where_ + ", " + prefix_ + std::string(key), std::move(got), "",
                                std::move(example), std::move(advice)});
}

std::optional<std::string> Table::text(std::string_view key, const Wanted& wanted,
                                       bool required) const {
  const Node* const node = find(key);
  if (node == nullptr) {
    if (required) miss(key, wanted);
    return {};
  }
  if (node->kind == Node::Kind::text) return node->text;
  refuse(key, wanted);
  return {};
}

std::optional<std::string> Table::name(std::string_view key, std::size_t longest,
                                       const Wanted& wanted, bool required) const {
  const auto written = text(key, wanted, required);
  if (!written) return {};
  const auto fault = fault_of_name(*written, longest);
  if (!fault) return written;
  refuse(key, {wanted.allowed + " (" + *fault + ")", wanted.example});
  return {};
}

std::optional<bool> Table::truth(std::string_view key) const {
  const Node* const node = find(key);
  if (node == nullptr) return {};
  if (node->kind == Node::Kind::truth) return node->truth;
  refuse(key, {"true or false, without quotes", std::string(key) + " = true"});
  return {};
}

std::optional<double> Table::number(std::string_view key, double lowest, double highest,
                                    const Wanted& wanted, bool required) const {
  const Node* const node = find(key);
  if (node == nullptr) {
    if (required) miss(key, wanted);
    return {};
  }
  const bool plain = node->kind == Node::Kind::whole || node->kind == Node::Kind::number;
  if (plain && node->number >= lowest && node->number <= highest) return node->number;
  refuse(key, wanted);
  return {};
}

std::optional<int> Table::whole(std::string_view key, int lowest, int highest,
                                const Wanted& wanted) const {
  const Node* const node = find(key);
  if (node == nullptr) return {};
  if (node->kind == Node::Kind::whole && node->number >= lowest && node->number <= highest) {
    return static_cast<int>(node->number);
  }
  refuse(key, wanted);
  return {};
}

std::optional<CivilDay> Table::day(std::string_view key, bool required) const {
  using namespace std::chrono;
  const Wanted wanted{"a date of the years 2000 to 2099, without quotes",
                      std::string(key) + " = 2026-04-20"};
  const Node* const node = find(key);
  if (node == nullptr) {
    if (required) miss(key, wanted);
    return {};
  }
  const bool in_range = node->day >= local_days(2000y / January / 1) &&
                        node->day <= local_days(2099y / December / 31);
  if (node->kind == Node::Kind::date && in_range) return node->day;
  refuse(key, wanted);
  return {};
}

std::optional<std::vector<std::string>> Table::texts(std::string_view key,
                                                     const Wanted& wanted) const {
  const Node* const node = find(key);
  if (node == nullptr) return {};
  if (node->kind == Node::Kind::text) return std::vector<std::string>{node->text};
  if (node->kind != Node::Kind::list) {
    refuse(key, wanted);
    return {};
  }
  std::vector<std::string> texts;
  for (const Node& item : node->items) {
    if (item.kind != Node::Kind::text) {
      complain(key, "a list with " + shown(item), wanted);
      return {};
    }
    texts.push_back(item.text);
  }
  return texts;
}

std::optional<Table> Table::table(std::string_view key, const std::string& kind,
                                  const Wanted& wanted, bool required) const {
  const Node* const node = find(key);
  if (node == nullptr) {
    if (required) miss(key, wanted);
    return {};
  }
  if (node->kind == Node::Kind::table) {
    return Table(*node, kind, where_, prefix_ + std::string(key) + ".", faults_);
  }
  refuse(key, wanted);
  return {};
}

std::optional<std::size_t> Table::chosen(std::string_view key,
                                         const std::vector<std::string>& names,
                                         const std::string& example, bool required) const {
  const Wanted wanted{either(names), example};
  const auto written = text(key, wanted, required);
  if (!written) return {};
  for (std::size_t i = 0; i < names.size(); ++i) {
    if (same_word(names[i], *written)) return i;
  }
  refuse(key, wanted);
  return {};
}

}  // namespace antherd::settings
