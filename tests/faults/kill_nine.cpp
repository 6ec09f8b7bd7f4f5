// kill -9 again and again, over weeks of an invented season, against a live mail server: no letter
// is lost, and only one that was marked as in doubt comes twice (promise 1).
//
//   kill_nine ANTHERD [LIVES] [SEED]
//
// Each life of the service begins an hour of farm time after the one before and is killed at a
// random moment of its work; the mail server thinks for some milliseconds before each answer, so
// that kills fall into every step of a conversation. A second farm lives the same hours without
// being killed: whatever it was told, the killed one must have been told.
#include <fcntl.h>
#include <signal.h>
#include <sqlite3.h>
#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <chrono>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iostream>
#include <map>
#include <random>
#include <set>
#include <thread>

#include "support/smtp_server.hpp"

namespace {

using namespace std::chrono;
using antherd::testing::SmtpServer;

constexpr int recipients = 20;
constexpr auto first_hour = sys_days{2026y / July / 1} + hours{19};  // noon in the farm's zone
constexpr int hours_of_zone = -7;

struct Farm {
  std::filesystem::path folder;
  SmtpServer* server = nullptr;
};

[[noreturn]] void fail(const std::string& sentence) {
  std::cerr << "kill_nine: " << sentence << "\n";
  std::exit(1);
}

std::string farm_time(sys_seconds at) {
  const auto local = at + hours{hours_of_zone};
  const auto day = floor<days>(local);
  const year_month_day date{day};
  const hh_mm_ss clock{local - day};
  char text[32];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u %02d:%02d", int(date.year()),
                unsigned(date.month()), unsigned(date.day()), int(clock.hours().count()),
                int(clock.minutes().count()));
  return text;
}

void write_settings(const Farm& farm) {
  std::ofstream out(farm.folder / "antherd.toml");
  out << R"([farm]
name = "Larkspur Bench"
time_zone = "America/Los_Angeles"
units = "us"
exercise = true
[store]
folder = "store"
[log]
file = "antherd.log"
[mail]
server = ")"
      << farm.server->url() << R"("
plain = true
from = "alerts@larkspur.example"
daily = "19:00"
weekly = "Mon 06:00"
at_most_per_day = 200
[diary]
folder = "diary"
[[station]]
name = "bench"
latitude = 46.73
longitude = -117.18
elevation = "780 m"
interval = "30 min"
silent_after = "2 h"
[station.drop]
folder = "drop"
time = { column = "time", form = "unix" }
temperature = { column = "t", unit = "degC" }
humidity = { column = "h", unit = "%" }
)";
  for (const char* name : {"north bench", "creek"}) {
    out << "[[field]]\nname = \"" << name << "\"\nstation = \"bench\"\nsown = 2026-04-20\n"
        << "crop_type = \"coastal\"\nirrigation = \"overhead\"\nsoil = \"silt loam\"\n";
  }
  for (int i = 0; i < recipients; ++i) {
    out << "[[recipient]]\naddress = \"person" << i << "@larkspur.example\"\n";
  }
}

/// Warm to hot days with moist nights, so that both hazards come and go.
void write_readings(const Farm& farm, sys_seconds from, sys_seconds to) {
  const bool fresh = !std::filesystem::exists(farm.folder / "drop/bench.csv");
  std::ofstream out(farm.folder / "drop/bench.csv", std::ios::app);
  if (fresh) out << "time,t,h\n";
  for (auto at = from; at < to; at += minutes{30}) {
    const double day = duration<double, days::period>(at - sys_days{2026y / July / 1}).count();
    const double phase = std::cos(2 * M_PI * (day - 0.95));  // warmest about 4 in the afternoon
    const double warm = 27.0 + 7.0 * std::sin(2 * M_PI * day / 6.0);
    const double t = warm - 8.0 + 9.5 * phase;
    const double h = std::clamp(68.0 - 30.0 * phase, 20.0, 100.0);
    char row[64];
    std::snprintf(row, sizeof row, "%lld,%.1f,%.1f\n",
                  static_cast<long long>(at.time_since_epoch().count()), t, h);
    out << row;
  }
}

void write_diary(const Farm& farm) {
  std::ofstream out(farm.folder / "diary/irrigation.csv");
  out << "field,start,end,method,depth\n";
  for (int day = 1; day <= 31; ++day) {
    if (day % 7 > 4) continue;
    char row[96];
    std::snprintf(row, sizeof row,
                  "north bench,2026-07-%02d 20:00,2026-07-%02d 23:00,overhead,8 mm\n", day, day);
    out << row;
  }
}

