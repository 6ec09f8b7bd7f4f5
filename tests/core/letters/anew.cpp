// The letter that says that the watch began anew.
#include "core/letters/anew.hpp"

#include "rules.hpp"
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;

namespace {

bool has(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

letters::Letter letter_of(const letters::Anew& anew, bool brief = false) {
  letters::Recipient owner = scene::owner();
  owner.brief = brief;
  const auto made = letters::compose_anew(anew, std::vector{owner}, scene::desk());
  REQUIRE(made.size() == 1);
  return made.front();
}

}  // namespace

TEST_CASE("the letter of a new beginning names the file, the copy's day and what to enter") {
  const letters::Anew anew{"antherd-damaged-2026-07-14.db", scene::at(13, 6), 14, 1};
  const auto letter = letter_of(anew);
  CHECK(rules::broken_by(letter, false, scene::calendar()) == std::vector<std::string>{});
  INFO(letter.body);
  CHECK(has(letter.body, "antherd-damaged-2026-07-14.db"));
  CHECK(has(letter.body, "Mon 13 Jul"));
  CHECK(has(letter.body, "14 irrigations and"));
  CHECK(has(letter.body, "1 scouting note."));
  CHECK(has(letter.body, "antherd water \"north bench\" --list"));
  CHECK(has(letter.body, "antherd scout \"south bench\" --list"));
  const auto brief = letter_of(anew, true);
  CHECK(rules::broken_by(brief, true, scene::calendar()) == std::vector<std::string>{});
  CHECK(has(brief.body, "since Mon 13 Jul"));
}

TEST_CASE("where there was no copy the letter asks for the whole season's notes") {
  const auto letter = letter_of({});
  CHECK(rules::broken_by(letter, false, scene::calendar()) == std::vector<std::string>{});
  INFO(letter.body);
  CHECK(has(letter.body, "its store was missing"));
  CHECK(has(letter.body, "enter this season's irrigations and scouting notes again"));
  CHECK(!has(letter.body, "put aside"));
  const auto brief = letter_of({}, true);
  CHECK(rules::broken_by(brief, true, scene::calendar()) == std::vector<std::string>{});
  CHECK(letter.id != letter_of({"other.db", {}, 0, 0}).id);
}
