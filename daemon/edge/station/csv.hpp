// One CSV file read piece by piece: the same samples whether it comes whole or byte by byte.
// Knows nothing of folders.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>

#include "core/failures/result.hpp"
#include "edge/station/columns.hpp"
#include "edge/station/readings.hpp"
#include "edge/station/recipe.hpp"
#include "edge/station/time_reader.hpp"

namespace antherd::station {

/// The header line at the start of a file's text.
struct Header {
  std::string line;       // without byte-order mark and line end; empty: not yet whole
  std::size_t bytes = 0;  // up to the start of the first row
  std::int64_t lines = 0;
  std::string trouble;  // why there is none: another encoding, no line end, too long
};

/// Skips a UTF-8 byte-order mark and blank lines. @param whole  nothing follows the text
Header find_header(std::string_view text, bool whole);

class CsvReader {
 public:
  /// Fails on a form that cannot be used.
  static Result<CsvReader> make(const RecordForm& form, const std::string& file,
                                std::optional<Instant> now);

  /// Finds the form's columns in the header line; fails where they do not fit.
  Outcome open(const std::string& header);

  /// Reads the whole rows of a piece and says how many bytes that was; what is left comes again at
  /// the start of the next piece. Inside a line that is too long it eats everything.
  /// @param last  nothing follows: a last line without line end is a row too
  std::size_t eat(std::string_view text, bool last);

  /// Where a file is taken up again.
  void resume(std::int64_t lines, std::optional<Instant> memory, bool inside_long_line);
  std::int64_t lines() const { return lines_; }
  std::optional<Instant> memory() const { return time_.memory(); }
  const std::string& header() const { return header_; }  // a later one when the file has several

  Readings& readings() { return readings_; }
  /// All that was read, with an entry for refused rows past the bound.
  Readings take();

 private:
  CsvReader(const RecordForm& form, Recipe recipe, TimeReader time, std::string file,
            std::optional<Instant> now)
      : form_(form),
        recipe_(std::move(recipe)),
        time_(std::move(time)),
        file_(std::move(file)),
        now_(now) {}

  std::size_t eat_quoted(std::string_view text, std::size_t line_length, bool last);
  void read_row(std::string_view row);
  bool read_values(std::string_view row, weather::Sample& sample);
  std::optional<Instant> read_time(std::string& reason);
  bool is_header(std::string_view row);
  void refuse(std::string_view row, std::string reason);

  RecordForm form_;
  Recipe recipe_;
  TimeReader time_;
  std::string file_;
  std::optional<Instant> now_;
  Columns columns_;
  bool bound_ = false;  // columns_ fits the rows
  std::string header_;
  Cells cells_;
  std::string reason_;
  std::int64_t lines_ = 0;  // physical lines behind us
  bool inside_long_line_ = false;
  Readings readings_;
  std::size_t not_listed_ = 0;
  std::string first_not_listed_;
};

}  // namespace antherd::station
