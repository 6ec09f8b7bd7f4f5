// The letters that go past the outbox, whole, compared with the texts in expected/.
#include "paper.hpp"
#include "rules.hpp"
#include "scene.hpp"

using namespace antherd;
using paper::on_paper;
using paper::seen_to_now;

namespace {

/// To the owner, and as a short message.
alerts::Severity compare(const std::string& name, const letters::StoreTrouble& trouble,
                         const letters::Desk& desk) {
  letters::Recipient brief = scene::owner();
  brief.brief = true;
  const auto made =
      letters::compose_store_trouble(trouble, std::vector{scene::owner(), brief}, desk);
  REQUIRE(made.size() == 2);
  for (const auto& letter : made) {
    CHECK(rules::broken_by(letter, letter.body.size() < 200, scene::calendar()).empty());
  }
  paper::compare(name, on_paper(made[0]));
  paper::compare(name + "-brief", on_paper(made[1]));
  return made[0].severity;
}

}  // namespace

TEST_CASE("the letter that goes past a store that takes nothing reads as written") {
  const letters::Desk desk = seen_to_now(scene::desk());
  const letters::StoreTrouble trouble{
      scene::at(14, 15, 20),
      "Could not keep new samples (/var/lib/antherd/antherd.db): disk I/O error (Read-only file "
      "system)"};
  CHECK(compare("store-trouble", trouble, desk) == alerts::Severity::severe);
  letters::Recipient elsewhere = scene::owner();
  elsewhere.fields = {"south bench"};
  const auto made = letters::compose_store_trouble(trouble, std::vector{elsewhere}, desk);
  REQUIRE(made.size() == 1);
  CHECK(made[0].body.find("north bench") == std::string::npos);
}

TEST_CASE("the letter of a watch that could not begin reads as written") {
  letters::Desk desk = scene::desk();
  desk.fields.clear();  // nothing is known
  const letters::StoreTrouble trouble{scene::at(14, 15, 20),
                                      "Could not open the store (/var/lib/antherd/antherd.db): "
                                      "attempt to write a readonly database",
                                      false};
  compare("watch-stopped", trouble, desk);
}

TEST_CASE("the letter of a disk that is nearly full reads as written") {
  letters::StoreTrouble trouble{
      scene::at(14, 15, 20),
      "Could not keep new samples (/var/lib/antherd/antherd.db): the disk is full: the 8 MiB in "
      "reserve are given up and less than 16 MiB are free"};
  trouble.letters_go = true;
  CHECK(compare("disk-low", trouble, seen_to_now(scene::desk())) == alerts::Severity::minor);
}
