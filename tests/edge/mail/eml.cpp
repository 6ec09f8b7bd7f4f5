// Letters as files: whole or not at all, and never over one another.
#include <sys/stat.h>
#include <unistd.h>

#include <fstream>
#include <sstream>

#include "letters_for_tests.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::mail;
namespace files = std::filesystem;

namespace {

const std::string from = "alerts@larkspur.example";

std::string content_of(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  std::ostringstream text;
  text << file.rdbuf();
  return text.str();
}

std::size_t count_in(const std::string& folder) {
  return static_cast<std::size_t>(
      std::distance(files::directory_iterator(folder), files::directory_iterator()));
}

}  // namespace

TEST_CASE("a letter becomes a file named after it, in a folder that is made") {
  const TemporaryFolder temporary;
  const std::string folder = temporary.path() + "/outgoing";
  const letters::Letter letter = letter_for_tests();
  const Result<std::string> path = write_eml(folder, from, letter);
  REQUIRE(path);
  CHECK(*path == folder + "/" + letter.id + ".eml");
  CHECK(content_of(*path) == *as_rfc5322(letter, from));
  CHECK(count_in(folder) == 1);  // no temporary file stays
}

TEST_CASE("the same letter is the same file, another letter never touches it") {
  const TemporaryFolder folder;
  letters::Letter letter = letter_for_tests();
  const std::string first = *write_eml(folder.path(), from, letter);
  letter.subject = "[delayed 2 h] the same letter, later";
  CHECK(*write_eml(folder.path(), from, letter) == first);
  CHECK(content_of(first).find("delayed") != std::string::npos);
  CHECK(count_in(folder.path()) == 1);

  letters::Letter other = letter;
  other.recipient = "manager@larkspur.example";
  const std::string second = *write_eml(folder.path(), from, other);
  CHECK(second == folder.path() + "/" + letter.id + ".2.eml");
  CHECK(content_of(first).find("To: <owner@larkspur.example>") != std::string::npos);
  CHECK(*write_eml(folder.path(), from, other) == second);
  CHECK(count_in(folder.path()) == 2);
}

TEST_CASE("what a person put there, or a power cut left, is no hindrance and is not lost") {
  const TemporaryFolder folder;
  const letters::Letter letter = letter_for_tests();
  const std::string own = folder.path() + "/" + letter.id + ".eml";
  std::ofstream(own) << "a note of somebody's\n";
  std::ofstream(folder.path() + "/." + letter.id + ".part") << "half";
  const Result<std::string> path = write_eml(folder.path(), from, letter);
  REQUIRE(path);
  CHECK(*path != own);
  CHECK(content_of(own) == "a note of somebody's\n");
  CHECK(count_in(folder.path()) == 2);
}

TEST_CASE("links are not followed") {
  const TemporaryFolder folder, elsewhere;
  const letters::Letter letter = letter_for_tests();
  const std::string target = elsewhere.path() + "/target";
  std::ofstream(target) << "untouched";
  files::create_symlink(target, folder.path() + "/" + letter.id + ".eml");
  files::create_symlink(target, folder.path() + "/." + letter.id + ".part");
  CHECK(write_eml(folder.path(), from, letter));
  CHECK(content_of(target) == "untouched");
}

TEST_CASE("a folder that root makes belongs to whom the folder above belongs") {
  if (::geteuid() != 0) return;  // only root can give a folder away
  const TemporaryFolder above;
  REQUIRE(::chown(above.path().c_str(), 12345, 23456) == 0);
  REQUIRE(write_eml(above.path() + "/outgoing", from, letter_for_tests()));
  struct stat made {};
  REQUIRE(::stat((above.path() + "/outgoing").c_str(), &made) == 0);
  CHECK(made.st_uid == 12345);
  CHECK(made.st_gid == 23456);
}

TEST_CASE("failures are named") {
  const TemporaryFolder folder;
  const std::string missing = folder.path() + "/no/such";
  const Result<std::string> nowhere = write_eml(missing, from, letter_for_tests());
  REQUIRE_FALSE(nowhere);
  CHECK(nowhere.failure().sentence().find(missing) != std::string::npos);
  CHECK(nowhere.failure().sentence().find("start the service first") != std::string::npos);

  letters::Letter letter = letter_for_tests();
  letter.id = "../escape";
  CHECK_FALSE(write_eml(folder.path(), from, letter));
  CHECK(count_in(folder.path()) == 0);

  std::ofstream(folder.path() + "/file") << "x";
  CHECK_FALSE(write_eml(folder.path() + "/file", from, letter_for_tests()));
}
