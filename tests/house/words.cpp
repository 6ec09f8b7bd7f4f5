// Words that belong into no file, names at the top, and how many tests there are.
#include <algorithm>
#include <regex>

#include "house/rules.hpp"

namespace house {

namespace {

struct Banned {
  std::string hint;  // lower case, part of every hit: most files are done after one search
  std::string form;  // regular expression, in any case
  std::string why;
  std::vector<std::string> but_in = {};  // not in paths that begin with one of these
};

/// Written in pieces, so that this file may be read by its own rule.
// clang-format off
const std::vector<Banned> banned = {
    {"seed " "document", "seed " "document", "tells of the workshop"},
    {"trans" "cript", "\\btrans" "cripts?\\b", "tells of the workshop",
     {"daemon/", "tests/"}},  // there it is a conversation with a mail server
    {"/wo" "rk/", "(^|[^a-zA-Z0-9_.])/wo" "rk/", "is a path of one machine"},
    {"/tm" "p/b-", "/tm" "p/b-", "is a path of one machine"},
    {"../sha" "red", "\\.\\./sha" "red\\b", "is a path of one machine"},
    {"sess" "ion", "\\bsess" "ions?\\b", "tells of the workshop"},
    {"iss" "ue", "\\biss" "ues? #?[0-9]", "tells of the workshop"},
    {"deb.deb" "ian.org", "deb\\.deb" "ian\\.org", "names one registry's host"},
    {"registry.npm" "js", "registry\\.npm" "js", "names one registry's host"},
    {"to" "do", "\\bTO" "DO\\b", "is work left undone"},
    {"fix" "me", "\\bFIX" "ME\\b", "is work left undone"},
};
// clang-format on

std::string lower(std::string text) {
  for (char& c : text) c = c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
  return text;
}

}  // namespace

Complaints check_words(const File& file) {
  Complaints complaints;
  const std::string text = lower(file.text);
  for (const Banned& word : banned) {
    if (text.find(word.hint) == std::string::npos) continue;
    if (std::any_of(word.but_in.begin(), word.but_in.end(),
                    [&](const std::string& folder) { return file.path.starts_with(folder); }))
      continue;
    const std::regex form(word.form, std::regex::icase);
    const std::vector<std::string> lines = lines_of(file.text);
    for (std::size_t i = 0; i < lines.size(); ++i) {
      std::smatch found;
      // Catch2 has a class of that name
      if (std::regex_search(lines[i], found, form) && lines[i].find("Catch::") == std::string::npos)
        complaints.push_back(file.path + ":" + std::to_string(i + 1) + ": '" + found.str() + "' " +
                             word.why);
    }
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
