// The crop's numbers against the tables of expected ones: by hand, printed tables, another tool.
#include "core/crop/belief.hpp"
#include "core/crop/development.hpp"
#include "core/crop/flowers.hpp"
#include "support/runs.hpp"
#include "support/table.hpp"

using namespace antherd;
using namespace antherd::crop;

namespace {

Traits traits_in(const tables::Row& row) {
  const auto traits = traits_of(row.text("crop"));
  REQUIRE(traits);
  return *traits;
}

/// °C·d of a day whose hours are written as "12x10 12x20".
double day_sum(const std::string& hours) {
  double sum = 0;
  for (const auto& t : tables::values_of(hours)) sum += development_unit(Celsius(*t));
  return sum / 24;
}

double of_development(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  if (formula == "day_sum") return day_sum(row.text("input"));
  const double input = row.number("input");
  if (formula == "development_unit") return development_unit(Celsius(input));
  const Traits traits = traits_in(row);
  if (formula == "photoperiod_factor") return photoperiod_factor(input, traits.photoperiod);
  if (formula == "requirement") return requirement(static_cast<int>(input), traits.needs).value;
  if (formula == "prior_sigma") return traits.prior_sigma;
  REQUIRE(formula == "stage_at");
  return stage_at(ThermalTime(input), traits.needs, row.number("factor"));
}

double of_belief(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  if (formula == "normal_probability") return normal_probability(row.number("input"));
  if (formula == "update_mean" || formula == "update_sd") {
    const Belief moved = update(Belief{row.number("mean"), row.number("sd")},
                                Observation{row.number("input"), row.number("units"), {}});
    return formula == "update_mean" ? moved.mean : moved.sd;
  }
  const Traits traits = traits_in(row);
  if (formula == "observe_factor" || formula == "observe_sd") {
    const Observation seen =
        observe(static_cast<int>(row.number("stage")), row.text("began") == "1",
                ThermalTime(row.number("input")), row.number("units"), traits.needs);
    return formula == "observe_factor" ? seen.factor : seen.sd;
  }
  const double sd = row.has("sd") ? row.number("sd") : traits.prior_sigma;
  const FlowerOdds flower =
      odds(traits.needs, Belief{row.number("mean"), sd}, row.number("filled"));
  if (formula == "opens") return flower.opens().value;
  if (formula == "closes") return flower.closes().value;
  const ThermalTime time(row.number("input"));
  if (formula == "begun") return flower.begun(time);
  if (formula == "over") return flower.over(time);
  REQUIRE(formula == "in_flower");
  return flower.in_flower(time);
}

}  // namespace

TEST_CASE("development agrees with its table") {
  for (const auto& row : tables::read("crop-development.csv")) {
    tables::check(row, of_development(row));
  }
}

TEST_CASE("belief about flowering agrees with its table") {
  for (const auto& row : tables::read("crop-belief.csv")) tables::check(row, of_belief(row));
}

TEST_CASE("flowers open as an independent integration says") {
  for (const auto& row : tables::read("crop-flowers.csv")) {
    tables::check(row, share_opened(row.number("percent")));
  }
}
