// See verdict_count.hpp.
#include "core/weather/verdict_count.hpp"

#include <algorithm>
#include <set>

namespace antherd::weather {

VerdictCount count_verdicts(std::span<const Hour> hours, HourStart from, HourStart to) {
  VerdictCount count;
  if (to <= from) return count;
  count.expected = static_cast<int>((to - from).count());
  const auto first = std::lower_bound(hours.begin(), hours.end(), from,
                                      [](const Hour& h, HourStart s) { return h.start < s; });
  for (auto hour = first; hour != hours.end() && hour->start < to; ++hour) {
    Verdict gravest = Verdict::good;
    std::set<std::string> reasons;
    for (const Flag& flag : hour->flags) {
      if (flag.verdict == Verdict::good) continue;
      gravest = std::max(gravest, flag.verdict);
      reasons.insert(std::string(name_of(flag.element)) + " " + name_of(flag.reason));
    }
    for (const std::string& reason : reasons) ++count.reasons[reason];
    ++(gravest == Verdict::good      ? count.good
       : gravest == Verdict::suspect ? count.suspect
                                     : count.wrong);
  }
  return count;
}

}  // namespace antherd::weather
