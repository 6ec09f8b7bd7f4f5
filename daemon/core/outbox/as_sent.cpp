// A letter as it must go now: what a late or doubtful copy says of itself. See outbox.hpp.
#include "core/outbox/outbox.hpp"

namespace antherd::outbox {
namespace {

constexpr std::size_t subject_limit = 70;
constexpr std::size_t columns = 78;

bool begins_character(char byte) { return (static_cast<unsigned char>(byte) & 0xC0) != 0x80; }

std::size_t characters(std::string_view text) {
  std::size_t count = 0;
  for (char byte : text) count += begins_character(byte) ? 1 : 0;
  return count;
}

/// The first `limit` characters of UTF-8 text, the last of them "…" where something was cut.
std::string shortened(const std::string& text, std::size_t limit) {
  if (characters(text) <= limit) return text;
  std::string kept;
  std::size_t count = 0;
  for (char byte : text) {
    if (begins_character(byte) && ++count >= limit) break;
    kept += byte;
  }
  while (!kept.empty() && kept.back() == ' ') kept.pop_back();
  return kept + "…";
}

/// "2 d 3 h", "3 h 5 min", "35 min": the two largest parts, without zeros.
std::string span_in_words(Seconds span) {
  const auto minutes = std::chrono::floor<std::chrono::minutes>(span).count();
  const auto days = minutes / 1440, hours = minutes / 60 % 24, rest = minutes % 60;
  const auto part = [](auto number, const char* unit) {
    return number > 0 ? std::to_string(number) + unit : std::string();
  };
  const auto join = [](const std::string& one, const std::string& other) {
    return one.empty() || other.empty() ? one + other : one + " " + other;
  };
  if (days > 0) return join(part(days, " d"), part(hours, " h"));
  return join(part(hours, " h"), part(rest, " min"));
}

/// One paragraph, broken at spaces into lines of at most 78 columns.
std::string wrapped(const std::string& text) {
  std::string lines, line;
  const auto put = [&](const std::string& word) {
    if (word.empty()) return;
    if (!line.empty() && characters(line) + 1 + characters(word) > columns) {
      lines += line + "\n";
      line.clear();
    }
    line += (line.empty() ? "" : " ") + word;
  };
  std::string word;
  for (char byte : text) {
    if (byte == ' ' || byte == '\n') {
      put(word);
      word.clear();
    } else {
      word += byte;
    }
  }
  put(word);
  return lines + line + "\n";
}

}  // namespace

letters::Letter as_sent(const Item& item, Instant now) {
  letters::Letter letter = item.letter;
  std::string head;
  if (item.doubts > 0) {
    head += wrapped(
        "You may already have this letter: it was sent before, but the mail server's answer did "
        "not arrive.");
  }
  const Seconds late = now - letter.decided;
  if (late > late_after) {
    const std::string span = span_in_words(late);
    letter.subject = shortened("[delayed " + span + "] " + letter.subject, subject_limit);
    head += wrapped("Delayed " + span + ". " +
                    (letter.still.empty()
                         ? "Whether this still holds was not known when it left; look at the field."
                         : letter.still));
  }
  if (!head.empty()) letter.body = head + "\n" + letter.body;
  return letter;
}

}  // namespace antherd::outbox
