// What a store says of the time, for a computer whose clock is not set.
#pragma once

#include <optional>

#include "edge/store/store.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// The newest reading of any station by which the time may be told: a stray stamp, of another year
/// perhaps, moves no clock.
std::optional<Instant> newest_reading_believed(const settings::Settings& settings,
                                               const store::Store& store);

/// Whether a clock that is not set cannot be right: behind what is known, or years ahead of it.
bool cannot_be(Instant shown, Instant known);

/// An antherd that rests longer than this between two seasons may take a clock that is not set for
/// one that is years ahead.
constexpr auto plausible_pause = std::chrono::days{400};

}  // namespace antherd::service
