// Two texts line by line, by their longest common part; see told.hpp.
#include <algorithm>
#include <sstream>
#include <vector>

#include "seasons/told.hpp"

namespace antherd::seasons {
namespace {

std::vector<std::string> lines_of(const std::string& text) {
  std::istringstream stream(text);
  std::vector<std::string> lines;
  for (std::string line; std::getline(stream, line);) lines.push_back(line);
  return lines;
}

}  // namespace

std::string difference(const std::string& approved, const std::string& fresh) {
  const auto a = lines_of(approved), b = lines_of(fresh);
  // common[i][j]: how many lines a from i on and b from j on have in common, in order
  std::vector<std::vector<int>> common(a.size() + 1, std::vector<int>(b.size() + 1, 0));
  for (std::size_t i = a.size(); i-- > 0;) {
    for (std::size_t j = b.size(); j-- > 0;) {
      common[i][j] =
          a[i] == b[j] ? common[i + 1][j + 1] + 1 : std::max(common[i + 1][j], common[i][j + 1]);
    }
  }
  std::string text;
  std::size_t i = 0, j = 0;
  while (i < a.size() || j < b.size()) {
    if (i < a.size() && j < b.size() && a[i] == b[j]) {
      ++i, ++j;
    } else if (j == b.size() || (i < a.size() && common[i + 1][j] >= common[i][j + 1])) {
      text += "- " + std::to_string(i + 1) + ": " + a[i] + "\n";
      ++i;
    } else {
      text += "+ " + std::to_string(j + 1) + ": " + b[j] + "\n";
      ++j;
    }
  }
  return text;
}

}  // namespace antherd::seasons
