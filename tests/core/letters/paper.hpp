// Whole letters, compared with the texts in expected/. A changed letter is read before its text is
// accepted: set ANTHERD_WRITE_EXPECTED to write what the code says now.
#pragma once

#include <cstdlib>
#include <fstream>
#include <iostream>
#include <sstream>
#include <string>

#include "core/letters/compose.hpp"
#include "support/catch.hpp"
#include "support/paths.hpp"

namespace paper {

using namespace antherd;

inline std::string file_of(const std::string& name) {
  return paths::source() + "/tests/core/letters/expected/" + name + ".txt";
}

inline void compare(const std::string& name, const std::string& text) {
  if (std::getenv("ANTHERD_WRITE_EXPECTED") != nullptr) std::ofstream(file_of(name)) << text;
  std::ifstream file(file_of(name));
  REQUIRE(file.good());
  std::ostringstream expected;
  expected << file.rdbuf();
  if (expected.str() != text) {
    std::cerr << "---- expected " << name << "\n"
              << expected.str() << "---- got\n"
              << text << "----\n";
  }
  CHECK((expected.str() == text));
}

inline std::string on_paper(const letters::Letter& letter) {
  return "Subject: " + letter.subject + "\n\n" + letter.body;
}

/// The fields were seen to the last full hour.
inline letters::Desk seen_to_now(letters::Desk desk) {
  for (auto& [name, status] : desk.fields) {
    status.as_of = Instant(hour_of(desk.now));
    status.data.last_reading = status.as_of;
  }
  return desk;
}

}  // namespace paper
