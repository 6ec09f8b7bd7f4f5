// From settings to what the core needs: a plan per field. It must not know facts nor time.
#pragma once

#include <span>
#include <string>
#include <vector>

#include "core/season/plan.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// A field's plan with its stations in the field's order.
season::Plan plan_of(const settings::Settings& settings, const settings::FieldPlan& field);

/// The names of the fields that a station gives data to.
std::vector<std::string> fields_of(const settings::Settings& settings, const std::string& station);

/// When hours are no longer taken for running: hours before the result are closed (science §3).
/// @param last_sample  newest accepted sample of the station, nothing for none yet
HourStart closed_before(const weather::Station& station, std::optional<Instant> last_sample,
                        Instant now);

/// So many of a station's newest times are looked at for one that can be believed.
constexpr std::size_t times_in_question = 11;

/// The newest of times, in order, that follows another within two intervals. A stray stamp, of
/// another year perhaps, stands alone.
std::optional<Instant> newest_in_company(std::span<const Instant> times, Seconds interval);

/// The same of the newest `times_in_question`. A station that speaks more seldom than its settings
/// say is believed by the oldest of them: so many are no stray.
std::optional<Instant> newest_believed(std::span<const Instant> times, Seconds interval);

/// "2026-07-14 13:00" by the farm's clock.
std::string farm_text(const Calendar& calendar, Instant at);

}  // namespace antherd::service