pid_t start(const char* program, const Farm& farm, sys_seconds clock) {
  const std::string from = farm_time(clock), settings = (farm.folder / "antherd.toml").string();
  const pid_t child = ::fork();
  if (child < 0) fail("cannot fork");
  if (child > 0) return child;
  const int nowhere = ::open("/dev/null", O_RDWR | O_CLOEXEC);
  for (const int stream : {0, 1, 2}) ::dup2(nowhere, stream);
  ::execl(program, program, "run", "--settings", settings.c_str(), "--clock-from", from.c_str(),
          "--pace", "2", static_cast<char*>(nullptr));
  ::_exit(127);
}

class Rows {
 public:
  explicit Rows(const Farm& farm) {
    const std::string path = (farm.folder / "store/antherd.db").string();
    if (sqlite3_open_v2(path.c_str(), &database_, SQLITE_OPEN_READONLY, nullptr) != SQLITE_OK) {
      fail("cannot open " + path);
    }
    sqlite3_busy_timeout(database_, 5000);
  }
  Rows(const Rows&) = delete;
  Rows& operator=(const Rows&) = delete;
  ~Rows() { sqlite3_close(database_); }

  std::vector<std::vector<std::string>> of(const char* query) {
    sqlite3_stmt* statement = nullptr;
    if (sqlite3_prepare_v2(database_, query, -1, &statement, nullptr) != SQLITE_OK) {
      fail(std::string(query) + ": " + sqlite3_errmsg(database_));
    }
    std::vector<std::vector<std::string>> rows;
    int code = SQLITE_ROW;
    while ((code = sqlite3_step(statement)) == SQLITE_ROW) {
      rows.emplace_back();
      for (int i = 0; i < sqlite3_column_count(statement); ++i) {
        const auto* text = reinterpret_cast<const char*>(sqlite3_column_text(statement, i));
        rows.back().emplace_back(text ? text : "");
      }
    }
    if (code != SQLITE_DONE) fail(std::string(query) + ": " + sqlite3_errmsg(database_));
    sqlite3_finalize(statement);
    return rows;
  }

 private:
  sqlite3* database_ = nullptr;
};

std::size_t open_letters(const Farm& farm) {
  return Rows(farm).of("SELECT id FROM letter WHERE state NOT IN ('sent', 'parked')").size();
}

void stop_kindly(pid_t child) {
  ::kill(child, SIGTERM);
  int status = 0;
  ::waitpid(child, &status, 0);
  if (!WIFEXITED(status) || WEXITSTATUS(status) != 0) fail("the service did not end well");
}

/// Whether the hour before `clock` is kept and no letter is in the server's hands.
bool settled(const Farm& farm, sys_seconds clock) {
  if (!std::filesystem::exists(farm.folder / "store/antherd.db")) return false;
  Rows rows(farm);
  if (rows.of("SELECT 1 FROM sqlite_master WHERE name = 'line'").empty()) return false;
  const auto newest = rows.of("SELECT COALESCE(MAX(start), 0) FROM hour").at(0).at(0);
  const auto wanted = floor<hours>(clock) - hours{2};  // the newest that is closed
  if (std::atoll(newest.c_str()) < sys_seconds(wanted).time_since_epoch().count()) return false;
  return rows.of("SELECT id FROM letter WHERE state = 'sending'").empty();
}

/// One whole life: until its hour is kept and no letter has been on its way for a while.
void live_on(const char* program, const Farm& farm, sys_seconds clock) {
  const pid_t child = start(program, farm, clock);
  const auto give_up = steady_clock::now() + seconds{60};
  for (int calm = 0; calm < 6;) {
    if (steady_clock::now() > give_up) fail("a life did not settle in a minute");
    std::this_thread::sleep_for(milliseconds{40});
    if (::waitpid(child, nullptr, WNOHANG) != 0) fail("the service ended by itself");
    calm = settled(farm, clock) ? calm + 1 : 0;
  }
  stop_kindly(child);
}

Farm found(const std::filesystem::path& folder, SmtpServer& server) {
  for (const char* name : {"drop", "diary", "store"}) {
    std::filesystem::create_directories(folder / name);
  }
  const Farm farm{folder, &server};
  write_settings(farm);
  write_diary(farm);
  write_readings(farm, first_hour - days{75}, first_hour);
  return farm;
}

std::string header(const std::string& letter, const std::string& name) {
  const std::size_t at = letter.find("\r\n" + name + ": ");
  if (at == std::string::npos) return {};
  const std::size_t from = at + name.size() + 4;
  return letter.substr(from, letter.find("\r\n", from) - from);
}

