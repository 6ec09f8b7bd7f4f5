// A disk with room for little: readings wait in memory, decisions and letters go on.
#include <algorithm>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant hot_morning = farm_time("2026-07-12 10:00");
const Instant hot_evening = farm_time("2026-07-12 18:00");

}  // namespace

TEST_CASE("once the reserve is given up readings wait in memory and alerts find its room") {
  const Folder folder;
  const auto settings = settings_in(folder);
  store::Store::Options options;
  options.folder = settings->store_folder;
  options.service = true;
  options.now = sown;
  options.page_limit = 3000;  // 12 MB
  auto store = store::Store::open(options);
  REQUIRE(store);
  service::Keeper keeper(settings, *store);
  REQUIRE(keeper.load(sown));
  keeper.take("bench", readings(Weather{}, sown, hot_morning), {{"place", "1"}}, hot_morning);
  keeper.step(hot_morning + minutes{6}, true);
  const auto samples = [&] {
    const auto all = store->samples("bench", Instant{}, Instant::max());
    REQUIRE(all);
    return all->size();
  };
  const auto before = samples();
  REQUIRE(before > 1000);

  REQUIRE(store->release_ballast());
  std::size_t letters = 0;
  for (Instant now = hot_morning; now < hot_evening; now += minutes{15}) {
    keeper.take("bench", readings(Weather{}, now, now + minutes{15}), {{"place", "2"}}, now);
    const auto kept = keeper.step(now + minutes{15}, true);
    CHECK(!kept.decisions_wait);
    letters += kept.letters;
    const auto waits = std::count_if(kept.troubles.begin(), kept.troubles.end(), [](const auto& t) {
      return t.sentence().find("readings wait in memory") != std::string::npos;
    });
    CHECK(static_cast<std::size_t>(waits) == kept.troubles.size());
  }
  CHECK(store->samples_wait());
  CHECK(samples() == before);
  CHECK(*store->note("place") == "1");  // the place in the file waits with what was read
  CHECK(letters > 0);
  const auto hours_kept = store->hours("bench", hour_of(hot_morning), hour_of(hot_evening));
  REQUIRE(hours_kept);
  CHECK(hours_kept->size() >= 7);
  keeper.keep_in_memory_at_most(10);
  CHECK(!keeper.make_room("bench"));  // the files are not read on

  REQUIRE(store->keep_ballast());
  CHECK(keeper.make_room("bench"));
  CHECK(!store->samples_wait());
  CHECK(samples() == before + 32);
  CHECK(*store->note("place") == "2");
}
