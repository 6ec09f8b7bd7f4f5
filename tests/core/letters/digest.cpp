// The digest: all that waited, worst first, and nothing that a letter may not say.
#include <algorithm>
#include <vector>

#include "rules.hpp"
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using alerts::Saying;
using risk::Level;

namespace {

bool has(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

letters::Letter heat_letter(Level level, int hour) {
  letters::Desk desk = scene::desk();
  desk.now = scene::at(14, hour, 5);
  return letters::compose(std::vector{scene::heat(Saying::opened, level)},
                          std::vector{scene::owner()}, desk)
      .front();
}

letters::Letter mildew_letter(int hour) {
  letters::Desk desk = scene::desk();
  desk.now = scene::at(14, hour, 5);
  return letters::compose(std::vector{scene::humid(Saying::opened, Level::moderate)},
                          std::vector{scene::owner()}, desk)
      .front();
}

/// 22:05 on the same evening.
letters::Desk evening() {
  letters::Desk desk = scene::desk();
  desk.now = scene::at(14, 22, 5);
  return desk;
}

std::vector<std::string> broken(const letters::Letter& letter, bool brief = false) {
  return rules::broken_by(letter, brief, scene::calendar());
}

}  // namespace

TEST_CASE("a digest names each letter that waited, the worst first and whole") {
  const std::vector waited{mildew_letter(17), heat_letter(Level::moderate, 18),
                           heat_letter(Level::severe, 19)};
  const letters::Letter digest = letters::compose_digest(waited, scene::owner(), evening());
  CHECK(broken(digest) == std::vector<std::string>{});
  CHECK(digest.subject.rfind("[3 letters] Heat Severe: north bench", 0) == 0);
  CHECK(digest.severity == alerts::Severity::severe);
  CHECK_FALSE(digest.raise);
  CHECK(digest.decided == evening().now);
  CHECK(digest.kind == "digest");
  const std::size_t severe = digest.body.find("Tue 14 Jul 7:05 pm, Severe: Heat Severe");
  const std::size_t earlier = digest.body.find("Tue 14 Jul 5:05 pm, Moderate: Mildew");
  const std::size_t later = digest.body.find("Tue 14 Jul 6:05 pm, Moderate: Heat Moderate");
  REQUIRE(later != std::string::npos);
  CHECK(severe < earlier);
  CHECK(earlier < later);  // of one severity the older first
  CHECK(digest.body.ends_with(waited[2].body));
  CHECK(has(digest.body, "NOW\n  north bench: "));
}

TEST_CASE("one letter that waited goes whole and says that it waited") {
  const std::vector waited{heat_letter(Level::severe, 19)};
  const letters::Letter digest = letters::compose_digest(waited, scene::owner(), evening());
  CHECK(broken(digest) == std::vector<std::string>{});
  CHECK(has(digest.body, "One letter had to wait"));
  CHECK(digest.body.ends_with(waited[0].body));
}

TEST_CASE("a digest's identity hangs on the oldest letter and the address alone") {
  const std::vector few{mildew_letter(17), heat_letter(Level::severe, 19)};
  std::vector more = few;
  more.push_back(heat_letter(Level::moderate, 18));
  std::reverse(more.begin(), more.end());
  letters::Desk later = evening();
  later.now += Seconds{600};
  const auto id = letters::compose_digest(few, scene::owner(), evening()).id;
  CHECK(letters::compose_digest(more, scene::owner(), later).id == id);
  letters::Recipient other = scene::owner();
  other.address = "foreman@larkspur.example";
  CHECK(letters::compose_digest(few, other, evening()).id != id);
  CHECK(letters::compose_digest(std::vector{few[1]}, scene::owner(), evening()).id != id);
}

TEST_CASE("a brief digest keeps to 160 characters and names the worst") {
  letters::Recipient brief = scene::owner();
  brief.brief = true;
  std::vector<letters::Letter> waited{mildew_letter(17), heat_letter(Level::severe, 19)};
  const letters::Letter digest = letters::compose_digest(waited, brief, evening());
  CHECK(broken(digest, true) == std::vector<std::string>{});
  CHECK(digest.body.rfind("2 letters waited. Worst: Tue 14 Jul 7:05 pm, Heat Severe", 0) == 0);
}

TEST_CASE("hundreds of letters fit into one digest, and what is not named is counted") {
  std::vector<letters::Letter> waited;
  for (int n = 0; n < 300; ++n) {
    waited.push_back(n == 250 ? heat_letter(Level::severe, 19) : mildew_letter(17));
    waited.back().id += "-" + std::to_string(n);
    waited.back().subject =
        "Mildew Moderate: the long field beyond the second gate, number " + std::to_string(n);
  }
  waited[7].subject = "tab\there\r\nBcc: someone@larkspur.example \x7f\xff";
  const letters::Letter digest = letters::compose_digest(waited, scene::owner(), evening());
  CHECK(broken(digest) == std::vector<std::string>{});
  CHECK(digest.subject.rfind("[300 letters] ", 0) == 0);
  CHECK(has(digest.body, "And 100 more, none of them graver"));
  CHECK_FALSE(has(digest.body, "\nBcc:"));
}