/// What must hold of every letter. @return how many came twice
int check_letters(const Farm& farm) {
  std::map<std::string, std::vector<std::string>> arrived;
  for (const std::string& letter : farm.server->letters()) {
    arrived[header(letter, "Message-ID")].push_back(letter);
  }
  std::set<std::string> known;
  int parked = 0, expired = 0;
  for (const auto& row : Rows(farm).of("SELECT identity, state, answer FROM letter")) {
    const std::string id = "<" + row[0] + "@larkspur.example>";
    known.insert(id);
    if (row[1] == "sent" && !arrived.contains(id)) fail("counted as sent, never arrived: " + id);
    if (row[1] != "parked") continue;
    // In lives of an hour that end in a kill, what is least grave may wait behind all others for
    // three days, a daily line for its half day; then it is named in the review. A warning must
    // not.
    const bool warns = row[0].starts_with("heat-") || row[0].starts_with("humid-") ||
                       row[0].starts_with("no-data-");
    if (row[2].find("expired after ") != std::string::npos && !warns) {
      ++expired;
      continue;
    }
    ++parked;
    if (row[2].find("twice") == std::string::npos) fail("parked: " + id + ": " + row[2]);
    if (!arrived.contains(id)) fail("parked after two doubts and never arrived: " + id);
  }
  int repeats = 0;
  for (const auto& [id, copies] : arrived) {
    if (!known.contains(id)) fail("arrived without standing in the store: " + id);
    if (copies.size() > 2) fail("came " + std::to_string(copies.size()) + " times: " + id);
    if (copies.size() == 1) continue;
    ++repeats;
    if (copies[1].find("You may already have this letter") == std::string::npos) {
      fail("came again and does not say so: " + id);
    }
  }
  std::printf(
      "%zu letters in the store, %zu arrived, %d of them twice and marked, %d parked after two "
      "doubts, %d that were no warnings expired\n",
      known.size(), arrived.size(), repeats, parked, expired);
  return repeats;
}

std::set<std::string> warnings(const Farm& farm) {
  std::set<std::string> said;
  for (const auto& row :
       Rows(farm).of("SELECT kind, subject, saying, level, about FROM said WHERE saying IN "
                     "('opened', 'raised', 'eased', 'notice')")) {
    said.insert(row[0] + " " + row[1] + " " + row[2] + " " + row[3] + " " + row[4]);
  }
  return said;
}

}  // namespace

int main(int count, char** words) {
  if (count < 2) fail("give the program to kill");
  const int lives = count > 2 ? std::atoi(words[2]) : 60;
  const unsigned seed = count > 3 ? static_cast<unsigned>(std::atoi(words[3])) : 1;
  std::printf("%d lives, seed %u\n", lives, seed);
  char name[] = "/tmp/antherd-kill-XXXXXX";
  if (!::mkdtemp(name)) fail("no temporary folder");
  const std::filesystem::path top(name);
  antherd::testing::SmtpScript script;
  SmtpServer calm_server(script);
  script.thinks = milliseconds{4};
  SmtpServer server(script);
  const Farm calm = found(top / "calm", calm_server), killed = found(top / "killed", server);

  std::mt19937 chance(seed);
  auto clock = first_hour;
  live_on(words[1], calm, clock);
  live_on(words[1], killed, clock);
  int before_ready = 0;
  for (int life = 0; life < lives; ++life) {
    write_readings(calm, clock, clock + hours{1});
    write_readings(killed, clock, clock + hours{1});
    clock += hours{1};
    const auto begun = steady_clock::now();
    live_on(words[1], calm, clock + minutes{11});
    const auto whole = duration_cast<milliseconds>(steady_clock::now() - begun).count();
    const pid_t child = start(words[1], killed, clock + minutes{11});
    std::uniform_int_distribution<int> moment{5, static_cast<int>(whole)};
    std::this_thread::sleep_for(milliseconds{moment(chance)});
    ::kill(child, SIGKILL);
    int status = 0;
    ::waitpid(child, &status, 0);
    if (!WIFSIGNALED(status)) fail("a life ended before it was killed");
    if (open_letters(killed) == 0) ++before_ready;
  }
  for (int life = 0; life < 12 && (life < 3 || open_letters(killed) > 0); ++life) {
    write_readings(calm, clock, clock + hours{1});
    write_readings(killed, clock, clock + hours{1});
    clock += hours{1};
    live_on(words[1], calm, clock + minutes{11});
    live_on(words[1], killed, clock + minutes{11});
  }
  if (open_letters(killed) > 0) fail("letters are still on their way after twelve calm hours");
  std::printf("%d of the kills left letters on their way\n", lives - before_ready);
  if (lives >= 60 && lives == before_ready) fail("no kill met a letter: the test proves nothing");
  check_letters(killed);
  if (check_letters(calm) > 0) fail("without kills a letter came twice");
  const auto wanted = warnings(calm), told = warnings(killed);
  for (const std::string& warning : wanted) {
    if (!told.contains(warning)) fail("never told after kills: " + warning);
  }
  std::printf("%zu sayings, the same with kills and without\n", wanted.size());
  std::filesystem::remove_all(top);
  return 0;
}
