// Writes one letter of every kind as the carrier would send it, for several names of fields, of one
// of them also metric and brief, for read_letters.py:
//   write_letters FOLDER
// Each NAME.eml gets a NAME.meant: subject, recipient, id, seconds since 1970, then the body.
#include <fstream>
#include <iostream>
#include <string>
#include <vector>

#include "core/letters/scene.hpp"
#include "edge/mail/mail.hpp"

using namespace antherd;
using alerts::Kind;
using alerts::Saying;
using risk::Level;

namespace {

const char* const names[] = {
    "north bench",
    "A",
    "Feld über der Straße",
    "Ñandú – «campo» № 7, 北の畑 🌾",
    "the long field beyond the second gate, east of the old well and below the bench road",
    "=?UTF-8?Q?no_word?="};

std::vector<alerts::Telling> every_kind() {
  std::vector<alerts::Telling> kinds{scene::silent(Saying::opened), scene::silent(Saying::ended),
                                     scene::silent(Saying::reminder), scene::doubtful()};
  for (const Level level : {Level::moderate, Level::severe, Level::extreme}) {
    for (const Saying saying : {Saying::opened, Saying::raised, Saying::reminder}) {
      kinds.push_back(scene::heat(saying, level));
      kinds.push_back(scene::humid(saying, level));
    }
  }
  kinds.push_back(scene::heat(Saying::eased, Level::none));
  kinds.back().peak = Level::severe;
  for (const char* key : {"window-near", "window-opens", "window-closes", "note-held-2026-07-08"}) {
    kinds.push_back(scene::notice(Kind::stage, key));
  }
  kinds.push_back(scene::notice(Kind::sprinkler_streak, "2026-07-12"));
  kinds.push_back(scene::notice(Kind::diary_gap, "2026-07-04"));
  kinds.push_back(scene::notice(Kind::season, "ripe"));
  kinds.push_back(scene::silent(Saying::ended));
  kinds.back().kind = Kind::mail_trouble;
  return kinds;
}

/// The letters of one desk to one recipient: alerts, the daily line, both reviews.
std::vector<letters::Letter> letters_of(const letters::Desk& desk, const std::string& name,
                                        const letters::Recipient& recipient) {
  const std::vector<letters::Recipient> one{recipient};
  std::vector<letters::Letter> all;
  const auto take = [&](const std::vector<letters::Letter>& some) {
    all.insert(all.end(), some.begin(), some.end());
  };
  for (alerts::Telling telling : every_kind()) {
    if (desk.stations.count(telling.subject) == 0) telling.subject = name;
    take(letters::compose(std::vector{telling}, one, desk));
  }
  take(letters::compose_daily(one, desk));
  for (letters::Review review : {scene::review(), scene::quiet_review()}) {
    review.fields[0].status.field = name;
    take(letters::compose_weekly(review, one, desk));
  }
  return all;
}

/// Letters that no room would write, to try the form alone.
std::vector<letters::Letter> odd_ones() {
  letters::Letter letter;
  letter.recipient = "owner@larkspur.example";
  letter.decided = scene::at(14, 16, 5);
  std::vector<letters::Letter> all;
  std::string run;
  for (int i = 0; i < 70; ++i) run += i % 7 == 6 ? " " : (i % 3 == 0 ? "€" : "x");
  for (const std::string& subject : {std::string(70, 'w'), run, std::string("a  b   c "),
                                     std::string("ends in a sign ±"), std::string("? = _ ?=")}) {
    for (const std::string& body :
         {std::string(".\n..\n.a\n\n\nFrom the start\n--\n"),
          std::string("trailing \t\n ±\t \nend \n"), std::string(400, 'a') + " ½\n",
          std::string("=3D =\n=C2=B0\n"), run + run + run + "\n"}) {
      letter.id = "odd-" + std::to_string(all.size());
      letter.subject = subject;
      letter.body = body;
      all.push_back(letter);
    }
  }
  return all;
}

int write(const std::string& folder, const std::vector<letters::Letter>& all) {
  static int number = 0;
  for (const letters::Letter& letter : all) {
    const auto text = mail::as_rfc5322(letter, "alerts@larkspur.example");
    if (!text) {
      std::cerr << letter.subject << ": " << text.failure().sentence() << "\n";
      return 1;
    }
    const std::string path = folder + "/" + std::to_string(++number);
    std::ofstream(path + ".eml", std::ios::binary) << *text;
    std::ofstream(path + ".meant", std::ios::binary)
        << letter.subject << "\n"
        << letter.recipient << "\n"
        << letter.id << "\n"
        << letter.decided.time_since_epoch().count() << "\n"
        << letter.body;
  }
  return 0;
}

}  // namespace

int main(int count, char** arguments) {
  if (count != 2) return 2;
  const std::string folder = arguments[1];
  int status = write(folder, odd_ones());
  for (const std::string name : names) {
    letters::Desk desk = scene::desk();
    desk.farm = name + " farm";
    season::FieldStatus field = scene::north();
    field.field = name;
    desk.fields = {{name, field}};
    letters::Recipient recipient = scene::owner();
    status |= write(folder, letters_of(desk, name, recipient));
    if (name != names[2]) continue;
    desk.units = letters::Units::metric;
    status |= write(folder, letters_of(desk, name, recipient));
    recipient.brief = true;
    status |= write(folder, letters_of(desk, name, recipient));
  }
  return status;
}
