// The review's facts: a week or a season of every field, folded once more with its days kept.
#pragma once

#include <string>

#include "core/letters/compose.hpp"
#include "edge/store/store.hpp"
#include "run/service/lookout.hpp"

namespace antherd::service {

/// How far back the outbox is asked when the mail's health is judged.
constexpr auto mail_looks_back = std::chrono::days{10};

struct Period {
  std::string title;          // "Week 2026-W28"
  CivilDay first{}, last{};   // both included
  bool whole_season = false;  // with the seed counts of all years
};

/// What was last said of each episode that is still open.
std::vector<alerts::Said> unclosed_of(const Lookout& lookout);

/// Pairs of stations that serve one field, or stand within 10 km and 150 m of height of each other,
/// and have drifted apart until `now` (weather/suspicion.hpp); only the large ones.
std::vector<letters::DriftReview> drifts_of(const Lookout& lookout, Instant now);

/// "2026-W28": the ISO 8601 week of a civil day.
std::string week_name(CivilDay day);

/// The seven whole days before the day of `now`, named after the ISO 8601 week of the first.
Period week_before(const Calendar& calendar, Instant now);
/// The ISO 8601 week of "2026-W28"; nothing for another text or a week that does not exist.
std::optional<Period> iso_week(const std::string& text);
/// From the earliest sowing to the day of `now`.
Period season_of(const settings::Settings& settings, Instant now);

/// @param store  for letters and the ledger; what it cannot say is named among the troubles
letters::Review make_review(const Lookout& lookout, const store::Store& store, const Period& period,
                            Instant now);

}  // namespace antherd::service
