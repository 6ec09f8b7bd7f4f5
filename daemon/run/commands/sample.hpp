// `antherd check --sample FILE`: a look at a station's file and a settings block that reads it.
#pragma once

#include <string>
#include <vector>

namespace antherd::commands {

/// The header and rows of a file, cells trimmed and unquoted.
struct SampleText {
  char separator = ',';
  std::vector<std::string> header;
  std::vector<std::string> units;  // of a row below the header that holds no digit; else empty
  std::vector<std::vector<std::string>> rows;
};

/// Splits a CSV text: its first rows, and of a long one rows from all its length, so that a file
/// that begins in winter shows its summer too. Nothing is judged here.
SampleText split_sample(const std::string& text);

/// The guessed `[station.drop]` lines, and remarks where a person should look.
/// Keys that no column fits are left out and named in `missing`.
struct SampleGuess {
  std::vector<std::string> lines;
  std::vector<std::string> missing;
  std::vector<std::string> doubts;
};
SampleGuess guess_form(const SampleText& sample);

}  // namespace antherd::commands
