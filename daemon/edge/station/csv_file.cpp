// A whole CSV text or file at once; see readings.hpp.
#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstring>
#include <utility>

#include "edge/station/csv.hpp"
#include "edge/station/descriptor.hpp"
#include "edge/station/text.hpp"

namespace antherd::station {
namespace {

Failure unreadable(const std::string& file, const std::string& why) {
  return Failure{"read the station's file", visible(file, 400), why, "nothing of it was used"};
}

/// Opens the reader at the header of a text.
/// @return the bytes up to the first row, 0 where the header has not come yet
Result<std::size_t> open_header(CsvReader& reader, std::string_view text, bool whole,
                                const std::string& name) {
  const Header header = find_header(text, whole);
  if (!header.trouble.empty()) return unreadable(name, header.trouble);
  if (header.line.empty()) {
    if (whole || text.size() > limits::line_bytes) return unreadable(name, "it has no header line");
    return std::size_t{0};
  }
  if (const Outcome fits = reader.open(header.line); !fits) return fits.failure();
  reader.resume(header.lines, std::nullopt, false);
  return header.bytes;
}

/// Memory for the samples at once: as many a byte as there were in the first piece.
void reserve(std::vector<weather::Sample>& samples, std::size_t bytes_read, off_t bytes_in_all) {
  if (bytes_in_all <= static_cast<off_t>(bytes_read) || bytes_read == 0) return;
  const double per_byte = static_cast<double>(samples.size()) / static_cast<double>(bytes_read);
  samples.reserve(static_cast<std::size_t>(per_byte * static_cast<double>(bytes_in_all) * 1.02));
}

constexpr std::size_t piece_bytes = 1024 * 1024;

}  // namespace

Result<Readings> read_csv(std::string_view text, const std::string& name, const RecordForm& form,
                          std::optional<Instant> now) {
  Result<CsvReader> reader = CsvReader::make(form, name, now);
  if (!reader) return reader.failure();
  const Result<std::size_t> header = open_header(*reader, text, true, name);
  if (!header) return header.failure();
  reader->eat(text.substr(*header), true);
  return reader->take();
}

Result<Readings> read_csv_file(const std::string& path, const RecordForm& form,
                               std::optional<Instant> now) {
  Result<CsvReader> reader = CsvReader::make(form, path, now);
  if (!reader) return reader.failure();
  const Descriptor file(open(path.c_str(), O_RDONLY | O_CLOEXEC));
  if (!file) return unreadable(path, std::strerror(errno));
  struct stat about {};
  if (fstat(file.number(), &about) != 0) return unreadable(path, std::strerror(errno));

  std::string text;  // what has been read and not yet eaten
  std::size_t eaten_in_all = 0;
  bool opened = false;
  bool last = false;
  while (!last) {
    const std::size_t had = text.size();
    text.resize(had + piece_bytes);
    const ssize_t count = read(file.number(), text.data() + had, piece_bytes);
    if (count < 0) return unreadable(path, std::strerror(errno));
    text.resize(had + static_cast<std::size_t>(count));
    last = count == 0;
    std::size_t eaten = 0;
    if (!opened) {
      const Result<std::size_t> header = open_header(*reader, text, last, path);
      if (!header) return header.failure();
      eaten = *header;
      opened = eaten > 0;
    }
    if (opened) eaten += reader->eat(std::string_view(text).substr(eaten), last);
    text.erase(0, eaten);
    if (eaten_in_all == 0) reserve(reader->readings().samples, eaten, about.st_size);
    eaten_in_all += eaten;
  }
  return reader->take();
}

}  // namespace antherd::station
