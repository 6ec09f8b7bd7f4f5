// What a late or doubtful copy says of itself.
#include <sstream>

#include "letters_for_tests.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::outbox;
using std::chrono::hours;
using std::chrono::minutes;

namespace {

std::size_t characters(const std::string& text) {
  std::size_t count = 0;
  for (char byte : text) count += (static_cast<unsigned char>(byte) & 0xC0) != 0x80 ? 1 : 0;
  return count;
}

std::string first_line(const std::string& text) { return text.substr(0, text.find('\n')); }

std::size_t widest(const std::string& text) {
  std::istringstream lines(text);
  std::size_t width = 0;
  for (std::string line; std::getline(lines, line);) width = std::max(width, characters(line));
  return width;
}

std::string delay_told(Seconds late) {
  const std::string subject = as_sent(item_of(1), afternoon + late).subject;
  return subject.starts_with("[") ? subject.substr(0, subject.find(']') + 1) : "";
}

}  // namespace

TEST_CASE("a letter in time goes as it was written") {
  const Item item = item_of(1);
  for (Seconds late : {Seconds(0), Seconds(30 * 60)}) {
    const letters::Letter letter = as_sent(item, afternoon + late);
    CHECK(letter.subject == item.letter.subject);
    CHECK(letter.body == item.letter.body);
    CHECK(letter.id == item.letter.id);
  }
}

TEST_CASE("the delay in words") {
  CHECK(delay_told(minutes(30)).empty());
  CHECK(delay_told(minutes(30) + Seconds(1)) == "[delayed 30 min]");
  CHECK(delay_told(minutes(59)) == "[delayed 59 min]");
  CHECK(delay_told(hours(1)) == "[delayed 1 h]");
  CHECK(delay_told(minutes(185)) == "[delayed 3 h 5 min]");
  CHECK(delay_told(hours(24)) == "[delayed 1 d]");
  CHECK(delay_told(hours(24) + minutes(59)) == "[delayed 1 d]");
  CHECK(delay_told(hours(51) + minutes(12)) == "[delayed 2 d 3 h]");
}

TEST_CASE("a late letter says so, and whether the danger still held") {
  const Item item = item_of(1);
  const letters::Letter letter = as_sent(item, afternoon + hours(51));
  CHECK(letter.id == item.letter.id);
  CHECK(letter.decided == item.letter.decided);
  CHECK(letter.subject.starts_with("[delayed 2 d 3 h] HEAT Severe: north bench 96 °F"));
  CHECK(first_line(letter.body) ==
        "Delayed 2 d 3 h. At 3 pm it was above 95 °F and had not ended.");
  CHECK(letter.body.ends_with("\n\n" + item.letter.body));

  Item silent = item;
  silent.letter.still.clear();
  CHECK(first_line(as_sent(silent, afternoon + hours(2)).body)
            .starts_with("Delayed 2 h. Whether this still holds was not known"));
}

TEST_CASE("the subject stays within 70 characters, cut between characters") {
  Item item = item_of(1);
  for (std::size_t length = 40; length <= 70; ++length) {
    item.letter.subject.clear();
    for (std::size_t n = 0; n < length; ++n) item.letter.subject += "°";
    const std::string subject = as_sent(item, afternoon + hours(51)).subject;
    INFO(subject);
    const std::size_t whole = length + std::string("[delayed 2 d 3 h] ").size();
    CHECK(characters(subject) == std::min<std::size_t>(whole, 70));
    CHECK(subject.ends_with("…") == (whole > 70));
  }
}

TEST_CASE("after a doubt the first line says that it may be a copy") {
  Item item = doubt(take(item_of(1), afternoon), afternoon);
  letters::Letter letter = as_sent(item, afternoon + minutes(10));
  CHECK(letter.body.starts_with("You may already have this letter"));
  CHECK(letter.subject == item.letter.subject);
  CHECK(letter.id == item.letter.id);
  CHECK(letter.body.find("lost") == std::string::npos);  // a word that no letter says

  letter = as_sent(item, afternoon + hours(51));
  CHECK(letter.body.starts_with("You may already have this letter"));
  CHECK(letter.body.find("\nDelayed 2 d 3 h. At 3 pm") != std::string::npos);

  // a clear answer to that try takes the mark away again
  item = receive(item, receipt_of(1, Ending::wait, afternoon));
  CHECK(as_sent(item, afternoon + minutes(1)).body == item.letter.body);
}

TEST_CASE("what is put in front keeps to 78 columns") {
  Item item = doubt(take(item_of(1), afternoon), afternoon);
  for (int n = 0; n < 12; ++n) item.letter.still += " and later at the low bench it was 97 °F";
  const letters::Letter letter = as_sent(item, afternoon + hours(51));
  CHECK(widest(letter.body) <= 78);
  CHECK(widest(letter.body) > 60);
}
