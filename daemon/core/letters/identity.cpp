// Who gets a letter, and the name by which a letter is known for ever: the same telling to the
// same person has the same one.
#include <algorithm>
#include <array>
#include <cstdint>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

/// FNV-1a, 64 bit: a plain, published mixing of bytes; no secret hangs on it.
std::uint64_t mix(std::string_view text, std::uint64_t hash = 14695981039346656037ull) {
  for (const char c : text) {
    hash ^= static_cast<unsigned char>(c);
    hash *= 1099511628211ull;
  }
  return hash;
}

std::string hex(std::uint64_t value) {
  constexpr std::array<char, 17> digits{"0123456789abcdef"};
  std::string text(16, '0');
  for (std::size_t i = 16; i-- > 0; value >>= 4) text[i] = digits[value & 15u];
  return text;
}

std::string slug(std::string_view text) {
  std::string made;
  for (const char c : text) {
    const char low = c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
    if ((low >= 'a' && low <= 'z') || (low >= '0' && low <= '9')) {
      made += low;
    } else if (!made.empty() && made.back() != '-') {
      made += '-';
    }
  }
  while (!made.empty() && made.back() == '-') made.pop_back();
  return made.substr(0, 40);
}

std::string saying_slug(Saying saying) {
  switch (saying) {
    case Saying::opened:
      return "opened";
    case Saying::raised:
      return "raised";
    case Saying::reminder:
      return "reminder";
    case Saying::eased:
      return "eased";
    case Saying::ended:
      return "ended";
    case Saying::notice:
      return "notice";
    case Saying::learned_late:
      return "late";
  }
  return "told";
}

std::string level_slug(Level level) {
  return level == Level::none ? "none" : slug(level_word(level));
}

/// A reminder speaks of no new change: it is told by the moment it is given.
Instant moment_of(const Telling& telling, const Desk& desk) {
  return telling.saying == Saying::reminder ? desk.now : telling.about;
}

std::string time_slug(Instant at) {
  const auto day = std::chrono::floor<std::chrono::days>(at);
  const CivilDate date{day};
  const std::chrono::hh_mm_ss clock(at - day);
  const auto two = [](auto n) { return (n < 10 ? "0" : "") + std::to_string(n); };
  return std::to_string(static_cast<int>(date.year())) + two(static_cast<unsigned>(date.month())) +
         two(static_cast<unsigned>(date.day())) + "t" + two(clock.hours().count()) +
         two(clock.minutes().count());
}

}  // namespace

bool gets_field(const Recipient& recipient, const std::string& field) {
  return recipient.fields.empty() || std::find(recipient.fields.begin(), recipient.fields.end(),
                                               field) != recipient.fields.end();
}

bool gets(const Recipient& recipient, const Telling& telling, const Desk& desk) {
  if (recipient.fields.empty() || telling.kind == Kind::mail_trouble) return true;
  if (telling.kind != Kind::no_data && telling.kind != Kind::doubtful_sensor) {
    return gets_field(recipient, telling.subject);
  }
  const auto story = desk.stations.find(telling.subject);
  // A station nobody can place is everybody's trouble: silence must not pass for good news.
  if (story == desk.stations.end() || story->second.fields.empty()) return true;
  return std::any_of(story->second.fields.begin(), story->second.fields.end(),
                     [&](const std::string& field) { return gets_field(recipient, field); });
}

std::string letter_id(const std::vector<Telling>& tellings, const Recipient& recipient,
                      const Desk& desk) {
  std::uint64_t hash = mix(recipient.address, mix(desk.farm));
  for (const Telling& telling : tellings) {
    const std::string one = "\n" + telling.episode + "\n" + saying_slug(telling.saying) + "\n" +
                            level_slug(telling.level) + "\n" + telling.key + "\n" +
                            std::to_string(moment_of(telling, desk).time_since_epoch().count());
    hash = mix(one, hash);
  }
  const Telling& first = tellings.front();
  return slug(alerts::name_of(first.kind)) + "-" + saying_slug(first.saying) + "-" +
         level_slug(first.level) + "-" + time_slug(moment_of(first, desk)) + "-" + hex(hash);
}

std::string calendar_id(const std::string& stem, const Recipient& recipient, const Desk& desk) {
  return slug(stem) + "-" + hex(mix(stem, mix(recipient.address, mix(desk.farm))));
}

}  // namespace antherd::letters
