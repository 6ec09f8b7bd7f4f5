// Rows of separated cells (RFC 4180 and its local cousins): cutting a row, and finding the form's
// columns in a header line. Knows nothing of values.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/failures/result.hpp"
#include "edge/station/form.hpp"
#include "edge/station/recipe.hpp"

namespace antherd::station {

/// The cells of one row at a time; keeps its memory between rows.
class Cells {
 public:
  Cells() = default;
  Cells(Cells&&) noexcept {}  // the cells are views into the old place: a moved one starts empty
  Cells& operator=(Cells&&) = delete;

  /// Cuts a row (without its line end). Cells are trimmed; a quoted cell is unquoted, "" in it is
  /// one quote. Quotes inside an unquoted cell stand for themselves.
  /// @return nullptr, or what is wrong with the row
  const char* cut(std::string_view row, char separator);

  std::size_t size() const { return cells_.size(); }
  std::string_view operator[](std::size_t i) const { return cells_[i]; }

 private:
  const char* cut_quoted(std::string_view row, char separator);

  std::vector<std::string_view> cells_;
  std::string unquoted_;
};

/// Whether a text ends inside a quoted cell that is still open, or breaks the rules of quoting.
enum class Quotes { closed, open, broken };
Quotes quotes_of(std::string_view text, char separator, Cells& scratch);

/// Where the form's columns stand in a file.
struct Columns {
  char separator = ',';
  std::size_t count = 0;  // cells that a row must have
  std::vector<std::size_t> time;
  std::vector<std::size_t> measures;  // in the order of Recipe::measures()
  std::optional<std::size_t> where;

  /// Finds them in a header line: with , ; or tab, whichever fits. Names are compared trimmed and
  /// unquoted, exactly first, then without case. Fails where a column is not found or stands twice,
  /// naming what is missing and what the header has.
  static Result<Columns> find(std::string_view header, const RecordForm& form, const Recipe& recipe,
                              const std::string& file);
};

}  // namespace antherd::station
