// Short writing of many values in one cell of a table: "2x32.2 gap 31" is 32.2, 32.2, a gap, 31.
#pragma once

#include <optional>
#include <sstream>
#include <string>
#include <vector>

namespace tables {

inline std::vector<std::string> words_of(const std::string& text, char between = ' ') {
  std::vector<std::string> words;
  std::istringstream in(text);
  for (std::string word; std::getline(in, word, between);) words.push_back(word);
  return words;
}

/// The values of a cell, nothing for each "gap".
inline std::vector<std::optional<double>> values_of(const std::string& text) {
  std::vector<std::optional<double>> values;
  for (const std::string& word : words_of(text)) {
    const auto times = word.find('x');
    if (word == "gap") {
      values.emplace_back();
    } else if (times == std::string::npos) {
      values.emplace_back(std::stod(word));
    } else {
      values.insert(values.end(), std::stoul(word.substr(0, times)),
                    std::stod(word.substr(times + 1)));
    }
  }
  return values;
}

}  // namespace tables
