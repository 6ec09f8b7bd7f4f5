// From a station's text to samples. Nothing is lost silently: what cannot be used comes back as a
// refused row with its reason.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/failures/result.hpp"
#include "core/weather/sample.hpp"
#include "edge/station/form.hpp"

namespace antherd::station {

struct Refused {
  std::string file;       // path or URL
  std::int64_t line = 0;  // 1-based, 0 where there are no lines
  std::string reason;     // "temperature: 'abc' is not a number"
  std::string text;       // the row, at most 200 bytes, control characters made visible
};

struct Readings {
  std::vector<weather::Sample> samples;  // in the order of the text
  std::vector<Refused> refused;
  int ahead = 0;           // rows among the refused whose time is ahead of the computer's clock
  Seconds least_ahead{0};  // of those, what all were at least ahead
};

/// Reads a whole CSV text (header included) at once; a last line without newline is read too.
/// For `replay` and `check --sample`. Fails where no header fits the form (names what is missing
/// and what the file has).
/// @param now  rows more than 10 min ahead of it are refused; nothing, or a `now` before 2000 (a
///             clock that is not set): no such test
Result<Readings> read_csv(std::string_view text, const std::string& name, const RecordForm& form,
                          std::optional<Instant> now);

/// The same from a file of any size.
Result<Readings> read_csv_file(const std::string& path, const RecordForm& form,
                               std::optional<Instant> now);

/// One JSON answer by RFC 6901 pointers. A pointer to an array of values, or `/…/-`, is not
/// supported and refused by name. Fails where the text is no JSON, gives no usable time or holds no
/// usable value; a value that is no number refuses the answer (an entry in `refused`), a pointer to
/// nothing is named there while the rest is used, null is missing.
/// A local time that the zone has twice means the instant nearer to `now`.
/// @param now  the time of arrival; times more than 10 min ahead of it fail
Result<Readings> read_json(std::string_view text, const std::string& url, const RecordForm& form,
                           Instant now);

/// What is remembered of a file in the drop folder between looks (stored as facts). One for each
/// device and inode: a later one replaces the earlier. To be forgotten when the station's form
/// changes, so that the files are read anew.
struct Bookmark {
  std::string path;  // relative to the folder, strange bytes made visible
  std::uint64_t device = 0, inode = 0;
  std::int64_t bytes_read = 0;  // up to the end of the last whole row; inside a line only where
                                // that line is too long and was refused
  std::string head_hash;        // of the first min(4096, bytes_read) bytes
  std::int64_t lines_read = 0;
  std::string header;  // the header line as read, empty for none yet; with bytes_read 0 it is one
                       // that does not fit the form and was named
  // The instant last read near a clock change, of either pass: it tells the repeated hour's two
  // passes apart (first pass until the readings step back).
  std::optional<Instant> last_local_first_pass;
  std::int64_t modified = 0;  // mtime, ns: unchanged size and mtime are not read again

  bool operator==(const Bookmark&) const = default;
};

/// One look into a drop folder.
struct Look {
  Readings readings;
  std::vector<Bookmark> bookmarks;  // changed ones only
  std::vector<Failure> troubles;    // files or the folder that could not be read, each once
  bool more = false;                // a bound was reached: look again soon
  /// The paths of all files there that the form wants, as bookmarks bear them, sorted; nothing
  /// where the folder could not be seen whole.
  std::optional<std::vector<std::string>> names;
};

/// Reads what is new in the folder since the bookmarks: bounded in bytes per look (limits.hpp).
/// Never writes, never deletes. Links, FIFOs and devices are left alone and named once, a header
/// that does not fit likewise; a folder or file that cannot be read is named at each look.
/// A half line at the end waits for its rest. Bookmarks belong in one transaction with the samples.
/// @param now  as for read_csv
Look look_into(const DropForm& form, const std::vector<Bookmark>& bookmarks, Instant now);

}  // namespace antherd::station
