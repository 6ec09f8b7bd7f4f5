// The diary's order, and when two entries tell of one act; see diary.hpp.
#include "core/field/diary.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <tuple>

namespace antherd::field {

namespace {

struct StageWord {
  int code;
  std::string_view word;
};
constexpr std::array<StageWord, 8> stage_words{{{stage::emerged, "emerged"},
                                                {stage::buds, "buds"},
                                                {stage::first_anthers, "first-anthers"},
                                                {stage::full_flower, "full-flower"},
                                                {stage::flowers_done, "flowers-done"},
                                                {stage::milk, "milk"},
                                                {stage::dough, "dough"},
                                                {stage::ripe, "ripe"}}};

char folded(char letter) {
  if (letter == ' ' || letter == '_') return '-';
  if (letter >= 'A' && letter <= 'Z') return static_cast<char>(letter - 'A' + 'a');
  return letter;
}

std::string_view trimmed(std::string_view text) {
  while (!text.empty() && (text.front() == ' ' || text.front() == '\t')) text.remove_prefix(1);
  while (!text.empty() && (text.back() == ' ' || text.back() == '\t')) text.remove_suffix(1);
  return text;
}

// Half an inch and 12.7 mm are one depth: compared to the micrometre.
bool same_depth(const std::optional<Millimetre>& a, const std::optional<Millimetre>& b) {
  if (!a || !b) return a.has_value() == b.has_value();
  return std::round(a->value * 1000.0) == std::round(b->value * 1000.0);
}

// First anthers is a moment, whether or not the note says that it began that day.
bool began_of(const Scouting& note) { return note.began || note.stage == stage::first_anthers; }

}  // namespace

bool Irrigation::same_as(const Irrigation& other) const {
  return field == other.field && start == other.start && end == other.end &&
         method == other.method && same_depth(depth, other.depth) && set == other.set;
}

bool Scouting::same_as(const Scouting& other) const {
  return field == other.field && date == other.date && stage == other.stage &&
         began_of(*this) == began_of(other) && disease == other.disease &&
         seed_set == other.seed_set && seed_looked == other.seed_looked && note == other.note;
}

void sort(Diary& diary) {
  std::stable_sort(diary.irrigations.begin(), diary.irrigations.end(),
                   [](const Irrigation& a, const Irrigation& b) {
                     return std::tie(a.start, a.end, a.set) < std::tie(b.start, b.end, b.set);
                   });
  std::stable_sort(diary.notes.begin(), diary.notes.end(),
                   [](const Scouting& a, const Scouting& b) { return a.date < b.date; });
}

std::optional<int> stage_from_word(std::string_view word) {
  word = trimmed(word);
  for (const StageWord& known : stage_words) {
    if (std::equal(word.begin(), word.end(), known.word.begin(), known.word.end(),
                   [](char said, char spelt) { return folded(said) == spelt; })) {
      return known.code;
    }
  }
  int code = 0;
  const auto [end, error] = std::from_chars(word.data(), word.data() + word.size(), code);
  if (error != std::errc{} || end != word.data() + word.size()) return std::nullopt;
  if (code < stage::emerged || code > 99) return std::nullopt;
  return code;
}

std::string word_for_stage(int code) {
  for (const StageWord& known : stage_words) {
    if (known.code == code) return std::string(known.word);
  }
  return std::to_string(code);
}

}  // namespace antherd::field
