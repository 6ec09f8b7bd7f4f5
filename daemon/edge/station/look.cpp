// One look into a drop folder; see readings.hpp. Opens what it reads once, by its name inside the
// folder's descriptor, follows no link, and trusts nothing that it has not checked on the open
// file.
#include <dirent.h>
#include <fcntl.h>
#include <fnmatch.h>
#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <cstring>
#include <iterator>
#include <map>
#include <memory>
#include <set>
#include <tuple>
#include <utility>

#include "edge/station/csv.hpp"
#include "edge/station/descriptor.hpp"
#include "edge/station/text.hpp"

namespace antherd::station {
namespace {

using Identity = std::pair<std::uint64_t, std::uint64_t>;  // device, inode

Identity identity_of(const struct stat& about) {
  return {static_cast<std::uint64_t>(about.st_dev), static_cast<std::uint64_t>(about.st_ino)};
}

std::int64_t modified(const struct stat& about) {
  return static_cast<std::int64_t>(about.st_mtim.tv_sec) * 1'000'000'000 + about.st_mtim.tv_nsec;
}

/// Reads up to `size` bytes at a place; fewer at the file's end. Fails with errno.
std::optional<std::string> read_at(const Descriptor& file, std::int64_t place, std::size_t size) {
  // Mostly little is new: what stays unread is neither cleared nor copied.
  const auto buffer = std::make_unique_for_overwrite<char[]>(size);
  std::size_t have = 0;
  while (have < size) {
    const ssize_t count = pread(file.number(), buffer.get() + have, size - have,
                                static_cast<off_t>(place) + static_cast<off_t>(have));
    if (count < 0 && errno == EINTR) continue;
    if (count < 0) return std::nullopt;
    if (count == 0) break;
    have += static_cast<std::size_t>(count);
  }
  return std::string(buffer.get(), have);
}

/// The hash of the first min(head_bytes, bytes) bytes of a file's head.
std::string head_hash(std::string_view head, std::int64_t bytes) {
  if (bytes <= 0) return "";
  return hash_hex(head.substr(0, static_cast<std::size_t>(bytes)));
}

const char* kind_of(mode_t mode) {
  if (S_ISLNK(mode)) return "it is a link";
  if (S_ISFIFO(mode)) return "it is a pipe";
  if (S_ISSOCK(mode)) return "it is a socket";
  return "it is a device";
}

class Looking {
 public:
  Looking(const DropForm& form, const std::vector<Bookmark>& bookmarks, Instant now)
      : form_(form), now_(now) {
    for (const Bookmark& mark : bookmarks) known_[{mark.device, mark.inode}].push_back(&mark);
    for (auto& [identity, marks] : known_) {
      std::stable_sort(marks.begin(), marks.end(), [](const Bookmark* a, const Bookmark* b) {
        return a->bytes_read > b->bytes_read;
      });
    }
  }

  Look look() {
    // A form that cannot be used is no trouble of any file.
    if (auto usable = CsvReader::make(form_.record, form_.folder, now_); !usable) {
      look_.troubles.push_back(usable.failure());
      return std::move(look_);
    }
    DIR* const folder = opendir(form_.folder.c_str());
    if (!folder) {
      trouble("look into the drop folder", "", std::strerror(errno), "it is looked at again");
      return std::move(look_);
    }
    for (const std::string& name : names_in(folder)) visit(dirfd(folder), name);
    closedir(folder);
    return std::move(look_);
  }

 private:
  void trouble(const char* what, const std::string& name, const std::string& why,
               const char* next) {
    look_.troubles.push_back(Failure{what, shown_path(name), why, next});
  }

  std::string shown_path(const std::string& name) const {
    return visible(name.empty() ? form_.folder : form_.folder + "/" + name, 400);
  }

  /// The names that the form wants, sorted. Where there are too many the last ones are kept: names
  /// bear dates, and the newest must not be the one left out.
  std::vector<std::string> names_in(DIR* folder) {
    std::vector<std::string> names;
    std::size_t entries = 0;
    bool whole = false;
    while (true) {
      errno = 0;
      const dirent* const entry = readdir(folder);
      if (!entry) whole = errno == 0;
      if (!entry) break;
      if (entry->d_type == DT_DIR) continue;
      if (++entries > limits::entries) break;
      if (fnmatch(form_.files.c_str(), entry->d_name, FNM_PERIOD) == 0) {
        names.emplace_back(entry->d_name);
      }
    }
    std::sort(names.begin(), names.end());
    if (entries > limits::entries || names.size() > limits::files) {
      const std::size_t kept = std::min(names.size(), limits::files);
      names.erase(names.begin(), names.end() - static_cast<std::ptrdiff_t>(kept));
      trouble("look at every file of the drop folder", "",
              "it holds too many; only the last " + std::to_string(kept) + " by name are looked at",
              "move old files out of it");
      whole = false;
    }
    if (whole) remember(names);
    return names;
  }

