// Cutting text: lines, and code without its comments and literals.
#include <algorithm>

#include "house/rules.hpp"

namespace house {

std::vector<std::string> lines_of(std::string_view text) {
  std::vector<std::string> lines;
  while (!text.empty()) {
    const std::size_t end = std::min(text.find('\n'), text.size());
    lines.emplace_back(text.substr(0, end));
    text.remove_prefix(std::min(end + 1, text.size()));
  }
  return lines;
}

namespace {

/// Where the literal or comment that begins at `i` ends (one past), or i when none begins there.
std::size_t end_of_hidden(std::string_view code, std::size_t i) {
  const auto found = [&](std::string_view what, std::size_t from) {
    const std::size_t at = code.find(what, from);
    return at == std::string_view::npos ? code.size() : at + what.size();
  };
  if (code.substr(i, 2) == "//") return std::min(code.find('\n', i), code.size());
  if (code.substr(i, 2) == "/*") return found("*/", i + 2);
  if (code.substr(i, 2) == "R\"") {
    const std::size_t open = std::min(code.find('(', i), code.size());
    return found(")" + std::string(code.substr(i + 2, open - i - 2)) + "\"", open);
  }
  const char quote = code[i];
  // 1'000 is a number, not a text
  const bool digit_mark =
      quote == '\'' && i > 0 && std::isalnum(static_cast<unsigned char>(code[i - 1]));
  if ((quote != '"' && quote != '\'') || digit_mark) return i;
  for (std::size_t j = i + 1; j < code.size(); ++j) {
    if (code[j] == '\\')
      ++j;
    else if (code[j] == quote || code[j] == '\n')
      return j + 1;
  }
  return code.size();
}

}  // namespace

std::string without_comments_and_texts(std::string_view code) {
  std::string seen(code);
  for (std::size_t i = 0; i < code.size();) {
    const std::size_t end = end_of_hidden(code, i);
    if (end == i) {
      ++i;
      continue;
    }
    for (; i < end; ++i)
      if (seen[i] != '\n') seen[i] = ' ';
  }
  return seen;
}

}  // namespace house
