// What needs a person now: the same lines on the screen of `antherd now` and on the page.
#pragma once

#include <string>
#include <vector>

#include "edge/store/store.hpp"
#include "run/service/lookout.hpp"

namespace antherd::service {

/// One sentence each: silent and doubtful stations, mail trouble, stations that drifted apart,
/// letters that wait or are parked, what the mail line or the store complains of.
std::vector<std::string> attention_of(const Lookout& lookout, const store::Store& store,
                                      Instant now);

}  // namespace antherd::service
