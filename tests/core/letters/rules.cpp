// See rules.hpp.
#include "rules.hpp"

#include <algorithm>
#include <array>
#include <cctype>
#include <sstream>

namespace rules {
namespace {

using namespace antherd;

// Contracts, "Never said". Whole words, in any case.
const std::array<const char*, 27> never_said{
    "safe",     "no risk",   "risk-free", "all clear",   "sterile",   "sterilised",  "sterilized",
    "infected", "lost",      "loss",      "losses",      "yield",     "yields",      "% of yield",
    "per cent", "percent",   "spray",     "sprays",      "spraying",  "treat",       "treated",
    "treating", "fungicide", "copper",    "plough down", "plow down", "irrigate now"};

std::string lower(std::string text) {
  std::transform(text.begin(), text.end(), text.begin(),
                 [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return text;
}

bool letter_or_digit(char c) { return std::isalnum(static_cast<unsigned char>(c)) != 0; }

bool holds_word(const std::string& text, const std::string& word) {
  for (std::size_t at = text.find(word); at != std::string::npos; at = text.find(word, at + 1)) {
    const bool begins = at == 0 || !letter_or_digit(text[at - 1]);
    const std::size_t end = at + word.size();
    if (begins && (end == text.size() || !letter_or_digit(text[end]))) return true;
  }
  return false;
}

std::string spaced(std::string text) {
  std::replace(text.begin(), text.end(), '\n', ' ');
  return text;
}

}  // namespace

std::string bare_date_ahead(const std::string& text, CivilDay today) {
  const std::array<const char*, 12> months{"Jan", "Feb", "Mar", "Apr", "May", "Jun",
                                           "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"};
  for (unsigned month = 1; month <= 12; ++month) {
    const std::string name = std::string(" ") + months[month - 1];
    for (std::size_t at = text.find(name); at != std::string::npos; at = text.find(name, at + 1)) {
      std::size_t from = at;
      while (from > 0 && std::isdigit(static_cast<unsigned char>(text[from - 1])) != 0) --from;
      if (from == at) continue;
      const auto number = static_cast<unsigned>(std::stoul(text.substr(from, at - from)));
      const CivilDay day{
          CivilDate{std::chrono::year{2026}, std::chrono::month{month}, std::chrono::day{number}}};
      if (day > today && text.compare(at + name.size(), 4, " ± ", 4) != 0) {
        return text.substr(from, at + name.size() + 8 - from);
      }
    }
  }
  return "";
}

namespace {

bool has_control(const std::string& text, bool newline_allowed) {
  for (std::size_t i = 0; i < text.size(); ++i) {
    const auto byte = static_cast<unsigned char>(text[i]);
    if (byte == '\n' && newline_allowed) continue;
    if (byte < 0x20 || byte == 0x7f) return true;
    if (byte == 0xc2 && i + 1 < text.size() && static_cast<unsigned char>(text[i + 1]) < 0xa0) {
      return true;  // C1
    }
    // U+202A…U+202E and U+2066…U+2069 turn the direction of what follows.
    if (text.compare(i, 2, "\xe2\x80") == 0 && i + 2 < text.size()) {
      const auto third = static_cast<unsigned char>(text[i + 2]);
      if (third >= 0xaa && third <= 0xae) return true;
    }
  }
  return false;
}

bool plain_id(const std::string& id) {
  return !id.empty() && id.size() <= 100 && std::all_of(id.begin(), id.end(), [](char c) {
    return (c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') || c == '.' || c == '-';
  });
}

}  // namespace

std::size_t code_points(const std::string& text) {
  std::size_t n = 0;
  for (const char c : text) n += (static_cast<unsigned char>(c) & 0xc0u) != 0x80u ? 1 : 0;
  return n;
}

std::string forbidden_in(const std::string& text) {
  const std::string low = lower(spaced(text));
  for (const char* word : never_said) {
    if (holds_word(low, word)) return word;
  }
  return "";
}

std::vector<std::string> broken_by_text(const std::string& text, CivilDay today) {
  std::vector<std::string> complaints;
  std::istringstream lines(text);
  for (std::string line; std::getline(lines, line);) {
    if (code_points(line) > 78) complaints.push_back("wider than 78: " + line);
    if (!line.empty() && line.back() == ' ') complaints.push_back("space at the end: " + line);
  }
  if (text.empty() || text.back() != '\n') complaints.push_back("does not end in a line's end");
  if (has_control(text, true)) complaints.push_back("control character");
  if (const std::string word = forbidden_in(text); !word.empty()) {
    complaints.push_back("never said: " + word);
  }
  if (const std::string date = bare_date_ahead(spaced(text), today); !date.empty()) {
    complaints.push_back("a date ahead without ±: " + date);
  }
  for (std::size_t at = text.find(" ."); at != std::string::npos; at = text.find(" .", at + 1)) {
    if (at > 0 && letter_or_digit(text[at - 1])) complaints.push_back("a space before a full stop");
  }
  if (text.find("..") != std::string::npos || text.find(" ,") != std::string::npos) {
    complaints.push_back("a hole in a sentence");
  }
  return complaints;
}

std::vector<std::string> broken_by(const letters::Letter& letter, bool brief,
                                   const Calendar& calendar) {
  std::vector<std::string> complaints =
      brief ? std::vector<std::string>{}
            : broken_by_text(letter.body, calendar.day_of(letter.decided));
  const auto complain = [&](bool wrong, const std::string& what) {
    if (wrong) complaints.push_back(what);
  };
  complain(code_points(letter.subject) > 70, "subject too long");
  complain(has_control(letter.subject, false), "control character in the subject");
  complain(!forbidden_in(letter.subject).empty(), "never said, in the subject");
  complain(!forbidden_in(letter.still).empty(), "never said, for the delayed");
  complain(has_control(letter.still, false) || letter.still.empty(),
           "the sentence for the delayed");
  complain(!plain_id(letter.id), "id: " + letter.id);
  complain(letter.body.size() > 32 * 1024 && letter.kind != "weekly", "larger than 32 KiB");
  if (brief) {
    const std::string one = letter.body.substr(0, letter.body.size() - 1);
    complain(code_points(one) > 160, "brief form too long");
    complain(has_control(one, false), "control character in the brief form");
    complain(!forbidden_in(one).empty(), "never said, in the brief form");
  }
  return complaints;
}

}  // namespace rules
