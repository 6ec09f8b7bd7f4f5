// What needs a person now: the same lines on the screen of `antherd now` and on the page.
#pragma once

#include <string>
#include <vector>

#include "edge/store/store.hpp"
#include "run/service/lookout.hpp"

namespace antherd::service {

/// Fields that the diary of the last 120 days knows and the settings do not.
std::vector<std::string> strange_fields(const settings::Settings& settings,
                                        const store::Store& store, Instant now);

/// One sentence each: silent and doubtful stations, those without humidity, mail trouble, stations
/// that drifted apart, letters that wait or are parked, what the mail line or the store complains
/// of, diary entries of fields that the settings do not name.
std::vector<std::string> attention_of(const Lookout& lookout, const store::Store& store,
                                      Instant now);

}  // namespace antherd::service
