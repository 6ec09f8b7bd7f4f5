// How long a file, a line and a function may be, and where a number comes from.
#include <algorithm>
#include <regex>

#include "house/rules.hpp"

namespace house {

namespace {

constexpr std::size_t lines_a_file = 400, columns_a_line = 100, lines_a_function = 60;

std::size_t characters_in(const std::string& line) {
  return static_cast<std::size_t>(std::count_if(line.begin(), line.end(), [](char c) {
    return (static_cast<unsigned char>(c) & 0xC0u) != 0x80u;  // not a UTF-8 continuation
  }));
}

/// Whether the words before a brace open a function (or a lambda), not a namespace, a type, a list.
bool opens_function(const std::string& words) {
  static const std::regex scope("(^|[\\s>])(namespace|class|struct|enum|union|extern)\\b");
  if (words.find(')') == std::string::npos) return false;
  // `struct X f() {` has its parenthesis after the type's name; a type's own line has none
  return !std::regex_search(words, scope) || words.find('(') != std::string::npos;
}

struct Function {
  std::size_t first, last;  // lines from 1
};

/// Outermost functions of a code without comments and texts.
std::vector<Function> functions_of(const std::string& code) {
  std::vector<Function> functions;
  std::vector<bool> stack;  // of braces: is it a function's, or inside one
  std::string words;        // since the last ; { }
  std::size_t line = 1, words_line = 1, first = 0;
  for (const char c : code) {
    if (c == '\n') ++line;
    if (c == '{') {
      const bool inside = !stack.empty() && stack.back();
      const bool opens = !inside && opens_function(words);
      if (opens) first = words_line;
      stack.push_back(inside || opens);
    } else if (c == '}' && !stack.empty()) {
      const bool was = stack.back();
      stack.pop_back();
      if (was && (stack.empty() || !stack.back())) functions.push_back({first, line});
    }
    if (c == '{' || c == '}' || c == ';') {
      words.clear();
    } else {
      if (words.empty() && c != ' ' && c != '\n') words_line = line;
      if (!words.empty() || (c != ' ' && c != '\n')) words += c;
    }
  }
  return functions;
}

}  // namespace

Complaints check_sizes(const File& file, bool functions_too) {
  Complaints complaints;
  const std::vector<std::string> lines = lines_of(file.text);
  if (lines.size() > lines_a_file)
    complaints.push_back(file.path + ":1: " + std::to_string(lines.size()) + " lines, " +
                         std::to_string(lines_a_file) + " allowed");
  for (std::size_t i = 0; i < lines.size(); ++i)
    if (characters_in(lines[i]) > columns_a_line)
      complaints.push_back(file.path + ":" + std::to_string(i + 1) + ": " +
                           std::to_string(characters_in(lines[i])) + " columns, " +
                           std::to_string(columns_a_line) + " allowed");
  if (!functions_too) return complaints;
  for (const Function& f : functions_of(without_comments_and_texts(file.text)))
    if (f.last - f.first + 1 > lines_a_function)
      complaints.push_back(file.path + ":" + std::to_string(f.first) + ": a function of " +
                           std::to_string(f.last - f.first + 1) + " lines, " +
                           std::to_string(lines_a_function) + " allowed");
  return complaints;
}

Complaints check_sources(const File& file) {
  static const std::regex declaration(
      "(?:inline |constexpr |static |\\[\\[nodiscard\\]\\] )*(?:std::optional<)?"
      "(?:double|Celsius|CelsiusDifference|Percent|Kilopascal|Millimetre|Metre|MetrePerSecond|"
      "WattPerSquareMetre|Degree|ThermalTime|DegreeHour)>? ([a-z_0-9]+)\\(.*");
  Complaints complaints;
  const std::vector<std::string> lines = lines_of(file.text);
  std::string comment;
  for (std::size_t i = 0; i < lines.size(); ++i) {
    std::smatch parts;
    if (lines[i].starts_with("//")) {
      comment += lines[i];
      continue;
    }
    if (std::regex_match(lines[i], parts, declaration) &&
        comment.find("Source:") == std::string::npos &&
        comment.find("science §") == std::string::npos)
      complaints.push_back(file.path + ":" + std::to_string(i + 1) + ": " + parts[1].str() +
                           " does not say where its number comes from");
    comment.clear();
  }
  return complaints;
}

}  // namespace house