  void remember(const std::vector<std::string>& names) {
    look_.names.emplace();
    for (const std::string& name : names) look_.names->push_back(visible(name, 400));
    std::sort(look_.names->begin(), look_.names->end());
  }

  void visit(int folder, const std::string& name) {
    struct stat about {};
    if (fstatat(folder, name.c_str(), &about, AT_SYMLINK_NOFOLLOW) != 0) return;  // gone again
    if (S_ISDIR(about.st_mode)) return;
    if (!seen_.insert(identity_of(about)).second) return;  // another name of the same file
    if (!S_ISREG(about.st_mode)) return leave_alone(name, about);
    const auto& marks = known_[identity_of(about)];
    const auto unchanged = [&](const Bookmark* mark) {
      return mark->modified == modified(about) && mark->bytes_read == about.st_size &&
             mark->path == visible(name, 400);
    };
    if (std::any_of(marks.begin(), marks.end(), unchanged)) return;
    if (read_in_all_ >= limits::bytes_per_look) {
      look_.more = true;
      return;
    }
    const Descriptor file(
        openat(folder, name.c_str(), O_RDONLY | O_NOFOLLOW | O_NONBLOCK | O_NOCTTY | O_CLOEXEC));
    if (!file || fstat(file.number(), &about) != 0) {
      if (errno == ENOENT || errno == ELOOP) return;  // replaced a moment ago: the next look sees
      return trouble("read a file of the drop folder", name, std::strerror(errno),
                     "it is tried again");
    }
    if (S_ISREG(about.st_mode)) read(file, name, about);
  }

  /// A link, pipe or device is named once: its bookmark says that it was.
  void leave_alone(const std::string& name, const struct stat& about) {
    for (const Bookmark* mark : known_[identity_of(about)]) {
      if (mark->path == visible(name, 400)) return;
    }
    trouble("read a file of the drop folder", name, kind_of(about.st_mode), "it is left alone");
    look_.bookmarks.push_back(beginning(name, about));
  }

  static Bookmark beginning(const std::string& name, const struct stat& about) {
    Bookmark mark;
    mark.path = visible(name, 400);
    std::tie(mark.device, mark.inode) = identity_of(about);
    mark.modified = modified(about);
    return mark;
  }

  /// Where the file was left, if it is still the same file, else its beginning.
  std::optional<Bookmark> place_in(const Descriptor& file, const std::string& name,
                                   const struct stat& about) {
    const Bookmark fresh = beginning(name, about);
    const auto& marks = known_[identity_of(about)];
    if (marks.empty()) return fresh;
    const auto head = read_at(file, 0, limits::head_bytes);
    if (!head) return std::nullopt;
    for (const Bookmark* known : marks) {
      if (known->bytes_read < 0 || known->bytes_read > about.st_size) continue;
      if (head_hash(*head, known->bytes_read) != known->head_hash) continue;
      Bookmark mark = *known;
      mark.path = fresh.path;
      mark.modified = fresh.modified;
      return mark;
    }
    return fresh;
  }

  void read(const Descriptor& file, const std::string& name, const struct stat& about) {
    std::optional<Bookmark> mark = place_in(file, name, about);
    if (!mark) return unreadable(name);
    Result<CsvReader> reader = CsvReader::make(form_.record, shown_path(name), now_);
    ANTHERD_CHECK(reader);
    const bool open = mark->bytes_read == 0 ? open_first(file, name, *reader, *mark)
                                            : open_again(file, name, *reader, *mark);
    if (open && !read_slice(file, name, *reader, *mark)) return;
    const auto& marks = known_[identity_of(about)];
    const auto same = [&](const Bookmark* known) { return *known == *mark; };
    if (std::none_of(marks.begin(), marks.end(), same)) look_.bookmarks.push_back(*mark);
  }

  void unreadable(const std::string& name) {
    trouble("read a file of the drop folder", name, std::strerror(errno), "it is tried again");
  }

