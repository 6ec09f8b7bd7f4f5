// Misspelt names and their nearest.
#include "edge/clock/nearest.hpp"

#include "support/catch.hpp"

using namespace antherd::clock;

TEST_CASE("the distance counts changed, added, dropped and swapped letters, by hand") {
  CHECK(distance_between("kitten", "sitting") == 3);  // the textbook example
  CHECK(distance_between("", "abc") == 3);
  CHECK(distance_between("abc", "") == 3);
  CHECK(distance_between("form", "from") == 1);
  CHECK(distance_between("Silent-After", "silent_after") == 0);
}

TEST_CASE("the nearest names come in order and far ones not at all") {
  const std::vector<std::string> known{"latitude", "longitude", "elevation", "interval", "name"};
  CHECK(nearest_to("lattitude", known) == std::vector<std::string>{"latitude"});
  CHECK(nearest_to("longtitude", known, 2) == std::vector<std::string>{"longitude", "latitude"});
  CHECK(nearest_to("nmae", known) == std::vector<std::string>{"name"});
  CHECK(nearest_to("colour", known).empty());
  CHECK(nearest_to("", known).empty());
  CHECK(nearest_to(std::string(100'000, 'n'), known).empty());
}
