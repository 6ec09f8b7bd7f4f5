// See sample_columns.hpp.
#include "run/commands/sample_columns.hpp"

#include <algorithm>
#include <cctype>
#include <cmath>
#include <functional>

#include "edge/station/text.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::commands {
namespace {

/// Numbers that loggers write for nothing: -99, -99.9, -999, 999.9, 9999 … Air is none of them.
bool stands_for_nothing(double number) {
  const double size = std::abs(number);
  const bool nines = size == 99 || size == 99.9 || size == 999 || size == 999.9 || size == 999.99 ||
                     size == 9999 || size == 99999 || size == 6999 || size == 7999;
  return nines && (number < 0 || size > 900);
}

std::optional<double> number_of(const SampleText& sample, std::string cell) {
  if (sample.separator != ',') std::replace(cell.begin(), cell.end(), ',', '.');
  const auto number = settings::parse_number(cell);
  return number ? std::optional<double>(*number) : std::nullopt;
}

using Fits = std::function<bool(const std::string& name, const std::vector<std::string>& parts)>;

/// The first column that fits and holds numbers; one of the open air before all others.
std::optional<std::size_t> find_column(const SampleText& sample, const Fits& fits) {
  std::optional<std::size_t> found;
  for (std::size_t i = 0; i < sample.header.size(); ++i) {
    const std::string name = small_letters(sample.header[i]);
    const auto parts = parts_of(sample, i);
    if (has_word(name, {"indoor", "inside", "console", "room"})) continue;
    if (!fits(name, parts) || numbers_of(sample, i).empty()) continue;
    if (has_word(name, {"outdoor", "outside"})) return i;
    if (!found) found = i;
  }
  return found;
}

bool any_part(const std::vector<std::string>& parts, std::initializer_list<const char*> words) {
  return std::any_of(parts.begin(), parts.end(), [&](const std::string& part) {
    return std::any_of(words.begin(), words.end(), [&](const char* word) { return part == word; });
  });
}

}  // namespace

bool has_word(const std::string& text, std::initializer_list<const char*> words) {
  return std::any_of(words.begin(), words.end(),
                     [&](const char* word) { return text.find(word) != std::string::npos; });
}

std::string small_letters(std::string text) {
  std::transform(text.begin(), text.end(), text.begin(),
                 [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return text;
}

std::vector<std::string> parts_of(const SampleText& sample, std::size_t column) {
  std::string text = sample.header[column];
  if (column < sample.units.size()) text += " " + sample.units[column];
  std::vector<std::string> parts(1);
  for (const char c : small_letters(text)) {
    if (std::isalnum(static_cast<unsigned char>(c))) {
      parts.back() += c;
    } else if (!parts.back().empty()) {
      parts.emplace_back();
    }
  }
  return parts;
}

std::vector<double> numbers_of(const SampleText& sample, std::size_t column) {
  std::vector<double> numbers;
  for (const auto& row : sample.rows) {
    if (column >= row.size()) continue;
    const auto number = number_of(sample, row[column]);
    if (number && std::abs(*number) < 9000 && !stands_for_nothing(*number)) {
      numbers.push_back(*number);
    }
  }
  std::sort(numbers.begin(), numbers.end());
  return numbers;
}

std::vector<std::string> marks_of(const SampleText& sample, std::size_t column) {
  std::vector<std::string> marks;
  constexpr std::size_t most = 6;  // a column of rubbish has no marks worth naming
  for (const auto& row : sample.rows) {
    if (column >= row.size() || row[column].empty() || row[column].size() > 8) continue;
    const std::string& cell = row[column];
    const auto number = number_of(sample, cell);
    if (number && !stands_for_nothing(*number)) continue;
    if (!number && station::visible(cell) != cell) continue;
    if (std::find(marks.begin(), marks.end(), cell) == marks.end()) marks.push_back(cell);
    if (marks.size() == most) break;
  }
  return marks;
}

double at_share(const std::vector<double>& sorted, double share) {
  if (sorted.empty()) return 0;
  return sorted[static_cast<std::size_t>(share * static_cast<double>(sorted.size() - 1))];
}

std::optional<std::size_t> temperature_column(const SampleText& sample) {
  return find_column(sample, [](const std::string& name, const std::vector<std::string>& parts) {
    const bool other = has_word(
        name, {"dew", "soil", "wind", "max", "min", "fuel", "type", "feel", "index", "wet", "chill",
               "water", "batt", "ground", "grass", "surface", "press", "humid", "apparent"});
    return !other && !any_part(parts, {"in"}) &&
           (has_word(name, {"temp", "tmp", "t_", "air"}) ||
            any_part(parts, {"t", "ta", "tc", "tf", "drybulb"}));
  });
}

std::optional<std::size_t> humidity_column(const SampleText& sample) {
  return find_column(sample, [](const std::string& name, const std::vector<std::string>& parts) {
    const bool other = has_word(name, {"soil", "max", "min", "absolute", "specific"});
    const bool short_name = std::any_of(parts.begin(), parts.end(), [](const std::string& part) {
      return part.starts_with("rh") || part.starts_with("relh");
    });
    return !other && !any_part(parts, {"in"}) && (short_name || has_word(name, {"humid"}));
  });
}

std::optional<std::size_t> dew_point_column(const SampleText& sample) {
  return find_column(sample, [](const std::string& name, const std::vector<std::string>& parts) {
    return has_word(name, {"dew", "dwp", "dewp"}) || any_part(parts, {"td", "tdew", "dp"});
  });
}

std::optional<std::size_t> column_with(const SampleText& sample,
                                       std::initializer_list<const char*> words,
                                       std::initializer_list<const char*> but) {
  return find_column(sample, [&](const std::string& name, const std::vector<std::string>&) {
    return has_word(name, words) && !has_word(name, but);
  });
}

std::optional<std::string> named_temperature_unit(const SampleText& sample, std::size_t column) {
  std::string name = small_letters(sample.header[column]);
  if (column < sample.units.size()) name += " " + small_letters(sample.units[column]);
  const auto parts = parts_of(sample, column);
  if (has_word(name, {"degf", "deg f", "°f", "fahr"}) ||
      any_part(parts, {"f", "tmpf", "dwpf", "tempf", "dewpointf", "tf"})) {
    return "degF";
  }
  if (has_word(name, {"degc", "deg c", "°c", "cels"}) ||
      any_part(parts, {"c", "tmpc", "dwpc", "tempc", "dewpointc", "tc", "airtc"})) {
    return "degC";
  }
  return std::nullopt;
}

}  // namespace antherd::commands
