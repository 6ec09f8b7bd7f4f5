// See columns.hpp.
#include "edge/station/columns.hpp"

#include <algorithm>
#include <cstring>

#include "edge/station/text.hpp"

namespace antherd::station {
namespace {

constexpr const char* too_many = "more columns than any station has";
constexpr const char* not_closed = "a quote is opened and not closed";
constexpr const char* goes_on = "something follows a closing quote";

/// The columns of a name: one, or none, or several; exactly, else without case.
std::vector<std::size_t> places(const Cells& names, std::string_view wanted) {
  std::vector<std::size_t> exact;
  std::vector<std::size_t> folded;
  for (std::size_t i = 0; i < names.size(); ++i) {
    if (names[i] == wanted) exact.push_back(i);
    if (equal_fold(names[i], wanted)) folded.push_back(i);
  }
  return exact.empty() ? folded : exact;
}

/// Looks the form's names up under one separator.
class Search {
 public:
  Search(std::string_view header, char separator) {
    columns_.separator = separator;
    broken_ = names_.cut(header, separator);
    if (broken_) return;
    columns_.count = names_.size();
    while (columns_.count > 1 && names_[columns_.count - 1].empty()) --columns_.count;
  }

  std::size_t place(std::string_view name, const char* what) {
    const std::vector<std::size_t> found = places(names_, trim(name));
    if (found.size() == 1) {
      ++found_;
      return found.front();
    }
    const std::string shown = quoted(name, 60) + " (" + what + ")";
    (found.empty() ? lacking_ : doubled_) +=
        (found.empty() ? lacking_ : doubled_).empty() ? shown : ", " + shown;
    return 0;
  }

  void look_up(const RecordForm& form, const Recipe& recipe) {
    if (broken_) return;
    for (const std::string& name : form.time.at) columns_.time.push_back(place(name, "time"));
    if (form.where) columns_.where = place(form.where->first, "where");
    for (const Measure& measure : recipe.measures()) {
      columns_.measures.push_back(place(measure.at, measure.word));
    }
  }

  bool fits() const { return !broken_ && lacking_.empty() && doubled_.empty(); }
  std::size_t found() const { return found_; }
  const Columns& columns() const { return columns_; }

  std::string why() const {
    if (broken_) return std::string("its header line: ") + broken_;
    std::string why;
    if (!lacking_.empty()) why = "no column " + lacking_;
    if (!doubled_.empty()) why += (why.empty() ? "" : "; ") + ("more than one column " + doubled_);
    std::string names;
    for (std::size_t i = 0; i < names_.size() && names.size() < 400; ++i) {
      names += (i ? ", " : "") + visible(names_[i], 40);
    }
    return why + "; its header has: " + names;
  }

 private:
  Cells names_;
  Columns columns_;
  const char* broken_ = nullptr;
  std::string lacking_, doubled_;
  std::size_t found_ = 0;
};

}  // namespace

const char* Cells::cut(std::string_view row, char separator) {
  cells_.clear();
  if (std::memchr(row.data(), '"', row.size())) return cut_quoted(row, separator);
  const char* start = row.data();
  const char* const end = start + row.size();
  for (const char* at = start;; ++at) {
    if (at != end && *at != separator) continue;
    if (cells_.size() >= limits::columns) return too_many;
    cells_.push_back(trim(std::string_view(start, static_cast<std::size_t>(at - start))));
    if (at == end) return nullptr;
    start = at + 1;
  }
}

const char* Cells::cut_quoted(std::string_view row, char separator) {
  // The unquoted text is never longer than the row: views into it stay good.
  unquoted_.clear();
  unquoted_.reserve(row.size());
  const auto padding = [&](char c) { return (c == ' ' || c == '\t') && c != separator; };
  std::size_t at = 0;
  while (true) {
    if (cells_.size() >= limits::columns) return too_many;
    while (at < row.size() && padding(row[at])) ++at;
    if (at < row.size() && row[at] == '"') {
      const std::size_t start = unquoted_.size();
      for (++at;; ++at) {
        if (at >= row.size()) return not_closed;
        if (row[at] == '"') {
          if (at + 1 >= row.size() || row[at + 1] != '"') break;
          ++at;
        }
        unquoted_.push_back(row[at]);
      }
      ++at;
      while (at < row.size() && padding(row[at])) ++at;
      if (at < row.size() && row[at] != separator) return goes_on;
      cells_.push_back(trim(std::string_view(unquoted_).substr(start)));
    } else {
      const std::size_t end = std::min(row.find(separator, at), row.size());
      cells_.push_back(trim(row.substr(at, end - at)));
      at = end;
    }
    if (at >= row.size()) return nullptr;
    ++at;
  }
}

Quotes quotes_of(std::string_view text, char separator, Cells& scratch) {
  const char* const fault = scratch.cut(text, separator);
  if (!fault) return Quotes::closed;
  return fault == not_closed ? Quotes::open : Quotes::broken;
}

Result<Columns> Columns::find(std::string_view header, const RecordForm& form, const Recipe& recipe,
                              const std::string& file) {
  std::string why;
  std::size_t found = 0;
  std::size_t count = 0;
  for (const char separator : {',', ';', '\t'}) {
    Search search(trim(header), separator);
    search.look_up(form, recipe);
    if (search.fits()) return search.columns();
    // The complaint is of the separator that found most names, else of that with most columns.
    const bool better = search.found() > found || search.columns().count > count;
    if (!why.empty() && (search.found() < found || !better)) continue;
    why = search.why();
    found = search.found();
    count = search.columns().count;
  }
  return Failure{"read the station's file", file, why,
                 "name the columns in the settings as the file has them"};
}

}  // namespace antherd::station
