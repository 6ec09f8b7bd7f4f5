// Words that belong into no file, names at the top, and how many tests there are.
#include <algorithm>
#include <regex>

#include "house/rules.hpp"

namespace house {

namespace {

struct Banned {
  std::regex form;
  std::string why;
  std::string but_in = "/\n";  // not where the path holds this
};

/// Written in pieces, so that this file may be read by its own rule.
const std::vector<Banned>& banned() {
  static const std::vector<Banned> list = {
      {std::regex("seed "
                  "document",
                  std::regex::icase),
       "tells of the workshop"},
      {std::regex("\\btrans"
                  "cripts?\\b",
                  std::regex::icase),
       "tells of the workshop", "mail"},  // of a conversation with a mail server
      {std::regex("(^|[^a-zA-Z0-9_.])/wo"
                  "rk/"),
       "is a path of one machine"},
      {std::regex("/tm"
                  "p/b-"),
       "is a path of one machine"},
      {std::regex("\\.\\./sha"
                  "red\\b"),
       "is a path of one machine"},
      {std::regex("\\bsess"
                  "ions?\\b"),
       "tells of the workshop"},
      {std::regex("\\bissue"
                  "s? #?[0-9]",
                  std::regex::icase),
       "tells of the workshop"},
      {std::regex("deb\\.deb"
                  "ian\\.org|registry\\.npm"
                  "js"),
       "names one registry's host"},
      {std::regex("\\b(TO"
                  "DO|FIX"
                  "ME|XX"
                  "X)\\b"),
       "is work left undone"},
  };
  return list;
}

}  // namespace

Complaints check_words(const File& file) {
  Complaints complaints;
  const std::vector<std::string> lines = lines_of(file.text);
  for (std::size_t i = 0; i < lines.size(); ++i)
    for (const Banned& word : banned()) {
      std::smatch found;
      if (file.path.find(word.but_in) != std::string::npos) continue;
      if (std::regex_search(lines[i], found, word.form))
        complaints.push_back(file.path + ":" + std::to_string(i + 1) + ": '" + found.str() + "' " +
                             word.why);
    }
  return complaints;
}

Complaints check_top_level(const std::vector<std::string>& names) {
  static const std::set<std::string> fixed = {"CMakeLists.txt", "CMakePresets.json",
                                              "LICENSE",        "README.md",
                                              "DEVELOPERS.md",  "daemon",
                                              "config",         "tests",
                                              "systemd",        "demo"};
  Complaints complaints;
  for (const std::string& name : names)
    if (!name.starts_with(".") && !fixed.contains(name))
      complaints.push_back(name + ": the top of the tree is fixed");
  for (const std::string& name : fixed)
    if (std::find(names.begin(), names.end(), name) == names.end())
      complaints.push_back(name + ": missing at the top of the tree");
  return complaints;
}

int count_tests(std::string_view text) {
  static const std::regex form("\\s*(TEMPLATE_)?(TEST_CASE|SCENARIO)(_METHOD|_TEMPLATE)?\\s*\\(.*");
  const std::vector<std::string> lines = lines_of(without_comments_and_texts(text));
  return static_cast<int>(std::count_if(lines.begin(), lines.end(), [](const std::string& line) {
    return std::regex_match(line, form);
  }));
}

}  // namespace house
