// Every broken setting has its exact complaint: line, what was got, what is allowed, an example.
// The cases stand in broken.txt, where their long sentences can be read as a farmer would.
#include <fstream>

#include "farm.hpp"
#include "support/catch.hpp"
#include "support/paths.hpp"

using namespace antherd;

namespace {

struct Case {
  std::string name, passage, other;
  std::vector<std::string> sentences;
};

std::vector<Case> cases() {
  std::ifstream file(paths::source() + "/tests/settings/broken.txt");
  std::vector<Case> all(1);
  for (std::string line; std::getline(file, line);) {
    Case& current = all.back();
    if (line.empty()) {
      if (!current.passage.empty()) all.emplace_back();
    } else if (line.starts_with("- ")) {
      current.passage += line.substr(2) + "\n";
    } else if (line.starts_with("+ ")) {
      current.other += line.substr(2) + "\n";
    } else if (line.starts_with("= ")) {
      current.sentences.push_back(line.substr(2));
    }
  }
  if (all.back().passage.empty()) all.pop_back();
  return all;
}

}  // namespace

TEST_CASE("every broken setting gets exactly its complaints") {
  const std::vector<Case> all = cases();
  CHECK(all.size() == 105);  // no case vanishes quietly
  for (const Case& broken : all) {
    INFO("- " << broken.passage << "+ " << broken.other);
    CHECK_FALSE(broken.sentences.empty());
    CHECK(test::complaints_of(test::farm_with(broken.passage, broken.other)) == broken.sentences);
  }
}

TEST_CASE("the farm itself is free of faults") {
  CHECK(test::complaints_of(test::farm_text).empty());
}

TEST_CASE("all faults of one file are told at once, in the order of lines") {
  std::string text = test::farm_text;
  const auto swap = [&](const std::string& passage, const std::string& other) {
    const std::size_t at = text.find(passage);
    REQUIRE(at != std::string::npos);
    text.replace(at, passage.size(), other);
  };
  swap("\"us\"", "\"imperial\"");
  swap("latitude = 46.73", "lattitude = 46.73");
  swap("\"5 min\"", "5");
  swap("\"degF\"", "\"F\"");
  swap("\"coastal\"", "\"sealevel\"");
  swap("2026-04-28", "true");
  const settings::Reading reading = settings::read_text(text, "farm.toml", false);
  CHECK_FALSE(reading.settings);
  std::vector<int> lines;
  for (const auto& complaint : reading.complaints) lines.push_back(complaint.line);
  CHECK(lines == std::vector<int>{4, 13, 15, 18, 22, 28, 32});
  CHECK(reading.complaints[1].where == "[[station]] bench, latitude");
  CHECK(reading.complaints[2].got == "the unknown key \"lattitude\"");
  CHECK(reading.complaints[2].advice == "did you mean \"latitude\"?");
  CHECK(reading.complaints[4].allowed == "degC, degF or K");
}

TEST_CASE("texts that are no TOML get one complaint with a line") {
  const auto only = [](const std::string& text) {
    const auto sentences = test::complaints_of(text);
    REQUIRE(sentences.size() == 1);
    return sentences.front();
  };
  CHECK(
      only("[farm]\nname = \"x\"\nunits = \n").starts_with("farm.toml:3: from here on it is no "));
  CHECK(only(std::string("a\0b = 1", 7)).starts_with("farm.toml:1: from here on it is no TOML"));
  CHECK(only("\xFF\xFEn\0a\0m\0").starts_with("farm.toml:1: from here on it is no TOML"));
  CHECK(only("name = \"\xE9\"").ends_with("(save the file as UTF-8)"));
  CHECK(only("x = 1\nfolder = \"C:\\drop\"").starts_with("farm.toml:2: "));
  CHECK(only(std::string(300 * 1024, '#')).ends_with("the file is larger than 256 KiB"));
  CHECK(only("x = " + std::string(5000, '[')).starts_with("farm.toml:1: "));
}

TEST_CASE("values inside values inside values are refused, not followed for ever") {
  std::string deep = "farm = ";
  for (int i = 0; i < 100; ++i) deep += "[{a.b.c.d.e = ";
  deep += "1";
  for (int i = 0; i < 100; ++i) deep += "}]";
  const auto sentences = test::complaints_of(deep);
  REQUIRE_FALSE(sentences.empty());
  CHECK(sentences.front().starts_with("farm.toml:1: [farm]: got a list; allowed: one table"));
}

TEST_CASE("an empty text misses the farm, the station and the field") {
  const std::vector<std::string> expected{
      "farm.toml:1: [farm]: missing: a table with the farm's name and time zone; for example: "
      "[farm] with name = \"Larkspur Bench\" and time_zone = \"America/Los_Angeles\" below it",
      "farm.toml:1: [[station]]: missing: at least one station; for example: [[station]] with "
      "name = \"bench\" below it",
      "farm.toml:1: [[field]]: missing: at least one field; for example: [[field]] with name = "
      "\"north bench\" below it"};
  CHECK(test::complaints_of("") == expected);
  CHECK(test::complaints_of("# only a comment\n") == expected);
}

TEST_CASE("no complaint holds a control character, whatever the file holds") {
  for (const std::string& text :
       {test::farm_with("name = \"Larkspur Bench\"", "name = \"a\\r\\nSubject: b\""),
        test::farm_with("name = \"bench\"", "name = \"be\\u001B[2Jnch\""),
        test::farm_with("units = \"us\"", "\"un\\u0007its\" = 3"),
        test::farm_with("crop_type = \"coastal\"", "crop_type = \"\\u0085\\u202E\\u0000\""),
        test::farm_with("\"north bench\"", "\"north\\nbench\"")}) {
    const auto sentences = test::complaints_of(text);
    CHECK_FALSE(sentences.empty());
    for (const std::string& sentence : sentences) {
      INFO(sentence);
      for (const char letter : sentence) CHECK(static_cast<unsigned char>(letter) >= 0x20);
      CHECK(sentence.find("\u0085") == std::string::npos);
      CHECK(sentence.find("\u202E") == std::string::npos);
    }
  }
}
