// Promise 12: whatever names, stations, notes and servers say, no line's end of theirs becomes a
// header of a letter. The routes that settings and commands refuse are tested where they refuse;
// here the refusals are passed by, as by another program that writes into the store.
#include <algorithm>
#include <set>
#include <sstream>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const std::string hostile =
    "fine\r\nBcc: thief@elsewhere.example\r\n\r\nA body of its own\r\n.\r\nQUIT\r\n";

/// The names of a file's headers (RFC 5322 §2.2), folded lines left out.
std::set<std::string> headers_of(const std::string& eml) {
  std::set<std::string> names;
  std::istringstream head(eml.substr(0, eml.find("\r\n\r\n")));
  for (std::string line; std::getline(head, line);) {
    if (line.empty() || line[0] == ' ' || line[0] == '\t') continue;
    names.insert(line.substr(0, line.find(':')));
  }
  return names;
}

const std::set<std::string> known{"From",         "To",           "Subject",
                                  "Date",         "Message-ID",   "Auto-Submitted",
                                  "MIME-Version", "Content-Type", "Content-Transfer-Encoding"};

}  // namespace

TEST_CASE("hostile notes and servers' answers reach no header of any letter") {
  Bench bench;
  const Instant sown = farm_time("2026-06-25 00:00");
  const Instant from = farm_time("2026-07-12 06:00");
  bench.open(sown);
  field::Scouting note;
  note.field = "north bench";
  note.date = std::chrono::local_days(std::chrono::year(2026) / 7 / 8);
  note.stage = 60;
  note.note = hostile;
  REQUIRE(bench.desk->store().add(note));
  bench.drop("bench.csv", readings(Weather{}, sown, from));
  bench.turn(from);
  outbox::Item parked;
  parked.letter.id = "parked-1";
  parked.letter.recipient = "owner@larkspur.example";
  parked.letter.subject = hostile;
  parked.letter.kind = "heat";
  parked.letter.decided = from;
  parked.state = outbox::State::parked;
  parked.ended = from;
  parked.answer = "550 " + hostile;
  store::Decision decision;
  decision.letters = {parked};
  REQUIRE(bench.desk->store().save(decision));
  bench.live(Weather{}, from, farm_time("2026-07-13 07:00"), minutes{15});

  const auto files = bench.folder.names("outgoing");
  bool review_names_it = false;
  for (const std::string& file : files) {
    INFO(file);
    const std::string eml = bench.folder.read("outgoing/" + file);
    const auto headers = headers_of(eml);
    CHECK(std::includes(known.begin(), known.end(), headers.begin(), headers.end()));
    CHECK(headers.size() >= 7);
    CHECK(eml.find("\r\n.\r\n") == std::string::npos);
    review_names_it = review_names_it || eml.find("thief@elsewhere.example") != std::string::npos;
  }
  CHECK(files.size() >= 2);
  CHECK(review_names_it);  // the text itself got that far, as text
}

TEST_CASE("a letter with a hostile subject never leaves: it is parked and named") {
  Bench bench;
  const Instant now = farm_time("2026-07-12 06:00");
  bench.open(now);
  outbox::Item item;
  item.letter.id = "heat-1";
  item.letter.recipient = "owner@larkspur.example";
  item.letter.subject = hostile;
  item.letter.body = "A body.\n";
  item.letter.kind = "heat";
  item.letter.decided = now;
  item.next_try = now;
  store::Decision decision;
  decision.letters = {item};
  REQUIRE(bench.desk->store().save(decision));
  bench.turn(now);
  bench.turn(now + minutes{2});
  CHECK(bench.folder.names("outgoing").empty());
  CHECK(bench.letters().at(0).state == outbox::State::parked);
  CHECK(bench.letters().at(0).answer.find("control character") != std::string::npos);
}
