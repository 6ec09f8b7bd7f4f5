// The tree keeps the rules of the house. Each complaint names file and line.
#include <charconv>
#include <filesystem>

#include "house/tree.hpp"
#include "support/catch.hpp"
#include "support/paths.hpp"

using namespace house;

namespace {

bool in_daemon(const File& file) { return file.path.starts_with("daemon/") && is_code(file.path); }
bool in_core(const File& file) {
  return file.path.starts_with("daemon/core/") && is_code(file.path);
}

}  // namespace

TEST_CASE("rooms include only what their row of the room table allows") {
  Complaints complaints;
  const RoomTable table = read_room_table(text_of("DEVELOPERS.md"), complaints);
  CHECK(complaints == Complaints{});
  CHECK(table.size() >= 20);
  for (const auto& [room, allowed] : table) {
    INFO(room << " stands in the table but not under daemon/");
    CHECK(std::filesystem::exists(std::filesystem::path(paths::source()) / "daemon" / room));
  }
  CHECK(complaints_about(in_daemon, [&](const File& f) { return check_includes(f, table); }) == "");
}

TEST_CASE("no edge may include another edge, and no core room an edge") {
  Complaints complaints;
  for (const auto& [room, allowed] : read_room_table(text_of("DEVELOPERS.md"), complaints))
    for (const std::string& other : allowed) {
      INFO(room << " may include " << other);
      const bool upwards = other.starts_with("run/") || other.starts_with("edge/");
      CHECK_FALSE((room.starts_with("core/") && upwards));
      CHECK_FALSE((room.starts_with("edge/") && upwards));
    }
}

TEST_CASE("the core knows no clock, thread, file, log, environment, locale or chance") {
  CHECK(complaints_about(in_core, check_core_words) == "");
}

TEST_CASE("only edge/clock asks what time it is") {
  CHECK(complaints_about(in_daemon, check_clock) == "");
}

TEST_CASE("no shell, no other program, no SQL put together from values") {
  CHECK(complaints_about(in_daemon, check_commands) == "");
}

TEST_CASE("files, lines and functions stay small") {
  const auto own = [](const File& f) { return is_code(f.path) && !f.path.starts_with("tests/"); };
  const auto of_tests = [](const File& f) {
    return is_code(f.path) && f.path.starts_with("tests/");
  };
  CHECK(complaints_about(own, [](const File& f) { return check_sizes(f, true); }) == "");
  CHECK(complaints_about(of_tests, [](const File& f) { return check_sizes(f, false); }) == "");
}

TEST_CASE("every formula says where it comes from") {
  const auto formulas = [](const File& f) {
    const std::string room = room_of(f.path);
    return f.path.starts_with("daemon/") && f.path.ends_with(".hpp") &&
           (room == "core/weather" || room == "core/crop" || room == "core/risk");
  };
  CHECK(complaints_about(formulas, check_sources) == "");
}

TEST_CASE("the tree speaks of the project alone and leaves nothing undone") {
  CHECK(tree().size() > 50);
  CHECK(complaints_about([](const File&) { return true; }, check_words) == "");
}

TEST_CASE("the top of the tree is as agreed") {
  CHECK(check_top_level(top_level()) == Complaints{});
}

TEST_CASE("the letter in the README is one that the program writes") {
  const std::string letter = text_of("tests/core/letters/expected/heat-opened.txt");
  REQUIRE(letter.size() > 500);
  const bool shown = text_of("README.md").find("```\n" + letter + "```\n") != std::string::npos;
  INFO("paste tests/core/letters/expected/heat-opened.txt between the letter marks of README.md");
  CHECK(shown);
}

TEST_CASE("no test vanishes quietly") {
  std::map<std::string, int> found;
  for (const File& file : tree())
    if (file.path.starts_with("tests/") && file.path.ends_with(".cpp"))
      if (const int count = count_tests(file.text); count > 0)
        found[file.path.substr(6, file.path.rfind('/') - 6)] += count;
  std::string as_found;
  for (const auto& [folder, count] : found) as_found += folder + " " + std::to_string(count) + "\n";
  INFO("if this is meant, let tests/house/expected_tests.txt say:\n" << as_found);
  CHECK(text_of("tests/house/expected_tests.txt") == as_found);
}
