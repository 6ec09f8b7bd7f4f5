// How a field's flowers are spread over its flowering (science §6, "Flowers exposed").
#pragma once

namespace antherd::crop {

/// Share of a season's flowers that have opened by x per cent of flowering's duration, 0…1;
/// x below 0 is 0, above 100 is 1. Half have opened at 42 %.
/// Source: flowering distribution of the FAO AquaCrop model,
/// φ(t) = 0.00558 t^0.63 − 0.000969 t − 0.00383 where positive, normalised; thermal instead of
/// calendar per cent is our judgement (science §6).
double share_opened(double percent_of_duration);

}  // namespace antherd::crop
