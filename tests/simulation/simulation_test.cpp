// Whole seasons under the whole menu of faults. A season that breaks a rule prints its seed:
//   ANTHERD_SEED=17 test_simulation       runs that seed alone, of each kind of season
//   ANTHERD_SEASON="fog coast"            only this kind
//   ANTHERD_SEEDS=20                      that many seeds of each kind; without it two. CI has 20
//   ANTHERD_HALF=2                        of them the first or the second half
//   ANTHERD_ALOUD=1                       tells what was said, as it is said, and the faults
//   ANTHERD_FAULTS=kill,mail_down         only these faults, to find which one it takes
#include <time.h>

#include <chrono>
#include <cstdio>
#include <cstdlib>

#include "season.hpp"
#include "support/catch.hpp"

using namespace simulation;

namespace {

constexpr int usual_seeds = 2;

int number_in(const char* name, int otherwise) {
  const char* given = std::getenv(name);
  return given == nullptr ? otherwise : std::atoi(given);
}

double cpu_seconds() {
  timespec time{};
  clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &time);
  return static_cast<double>(time.tv_sec) + 1e-9 * static_cast<double>(time.tv_nsec);
}

bool wanted(const Kind& kind) {
  const char* only = std::getenv("ANTHERD_SEASON");
  return only == nullptr || kind.name == only;
}

}  // namespace

TEST_CASE("no season breaks a rule, whatever the weather and the faults", "[simulation]") {
  const auto begun = std::chrono::steady_clock::now();
  const double cpu = cpu_seconds();
  const int one_seed = number_in("ANTHERD_SEED", 0);
  const int all = std::max(2, number_in("ANTHERD_SEEDS", usual_seeds));
  const int half = number_in("ANTHERD_HALF", 0);
  const int first = one_seed > 0 ? one_seed : half == 2 ? 1 + all / 2 : 1;
  const int last = one_seed > 0 ? one_seed : half == 1 ? all / 2 : all;
  Tally sum;
  int seasons = 0;
  for (const Kind& kind : kinds()) {
    if (!wanted(kind)) continue;
    for (int seed = first; seed <= last; ++seed) {
      INFO("season \"" << kind.name << "\", ANTHERD_SEED=" << seed);
      Season season(kind, static_cast<std::uint64_t>(seed));
      season.run();
      for (const std::string& complaint : season.complaints().all()) FAIL_CHECK(complaint);
      sum.add(season.tally());
      ++seasons;
    }
  }
  const std::chrono::duration<double> wall = std::chrono::steady_clock::now() - begun;
  std::printf(
      "simulation: %d seasons of %d kinds, %d faults ordered, %d turns; %d things said, %d "
      "letters: %d sent, %d parked, %d in digests, %d repeated and marked; %d kills, %d power "
      "cuts, %d starts; "
      "at most %ld KiB in memory; %.0f s, %.0f s of processor\n",
      seasons, seasons / (last - first + 1), sum.faults, sum.turns, sum.alerts, sum.letters,
      sum.sent, sum.parked, sum.merged, sum.repeats, sum.kills, sum.cuts, sum.opens,
      sum.heaviest / 1024, wall.count(), cpu_seconds() - cpu);
  CHECK(seasons > 0);
}
