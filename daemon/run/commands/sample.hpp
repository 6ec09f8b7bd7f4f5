// `antherd check --sample FILE`: a look at a station's file and a settings block that reads it.
#pragma once

#include <string>
#include <vector>

namespace antherd::commands {

/// The header and first rows of a file, cells trimmed and unquoted.
struct SampleText {
  char separator = ',';
  std::vector<std::string> header;
  std::vector<std::vector<std::string>> rows;
};

/// Splits the start of a CSV text. Nothing is judged here.
SampleText split_sample(const std::string& text);

/// The guessed `[station.drop]` lines, each with a remark where a person should look.
/// Keys that no column fits are left out and named in `missing`.
struct SampleGuess {
  std::vector<std::string> lines;
  std::vector<std::string> missing;
  std::vector<std::string> doubts;
};
SampleGuess guess_form(const SampleText& sample);

}  // namespace antherd::commands
