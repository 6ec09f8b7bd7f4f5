// The commands, one file each; this header is what main() and the commands share.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

namespace antherd::commands {

/// Exit status: 0 done; 1 failed and said why; 2 usage or settings; 3 done, needs attention.
enum Exit { done = 0, failed = 1, usage = 2, attention = 3 };

/// The command line, understood. Values are still text: each command reads its own with the
/// settings' units and zone at hand.
struct Invocation {
  std::string command;
  std::string settings;
  std::string field;
  bool lines = false, csv = false;
  // check
  std::string sample;
  bool stations = false;
  // hours, replay
  std::vector<std::string> station_files;  // "bench=FILE.csv"
  std::string from, to;                    // farm days, both included
  bool full = false;                       // replay: whole letters
  // water
  std::string start, end, method, depth;
  int set = 0;
  bool list = false, try_only = false;
  std::optional<std::int64_t> undo;
  // scout
  std::string date, stage, disease, seed_set, note;
  bool began = false;
  // review
  std::string week;
  bool season = false, mail = false;
  // letters
  std::optional<std::int64_t> retry, seen;
  // run
  std::string clock_from;
  double pace = 1.0;
  int stop_after = 0;
};

Exit run(const Invocation& call);
Exit check(const Invocation& call);
Exit check_sample(const Invocation& call);    // check --sample FILE
Exit check_stations(const Invocation& call);  // check --stations
Exit now(const Invocation& call);
Exit water(const Invocation& call);
Exit scout(const Invocation& call);
Exit review(const Invocation& call);
Exit hours(const Invocation& call);
Exit replay(const Invocation& call);
Exit letters(const Invocation& call);
Exit mailtest(const Invocation& call);

/// Reads the command line, runs the command, returns its exit status.
int main(int argc, char** argv);

}  // namespace antherd::commands
