// Help, usage and exit statuses of every command.
#include <sstream>

#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using program::run;

namespace {

/// A call that is refused, and what the refusal must name.
struct Case {
  std::vector<std::string> arguments;
  std::string named;
};

const std::vector<std::string> commands{"run",    "check", "now",    "water",   "scout",
                                        "review", "hours", "replay", "letters", "mailtest"};
}  // namespace

TEST_CASE("help of each command holds one worked example whose options it knows") {
  for (const std::string& command : commands) {
    const auto help = run({command, "--help"});
    INFO(command << "\n" << help.out << help.err);
    CHECK(help.status == 0);
    const auto at = help.out.find("Example:");
    REQUIRE(at != std::string::npos);
    CHECK(help.out.find("Example:", at + 1) == std::string::npos);
    std::istringstream example(help.out.substr(at + 8));
    std::string word;
    example >> word;
    CHECK(word == "antherd");
    example >> word;
    CHECK(word == command);
    while (example >> word) {
      if (word.rfind("--", 0) != 0) continue;
      INFO(word);
      const bool known =
          word == "--settings" || help.out.substr(0, at).find(word) != std::string::npos;
      CHECK(known);
    }
  }
  const auto help = run({"--help"});
  CHECK(help.status == 0);
  for (const std::string& command : commands) {
    CHECK(help.out.find("  " + command + " ") != std::string::npos);
  }
  CHECK(help.out.find("Exit status: 0 done") != std::string::npos);
}

TEST_CASE("wrong usage ends with 2 and names what was wrong") {
  const ground::Folder folder;
  const auto [arguments, named] = GENERATE(values<Case>({
      {{}, "--help"},
      {{"waters"}, "waters"},
      {{"now", "--tomorrow"}, "--tomorrow"},
      {{"now", "--settings", "missing.toml"}, "missing.toml"},
      {{"water"}, "field"},
      {{"letters", "--retry", "seven"}, "seven"},
      {{"run", "--pace", "0"}, "--pace"},
  }));
  const auto ended = run(arguments, folder.path());
  INFO(ended.out << ended.err);
  CHECK(ended.status == 2);
  CHECK((ended.out + ended.err).find(named) != std::string::npos);
}

TEST_CASE("a unique beginning of a field's name is enough, anything else is named") {
  ground::Folder folder;
  ground::Farm farm;
  farm.more =
      "\n[[field]]\nname = \"north creek\"\nstations = [\"bench\"]\nsown = 2026-06-25\n"
      "crop_type = \"quick\"\nirrigation = \"drip\"\n";
  ground::settings_in(folder, farm);
  const auto list = [&](const std::string& field) {
    return run({"water", field, "--list", "--settings", folder / "antherd.toml"});
  };
  const auto wrong = list("south");
  CHECK(wrong.status == 2);
  CHECK(wrong.err.find("south") != std::string::npos);
  CHECK(wrong.err.find("north bench") != std::string::npos);
  const auto both = list("north");
  CHECK(both.status == 2);
  CHECK(both.err.find("north creek") != std::string::npos);
  const auto none = list("north c");
  CHECK(none.status == 1);  // understood, but no service has run here
  CHECK(none.err.find("there is none yet") != std::string::npos);
}

TEST_CASE("check names all faults at once, with their lines, and nothing secret") {
  ground::Folder folder;
  const std::string good = ground::text_of(ground::Farm{});
  folder.write("antherd.toml",
               "[farm]\nname = \"Larkspur\\r\\nBcc: other@larkspur.example\"\n"
               "time_zone = \"Moon/Base\"\n[stattion]\n"
               "[[station]]\nname = \"a\\nb\"\nlatitude = 91.0\nlongitude = -117.0\n"
               "elevation = \"780 parsecs\"\ninterval = \"5 min\"\n");
  const auto bad = run({"check", "--settings", folder / "antherd.toml"});
  INFO(bad.out << bad.err);
  CHECK(bad.status == 2);
  for (const char* line : {"antherd.toml:2:", "antherd.toml:3:", "antherd.toml:4:",
                           "antherd.toml:6:", "antherd.toml:7:", "antherd.toml:9:"}) {
    INFO(line);
    CHECK(bad.out.find(line) != std::string::npos);
  }
  CHECK(bad.out.find("\nBcc") == std::string::npos);
  CHECK(bad.out.find("faults") != std::string::npos);
  CHECK(bad.out.find('\r') == std::string::npos);

  folder.write("antherd.toml", good);
  std::filesystem::create_directories(folder / "drop");
  std::filesystem::create_directories(folder / "diary");
  const auto fine = run({"check"}, folder.path());  // ./antherd.toml
  INFO(fine.out << fine.err);
  CHECK(fine.status == 0);
  for (const char* part : {"station bench", "field north bench", "owner@larkspur.example"}) {
    CHECK(fine.out.find(part) != std::string::npos);
  }
}

TEST_CASE("a password is never printed") {
  ground::Folder folder;
  ground::Farm farm;
  farm.mail =
      "server = \"smtps://mail.larkspur.example:465\"\nuser = \"alerts@larkspur.example\"\n"
      "password_file = \"mail-password\"\n";
  folder.write("mail-password", "hunter-of-moths\n");
  std::filesystem::permissions(folder / "mail-password", std::filesystem::perms::owner_read);
  ground::settings_in(folder, farm);
  const auto checked = run({"check"}, folder.path());
  CHECK(checked.status == 0);
  CHECK((checked.out + checked.err).find("hunter-of-moths") == std::string::npos);
}
