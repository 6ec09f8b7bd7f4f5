// A drop folder on a share whose server is gone: its station is silent, everything else goes on.
#include <condition_variable>
#include <mutex>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant noon = farm_time("2026-07-11 12:00");

/// A server that can be switched off: looks into one folder then last until it is on again.
struct Share {
  std::mutex mutex;
  std::condition_variable changed;
  bool on = true;

  void turn(bool to) {
    const std::lock_guard lock(mutex);
    on = to;
    changed.notify_all();
  }
  service::Looker looker(const std::string& folder) {
    return [this, folder](const station::DropForm& form,
                          const std::vector<station::Bookmark>& bookmarks, Instant now) {
      std::unique_lock lock(mutex);
      changed.wait(lock, [&] { return on || !form.folder.ends_with(folder); });
      return station::look_into(form, bookmarks, now);
    };
  }
};

std::optional<Instant> last_of(const Bench& bench, const std::string& station) {
  const auto last = bench.desk->store().last_sample(station);
  REQUIRE(last);
  return *last;
}

}  // namespace

TEST_CASE("a folder that does not answer holds nothing else up, and is read on when it does") {
  Farm farm;
  farm.more =
      "\n[[station]]\nname = \"far\"\nlatitude = 46.7\nlongitude = -117.2\n"
      "elevation = \"750 m\"\ninterval = \"5 min\"\n[station.drop]\nfolder = \"share\"\n"
      "time = { column = \"time\", form = \"%Y-%m-%d %H:%M\", zone = \"utc\" }\n"
      "temperature = { column = \"temp_c\", unit = \"degC\" }\n"
      "humidity = { column = \"rh_pct\", unit = \"%\" }\n";
  Bench bench(farm);
  Share share;  // outlives no look: it is on again at the end
  bench.folder.write("share/far.csv", header + row_of(reading_at(Weather{}, noon)));
  bench.open(noon);
  bench.desk->look_with(share.looker("share"), std::chrono::seconds{2});
  bench.turn(noon);
  bench.turn(noon + minutes{6});
  REQUIRE(last_of(bench, "far") == noon);

  share.turn(false);
  const Instant evening = noon + hours{5};
  bench.live(Weather{}, noon, evening, minutes{15});
  CHECK(last_of(bench, "bench") >= evening - minutes{20});
  CHECK(last_of(bench, "far") == noon);
  const std::string log = bench.folder.read("antherd.log");
  CHECK(log.find("far: could not look into the drop folder") != std::string::npos);
  CHECK(log.find("it does not answer") == log.rfind("it does not answer"));  // said once

  bench.folder.append("share/far.csv", row_of(reading_at(Weather{}, evening)));
  share.turn(true);
  for (int tries = 0; tries < 50 && last_of(bench, "far") == noon; ++tries) {
    bench.turn(evening + minutes{15 + tries});
  }
  CHECK(last_of(bench, "far") == evening);  // not refused as ahead of the look that hung
}
