// See csv.hpp.
#include "edge/station/csv.hpp"

#include <algorithm>
#include <cstring>
#include <utility>

#include "edge/station/text.hpp"

namespace antherd::station {
namespace {

constexpr std::size_t none = std::string_view::npos;

std::string_view without_line_end(std::string_view line) {
  if (!line.empty() && line.back() == '\n') line.remove_suffix(1);
  if (!line.empty() && line.back() == '\r') line.remove_suffix(1);
  return line;
}

Header no_header(std::string_view text, std::string trouble) {
  Header header;
  header.line = visible(text, 80);
  header.trouble = std::move(trouble);
  return header;
}

}  // namespace

Header find_header(std::string_view text, bool whole) {
  const auto starts = [&](const char* mark) { return text.substr(0, std::strlen(mark)) == mark; };
  if (starts("\xFF\xFE") || starts("\xFE\xFF")) {
    return no_header(text, "it is UTF-16; save it as UTF-8");
  }
  Header header;
  if (starts("\xEF\xBB\xBF")) header.bytes = 3;
  while (header.bytes < text.size()) {
    const std::size_t newline = text.find('\n', header.bytes);
    const std::string_view line =
        text.substr(header.bytes, newline == none ? none : newline - header.bytes);
    if (line.size() > limits::line_bytes) {
      return no_header(line, "no header line: its first line is longer than 64 KiB");
    }
    if (newline == none && !whole) {
      const std::size_t bare = line.find('\r');
      if (bare != none && bare + 1 < line.size()) {
        return no_header(line, "its lines end in CR alone; save it with LF or CR LF");
      }
      return header;
    }
    const bool blank = trim(line).empty();
    header.bytes = newline == none ? text.size() : newline + 1;
    ++header.lines;
    if (blank) continue;
    if (line.find('\0') != none) {
      return no_header(line, "its header line holds NUL bytes (UTF-16, or not a text)");
    }
    header.line = std::string(without_line_end(line));
    if (header.line.find('\r') != none) {
      return no_header(line, "its lines end in CR alone; save it with LF or CR LF");
    }
    return header;
  }
  return header;
}

Result<CsvReader> CsvReader::make(const RecordForm& form, const std::string& file,
                                  std::optional<Instant> now) {
  Result<Recipe> recipe = Recipe::make(form);
  if (!recipe) return recipe.failure();
  if (form.time.arrival || form.time.at.empty()) {
    return Failure{"read the station's file", file, "its form names no column for the time",
                   "rows of a file need a time column"};
  }
  Result<TimeReader> time = TimeReader::make(form.time, now);
  if (!time) return time.failure();
  return CsvReader(form, *std::move(recipe), *std::move(time), visible(file, 400), now);
}

Outcome CsvReader::open(const std::string& header) {
  Result<Columns> columns = Columns::find(header, form_, recipe_, file_);
  bound_ = static_cast<bool>(columns);
  header_ = header;
  if (!columns) return columns.failure();
  columns_ = *std::move(columns);
  return Done{};
}

void CsvReader::resume(std::int64_t lines, std::optional<Instant> memory, bool inside_long_line) {
  lines_ = lines;
  time_.remember(memory);
  inside_long_line_ = inside_long_line;
}

std::size_t CsvReader::eat(std::string_view text, bool last) {
  std::size_t at = 0;
  while (at < text.size()) {
    const std::string_view rest = text.substr(at);
    const void* const newline = std::memchr(rest.data(), '\n', rest.size());
    std::size_t length = rest.size();  // of the line with its end
    if (newline) {
      length = static_cast<std::size_t>(static_cast<const char*>(newline) - rest.data()) + 1;
    }
    const std::size_t content = newline ? length - 1 : length;
    if (!inside_long_line_ && content > limits::line_bytes) {
      refuse(rest, "longer than 64 KiB without a line end");
      inside_long_line_ = true;
    }
    if (inside_long_line_) {
      if (newline) ++lines_;
      inside_long_line_ = newline == nullptr;
      at += length;
      continue;
    }
    if (!newline && !last) break;
    const std::string_view line = without_line_end(rest.substr(0, length));
    if (!line.empty() && std::memchr(line.data(), '"', line.size())) {
      const std::size_t eaten = eat_quoted(rest, length, last);
      if (eaten == 0) break;
      at += eaten;
      continue;
    }
    read_row(line);
    ++lines_;
    at += length;
  }
  return at;
}

/// A row with quotes may span lines. A quote that does not close within the bounds, or closes
/// where it must not, costs its first line only.
std::size_t CsvReader::eat_quoted(std::string_view text, std::size_t line_length, bool last) {
  std::size_t length = line_length;
  std::int64_t lines = 1;
  Quotes quotes = quotes_of(without_line_end(text.substr(0, length)), columns_.separator, cells_);
  while (quotes == Quotes::open && lines < limits::record_lines && length <= limits::line_bytes) {
    if (length == text.size()) {
      if (!last) return 0;  // the rest of the row has not come yet
      break;
    }
    const std::size_t newline = text.find('\n', length);
    if (newline == none && !last && text.size() <= limits::line_bytes) return 0;
    length = newline == none ? text.size() : newline + 1;
    ++lines;
    if (length > limits::line_bytes) break;
    quotes = quotes_of(without_line_end(text.substr(0, length)), columns_.separator, cells_);
  }
  if (quotes != Quotes::closed) {
    length = line_length;
    lines = 1;
  }
  read_row(without_line_end(text.substr(0, length)));
  lines_ += lines;
  return length;
}

void CsvReader::read_row(std::string_view row) {
  if (trim(row).empty()) return;
  if (std::memchr(row.data(), '\0', row.size())) return refuse(row, "it holds NUL bytes");
  if (row == header_) return;  // a logger that starts again writes its header again
  if (!bound_) {
    if (is_header(row)) return;
    return refuse(row, "it stands behind a header that does not fit the settings");
  }
  if (const char* fault = cells_.cut(row, columns_.separator)) return refuse(row, fault);
  if (columns_.where && *columns_.where < cells_.size() &&
      cells_[*columns_.where] != form_.where->second) {
    if (equal_fold(cells_[*columns_.where], form_.where->first)) is_header(row);
    return;  // a row of another station
  }
  // A cell too many has shifted the others: a decimal comma, or a value that holds the separator.
  const std::size_t count = cells_.size();
  std::size_t filled = count;
  while (filled > columns_.count && cells_[filled - 1].empty()) --filled;
  if (count < columns_.count || filled > columns_.count) {
    if (is_header(row)) return;
    return refuse(row, "it has " + std::to_string(count) + " cells, the header has " +
                           std::to_string(columns_.count));
  }
  weather::Sample sample;
  const std::optional<Instant> at = read_time(reason_);
  if (!at) {
    if (is_header(row)) return;
    if (const auto ahead = time_.ahead()) {
      auto& least = readings_.least_ahead;
      least = readings_.ahead++ == 0 ? *ahead : std::min(least, *ahead);
    }
    return refuse(row, "time: " + reason_);
  }
  sample.time = *at;
  if (read_values(row, sample) && !sample.empty()) readings_.samples.push_back(sample);
}

bool CsvReader::read_values(std::string_view row, weather::Sample& sample) {
  const std::vector<Measure>& measures = recipe_.measures();
  const bool comma = columns_.separator != ',';
  for (std::size_t i = 0; i < measures.size(); ++i) {
    const std::string_view cell = cells_[columns_.measures[i]];
    if (cell.empty()) continue;
    double number = 0;
    const NumberFault fault = read_number(cell, comma, number);
    if (fault != NumberFault::none) {
      if (recipe_.missing(cell)) continue;
      refuse(row, std::string(measures[i].word) + ": " + say(fault, cell));
      return false;
    }
    if (recipe_.missing(number)) continue;
    if (!recipe_.put(measures[i], number, sample, reason_)) refuse(row, reason_);
  }
  return true;
}

std::optional<Instant> CsvReader::read_time(std::string& reason) {
  if (columns_.time.size() == 1) return time_.read(cells_[columns_.time.front()], reason);
  char joined[limits::time_bytes];
  std::size_t length = 0;
  for (const std::size_t column : columns_.time) {
    const std::string_view cell = cells_[column];
    if (length + cell.size() + 1 > sizeof joined) {
      reason = "its columns together are too long";
      return std::nullopt;
    }
    if (length > 0) joined[length++] = ' ';
    std::memcpy(joined + length, cell.data(), cell.size());
    length += cell.size();
  }
  return time_.read(std::string_view(joined, length), reason);
}

/// Whether a row that cannot be read is another header: it names the time's column. From it on
/// the columns are found anew, or the rows behind it are refused.
bool CsvReader::is_header(std::string_view row) {
  bool names_time = false;
  for (const char separator : {',', ';', '\t'}) {
    if (cells_.cut(row, separator)) continue;
    for (std::size_t i = 0; i < cells_.size() && cells_.size() > 1; ++i) {
      names_time = names_time || equal_fold(cells_[i], trim(form_.time.at.front()));
    }
  }
  if (!names_time) return false;
  const Outcome fits = open(std::string(row));
  if (!fits) refuse(row, "another header: " + fits.failure().why);
  return true;
}

void CsvReader::refuse(std::string_view row, std::string reason) {
  if (readings_.refused.size() >= limits::refused_listed) {
    if (not_listed_++ == 0) first_not_listed_ = std::move(reason);
    return;
  }
  readings_.refused.push_back(Refused{file_, lines_ + 1, std::move(reason), visible(row)});
}

Readings CsvReader::take() {
  if (not_listed_ > 0) {
    readings_.refused.push_back(
        Refused{file_, 0,
                std::to_string(not_listed_) +
                    " more rows were refused here, the first of them: " + first_not_listed_,
                ""});
    not_listed_ = 0;
  }
  return std::exchange(readings_, Readings{});
}

}  // namespace antherd::station
