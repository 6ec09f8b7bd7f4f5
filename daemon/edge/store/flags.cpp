// What quality control said of an hour, as text in its row.
#include <cmath>
#include <nlohmann/json.hpp>

#include "edge/store/rows.hpp"
#include "edge/store/words.hpp"

namespace antherd::store {
namespace {

using Json = nlohmann::json;

[[noreturn]] void refuse() {
  throw Trouble{SQLITE_CORRUPT, "the flags of an hour cannot be read", {}};
}

template <class Value, std::size_t size>
Value value_or_refuse(const Words<Value, size>& words, const Json& json) {
  if (!json.is_string()) refuse();
  const auto value = value_of(words, json.get_ref<const std::string&>());
  if (!value) refuse();
  return *value;
}

}  // namespace

std::string flags_to_text(const std::vector<weather::Flag>& flags) {
  Json all = Json::array();
  for (const weather::Flag& flag : flags) {
    ANTHERD_CHECK(std::isfinite(flag.value));
    all.push_back(
        Json::array({word_of(element_words, flag.element), word_of(verdict_words, flag.verdict),
                     word_of(reason_words, flag.reason), flag.count,
                     flag.at.time_since_epoch().count(), flag.value}));
  }
  return all.dump();
}

std::vector<weather::Flag> flags_from_text(const std::string& text) {
  const Json all = Json::parse(text, nullptr, false);
  if (!all.is_array()) refuse();
  std::vector<weather::Flag> flags;
  for (const Json& one : all) {
    if (!one.is_array() || one.size() != 6 || !one[3].is_number_integer() ||
        !one[4].is_number_integer() || !one[5].is_number()) {
      refuse();
    }
    weather::Flag flag;
    flag.element = value_or_refuse(element_words, one[0]);
    flag.verdict = value_or_refuse(verdict_words, one[1]);
    flag.reason = value_or_refuse(reason_words, one[2]);
    flag.count = one[3].get<int>();
    flag.at = Instant(Seconds(one[4].get<std::int64_t>()));
    flag.value = one[5].get<double>();
    flags.push_back(flag);
  }
  return flags;
}

}  // namespace antherd::store
