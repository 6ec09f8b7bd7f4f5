// One table of the settings, read key by key. Every fault becomes a complaint with its line, what
// was got, what is allowed and an example; reading goes on, so that all faults are told at once.
// This file must not know what any key is for.
#pragma once

#include <concepts>
#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "core/failures/result.hpp"
#include "run/settings/document.hpp"
#include "run/settings/settings.hpp"

namespace antherd::settings {

/// What is allowed, and how it looks in the file: both go into the complaint.
struct Wanted {
  std::string allowed;
  std::string example;
};

/// Where all complaints and remarks of one reading are gathered.
struct Faults {
  std::string file;
  std::vector<Complaint> complaints;
  std::vector<std::string> remarks;
};

/// Words that stand for values.
template <class T>
using Words = std::vector<std::pair<std::string, T>>;

class Table {
 public:
  /// Complains at once of every key that the table does not know.
  /// @param kind   its name in keys.hpp
  /// @param where  how complaints name it: "[[station]] bench"
  /// @param prefix what stands before a key in complaints: "temperature."
  Table(const Node& node, std::string kind, std::string where, std::string prefix, Faults& faults);

  Faults& faults() const { return faults_; }
  int line() const { return node_.line; }
  const std::string& where() const { return where_; }
  bool has(std::string_view key) const { return find(key) != nullptr; }
  const Node* find(std::string_view key) const;
  /// The line of a key, or of the table where the key is missing.
  int line_of(std::string_view key) const;

  /// A complaint about a key, whatever it holds; `got` empty: nothing.
  void complain(std::string_view key, std::string got, const Wanted& wanted) const;
  /// A complaint about what a key holds.
  void refuse(std::string_view key, const Wanted& wanted) const;
  /// A complaint that a key is missing.
  void miss(std::string_view key, const Wanted& wanted) const;
  /// A complaint in words of its own.
  void object(std::string_view key, std::string got, std::string advice,
              std::string example = "") const;

  /// Each of these returns the value, or nothing when the key is absent or refused (a complaint
  /// was made). `required` complains of an absent key too.
  std::optional<std::string> text(std::string_view key, const Wanted& wanted,
                                  bool required = false) const;
  /// A text that people will read: 1 to `longest` characters, none of them a control character.
  std::optional<std::string> name(std::string_view key, std::size_t longest, const Wanted& wanted,
                                  bool required = false) const;
  std::optional<bool> truth(std::string_view key) const;
  std::optional<double> number(std::string_view key, double lowest, double highest,
                               const Wanted& wanted, bool required = false) const;
  std::optional<int> whole(std::string_view key, int lowest, int highest,
                           const Wanted& wanted) const;
  std::optional<CivilDay> day(std::string_view key, bool required = false) const;
  /// A list of texts, or one text for a list of one.
  std::optional<std::vector<std::string>> texts(std::string_view key, const Wanted& wanted) const;
  /// A table inside, e.g. { column = "time" }.
  std::optional<Table> table(std::string_view key, const std::string& kind, const Wanted& wanted,
                             bool required = false) const;

  /// A quantity in a string, read by `parse` and lying within lowest…highest.
  /// @param what  names the kind and its range: "a length from -430 m to 6000 m, with its unit"
  template <class Parse, class Value>
  std::optional<Value> quantity(std::string_view key, Parse parse, Value lowest, Value highest,
                                const Wanted& wanted, bool required = false) const {
    const auto written = text(key, wanted, required);
    if (!written) return {};
    const Result<Value> value = parse(*written);
    if (value && *value >= lowest && *value <= highest) return *value;
    Wanted told = wanted;
    if (!value) told.allowed = wanted.allowed + " (" + value.failure().why + ")";
    refuse(key, told);
    return {};
  }

  /// One of some words, capitals or not.
  template <class T>
  std::optional<T> choice(std::string_view key, const Words<T>& words, const std::string& example,
                          bool required = false) const {
    std::vector<std::string> names;
    for (const auto& [word, value] : words) names.push_back(word);
    const auto found = chosen(key, names, example, required);
    if (!found) return {};
    return words[*found].second;
  }

 private:
  std::optional<std::size_t> chosen(std::string_view key, const std::vector<std::string>& names,
                                    const std::string& example, bool required) const;

  const Node& node_;
  std::string kind_, where_, prefix_;
  Faults& faults_;
};

/// What is wrong with a text as a name: nothing when it is fine.
std::optional<std::string> fault_of_name(std::string_view text, std::size_t longest);
/// "a, b or c"
std::string either(const std::vector<std::string>& words);
/// Whether two texts are the same but for the capitals of A to Z.
bool same_word(std::string_view one, std::string_view other);

}  // namespace antherd::settings
