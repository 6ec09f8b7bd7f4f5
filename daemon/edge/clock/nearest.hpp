// The nearest of known names to a misspelt one, for the sentences that refuse it. Pure; knows
// nothing of what the names stand for.
#pragma once

#include <cstddef>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace antherd::clock {

constexpr std::size_t longest_word = 80;  // names are short; a longer text is no misspelt name

/// How many letters must be changed, added, dropped or swapped with their neighbour to make one
/// word of the other; capitals count as small letters, `_`, `-` and blanks as one.
/// Source: optimal string alignment distance, Damerau 1964 (from memory).
std::size_t distance_between(std::string_view one, std::string_view other);

/// The known names nearest to a word, nearest first, at most `most`; none that differs in more
/// than a third of the word's letters (one change is always allowed).
std::vector<std::string> nearest_to(std::string_view word, std::span<const std::string> known,
                                    std::size_t most = 1);

}  // namespace antherd::clock
