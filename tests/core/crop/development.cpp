// Thermal time, stages, belief and flowers against hand arithmetic and published forms.
#include "core/crop/development.hpp"

#include <cmath>

#include "core/crop/belief.hpp"
#include "core/crop/flowers.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::crop;

TEST_CASE("photoperiod slows the sensitive type only beyond its critical day") {
  // By hand: 1 − 0.008 · (15.35 − 14.35) = 0.992 (Präger et al. 2019 slope).
  const Traits early = *traits_of("early");
  CHECK(photoperiod_factor(14.0, early.photoperiod) == 1.0);
  CHECK(photoperiod_factor(15.35, early.photoperiod) == Approx(0.992).margin(1e-12));
  CHECK(photoperiod_factor(24.0, Photoperiod{12.0, 0.1}) == 0.5);  // never below a half
}

TEST_CASE("requirements and stages are linear between the listed ones and invert each other") {
  const Traits coastal = *traits_of("coastal");
  CHECK(requirement(60, coastal.needs).value == 700);
  CHECK(requirement(75, coastal.needs).value == Approx(970 + 330 * 6 / 20.0));
  CHECK(requirement(85, coastal.needs).value == Approx(970 + 330 * 16 / 20.0));
  for (int stage : {5, 9, 20, 51, 55, 60, 65, 69, 75, 88}) {
    for (double factor : {0.8, 1.0, 1.3}) {
      const ThermalTime time = requirement(stage, coastal.needs) * factor;
      CHECK(stage_at(time, coastal.needs, factor) == Approx(stage).margin(1e-9));
    }
  }
  CHECK(stage_at(ThermalTime(5000), coastal.needs, 1.0) == 89.0);
  CHECK(traits_of("unheard-of") == std::nullopt);
}

TEST_CASE("the flowering window opens at 5 % begun and closes at 95 % over") {
  const Traits coastal = *traits_of("coastal");
  const FlowerOdds flower = odds(coastal.needs, Belief{1.0, 0.15}, 0.0);
  // By hand: s0 = 700 · 0.15 = 105; L = 270; s1 = √(105² + 67.5²) = 124.825.
  CHECK(flower.sd_begin == Approx(105));
  CHECK(flower.lasts == Approx(270));
  CHECK(flower.sd_end == Approx(124.8249).margin(1e-4));
  CHECK(flower.opens().value == Approx(700 - 1.6448536 * 105).margin(1e-3));
  CHECK(flower.closes().value == Approx(970 + 1.6448536 * 124.8249).margin(1e-3));
  CHECK_FALSE(flower.window(ThermalTime(527.2)));
  CHECK(flower.window(ThermalTime(527.4)));
  CHECK(flower.begun(flower.opens()) == Approx(0.05).margin(1e-9));
  CHECK(flower.over(flower.closes()) == Approx(0.95).margin(1e-9));
  CHECK(flower.in_flower(ThermalTime(0)) >= 0);
  // A filled share of 10 % widens σ by 0.03.
  CHECK(odds(coastal.needs, Belief{1.0, 0.15}, 0.1).sd_begin == Approx(700 * 0.18));
}

TEST_CASE("a scouting note moves the belief by precision") {
  // Normal–normal conjugacy: N(1, 0.2²) with 1.2 ± 0.2 gives 1.1 ± 0.1414.
  const Belief moved = update(Belief{1.0, 0.2}, Observation{1.2, 0.2, ThermalTime(700)});
  CHECK(moved.mean == Approx(1.1));
  CHECK(moved.sd == Approx(0.2 / std::sqrt(2.0)));
  const Traits coastal = *traits_of("coastal");
  SECTION("first anthers are exact") {
    // By hand: TT 630 at noon, r = 700: k = 0.9; σ = 3 · 14 / 700 = 0.06.
    const Observation seen = observe(60, true, ThermalTime(630), 14.0, coastal.needs);
    CHECK(seen.factor == Approx(0.9));
    CHECK(seen.sd == Approx(0.06));
  }
  SECTION("full flower without a beginning is the middle of its interval") {
    // By hand: r = (810 + 970)/2 = 890, quarter 40; beyond = 190.
    const Observation seen = observe(65, false, ThermalTime(890), 15.0, coastal.needs);
    CHECK(seen.factor == Approx(1.0));
    const double variance =
        std::pow(45.0 / 890, 2) + std::pow(40.0 / 890, 2) + std::pow(0.25 * 190 / 890, 2);
    CHECK(seen.sd == Approx(std::sqrt(variance)));
    CHECK(observe(65, true, ThermalTime(890), 15.0, coastal.needs).reached.value == 810);
  }
  SECTION("no note is surer than 2 %") {
    CHECK(observe(60, true, ThermalTime(700), 0.0, coastal.needs).sd == 0.02);
  }
  SECTION("three combined σ is the limit of agreement") {
    CHECK(agrees(Belief{1.0, 0.03}, Observation{1.14, 0.04, ThermalTime(700)}));
    CHECK_FALSE(agrees(Belief{1.0, 0.03}, Observation{1.16, 0.04, ThermalTime(700)}));
  }
}

TEST_CASE("flowers open by the published distribution") {
  // Flowering distribution of the FAO AquaCrop model; half opened at 42 % is computed (science
  // §11).
  CHECK(share_opened(-10) == 0.0);
  CHECK(share_opened(0) == 0.0);
  CHECK(share_opened(100) == 1.0);
  CHECK(share_opened(150) == 1.0);
  CHECK(share_opened(42) == Approx(0.5).margin(0.005));
  CHECK_FALSE(share_opened(50) == Approx(0.5).margin(0.005));
  // Simpson's rule over the density as an independent integral.
  const auto density = [](double t) {
    return std::max(0.0, 0.00558 * std::pow(t, 0.63) - 0.000969 * t - 0.00383);
  };
  const auto simpson = [&](double to) {
    const int n = 20000;
    double sum = density(0) + density(to);
    for (int i = 1; i < n; ++i) sum += density(to * i / n) * (i % 2 ? 4 : 2);
    return sum * to / n / 3;
  };
  const double whole = simpson(100);
  CHECK(whole == Approx(1.0).margin(0.03));  // the published curve is near one by itself
  for (double x : {5.0, 20.0, 42.0, 60.0, 90.0}) {
    CHECK(share_opened(x) == Approx(simpson(x) / whole).margin(1e-5));
  }
}
