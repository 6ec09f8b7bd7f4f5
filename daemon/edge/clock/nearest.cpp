// See nearest.hpp.
#include "edge/clock/nearest.hpp"

#include <algorithm>
#include <utility>

namespace antherd::clock {
namespace {

char plain(char letter) {
  if (letter >= 'A' && letter <= 'Z') return static_cast<char>(letter - 'A' + 'a');
  return letter == '-' || letter == ' ' ? '_' : letter;
}

}  // namespace

std::size_t distance_between(std::string_view one, std::string_view other) {
  const std::size_t width = other.size() + 1;
  std::vector<std::size_t> before(width), last(width), row(width);
  for (std::size_t j = 0; j < width; ++j) last[j] = j;
  for (std::size_t i = 1; i <= one.size(); ++i) {
    row[0] = i;
    for (std::size_t j = 1; j < width; ++j) {
      const bool same = plain(one[i - 1]) == plain(other[j - 1]);
      row[j] = std::min({last[j] + 1, row[j - 1] + 1, last[j - 1] + (same ? 0 : 1)});
      if (i > 1 && j > 1 && plain(one[i - 1]) == plain(other[j - 2]) &&
          plain(one[i - 2]) == plain(other[j - 1])) {
        row[j] = std::min(row[j], before[j - 2] + 1);
      }
    }
    before.swap(last);
    last.swap(row);
  }
  return last[width - 1];
}

std::vector<std::string> nearest_to(std::string_view word, std::span<const std::string> known,
                                    std::size_t most) {
  if (word.size() > longest_word) return {};
  const std::size_t allowed = std::max<std::size_t>(1, word.size() / 3);
  std::vector<std::pair<std::size_t, std::string>> near;
  for (const std::string& name : known) {
    if (name.size() > longest_word) continue;
    if (std::max(name.size(), word.size()) - std::min(name.size(), word.size()) > allowed) continue;
    const std::size_t distance = distance_between(word, name);
    if (distance <= allowed && distance < name.size()) near.emplace_back(distance, name);
  }
  std::sort(near.begin(), near.end());
  std::vector<std::string> names;
  for (const auto& [distance, name] : near) {
    if (names.size() == most) break;
    names.push_back(name);
  }
  return names;
}

}  // namespace antherd::clock