  /// Finds the header of a file that was not read yet. A header that does not fit is remembered,
  /// so that it is named once, and tried again, since the settings may change.
  bool open_first(const Descriptor& file, const std::string& name, CsvReader& reader,
                  Bookmark& mark) {
    Header header;
    std::string text;
    for (const std::size_t bytes : {limits::head_bytes, 2 * limits::line_bytes}) {
      const auto head = read_at(file, 0, bytes);
      if (!head) return unreadable(name), false;
      text = *head;
      header = find_header(text, false);
      const bool full = text.size() == 2 * limits::line_bytes;
      if (header.line.empty() && full) {
        header.trouble = "it begins with nothing but blank lines";
        header.line = "(blank)";
      }
      if (!header.line.empty()) break;
    }
    if (header.line.empty()) return false;  // not whole yet
    const bool named = mark.header == header.line;
    mark.header = header.line;
    if (!header.trouble.empty()) {
      if (!named) {
        trouble("read a file of the drop folder", name, header.trouble, "nothing of it was used");
      }
      return false;
    }
    if (const Outcome fits = reader.open(header.line); !fits) {
      if (!named) look_.troubles.push_back(fits.failure());
      return false;
    }
    mark.bytes_read = static_cast<std::int64_t>(header.bytes);
    mark.lines_read = header.lines;
    mark.head_hash = head_hash(text, mark.bytes_read);
    reader.resume(mark.lines_read, std::nullopt, false);
    return true;
  }

  bool open_again(const Descriptor& file, const std::string& name, CsvReader& reader,
                  const Bookmark& mark) {
    const auto before = read_at(file, mark.bytes_read - 1, 1);
    if (!before) return unreadable(name), false;
    // Only a line that was too long is ever left in its middle.
    const bool inside_long_line = *before != "\n";
    if (const Outcome fits = reader.open(mark.header); !fits) {
      look_.troubles.push_back(fits.failure());
    }
    reader.resume(mark.lines_read, mark.last_local_first_pass, inside_long_line);
    return true;
  }

  /// Reads on from the mark and moves it. False, and nothing is kept, where the file changed under
  /// our hands: the next look finds what it has become.
  bool read_slice(const Descriptor& file, const std::string& name, CsvReader& reader,
                  Bookmark& mark) {
    const std::size_t left = limits::bytes_per_look - read_in_all_;
    // At least a whole line must fit, however little of the look's bound is left.
    const std::size_t size =
        std::max(std::min(limits::bytes_per_file, left), 2 * limits::line_bytes);
    const auto slice = read_at(file, mark.bytes_read, size);
    if (!slice) return unreadable(name), false;
    read_in_all_ = std::min(read_in_all_ + slice->size(), limits::bytes_per_look);
    const auto eaten = static_cast<std::int64_t>(reader.eat(*slice, false));
    // The head once more: was the file cut or written over while it was read?
    const auto head = read_at(file, 0, limits::head_bytes);
    struct stat after {};
    if (!head || fstat(file.number(), &after) != 0) return unreadable(name), false;
    if (after.st_size < mark.bytes_read + eaten ||
        head_hash(*head, mark.bytes_read) != mark.head_hash) {
      look_.more = true;
      return false;
    }
    mark.bytes_read += eaten;
    mark.head_hash = head_hash(*head, mark.bytes_read);
    mark.lines_read = reader.lines();
    mark.header = reader.header();
    mark.last_local_first_pass = reader.memory();
    if (slice->size() == size) look_.more = true;
    Readings got = reader.take();
    auto& samples = look_.readings.samples;
    auto& refused = look_.readings.refused;
    samples.insert(samples.end(), got.samples.begin(), got.samples.end());
    std::move(got.refused.begin(), got.refused.end(), std::back_inserter(refused));
    if (got.ahead > 0) {
      auto& all = look_.readings;
      all.least_ahead =
          all.ahead == 0 ? got.least_ahead : std::min(all.least_ahead, got.least_ahead);
      all.ahead += got.ahead;
    }
    return true;
  }

  const DropForm& form_;
  const Instant now_;
  std::map<Identity, std::vector<const Bookmark*>> known_;  // the furthest first
  std::set<Identity> seen_;
  std::size_t read_in_all_ = 0;
  Look look_;
};

}  // namespace

Look look_into(const DropForm& form, const std::vector<Bookmark>& bookmarks, Instant now) {
  return Looking(form, bookmarks, now).look();
}

}  // namespace antherd::station
