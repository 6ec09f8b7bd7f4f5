// See folder.hpp.
#include "edge/store/folder.hpp"

#include <fcntl.h>
#include <sys/file.h>
#include <sys/stat.h>
#include <sys/statvfs.h>
#include <sys/sysmacros.h>
#include <sys/vfs.h>
#include <unistd.h>

#include <algorithm>
#include <array>
#include <cerrno>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <sstream>
#include <system_error>
#include <vector>

namespace antherd::store {
namespace {

namespace fs = std::filesystem;

std::string words_of(int error) { return std::generic_category().message(error); }

/// A disk that is worn, full or gone, not a mistake of whoever named the folder.
bool of_disk(int error) {
  return error == EROFS || error == ENOSPC || error == EDQUOT || error == EIO || error == ENXIO ||
         error == ENODEV;
}

/// Forces a file's or a folder's content to disk.
bool force(const std::string& path) {
  const int file = ::open(path.c_str(), O_RDONLY | O_CLOEXEC);
  if (file < 0) return false;
  const bool done = ::fsync(file) == 0;
  ::close(file);
  return done;
}

/// The type of the file system that a device number belongs to, as the kernel lists it.
std::string type_of_device(dev_t device) {
  const std::string wanted = std::to_string(major(device)) + ":" + std::to_string(minor(device));
  std::ifstream mounts("/proc/self/mountinfo");
  for (std::string row; std::getline(mounts, row);) {
    std::istringstream words(row);
    std::string id, parent, numbers;
    words >> id >> parent >> numbers;
    const std::size_t dash = row.find(" - ");
    if (numbers != wanted || dash == std::string::npos) continue;
    return row.substr(dash + 3, row.find(' ', dash + 3) - dash - 3);
  }
  return {};
}

/// The names of files in a folder that begin like a copy and end so, in no order.
std::vector<std::string> files_like_copies(const std::string& folder, const char* ending) {
  std::error_code error;
  std::vector<std::string> names;
  for (const auto& entry : fs::directory_iterator(folder, error)) {
    std::string name = entry.path().filename().string();
    if (name.starts_with("antherd-copy-") && name.ends_with(ending)) names.push_back(name);
  }
  return names;
}

/// The newest first; what bears a later week's name than `week` last.
void sort_copies(std::vector<std::string>& names, const std::string& week) {
  std::sort(names.begin(), names.end(), [&](const std::string& a, const std::string& b) {
    return (a > week) != (b > week) ? b > week : a > b;  // the names sort by week
  });
}

struct Magic {
  std::uint64_t number;
  const char* name;
};
// From the kernel's headers (linux/magic.h and the file systems' own).
constexpr std::array<Magic, 11> network_magics{{{0x6969, "NFS"},
                                                {0x517B, "SMB"},
                                                {0xFE534D42, "SMB2"},
                                                {0xFF534D42, "CIFS"},
                                                {0x564C, "NCP"},
                                                {0x73757245, "Coda"},
                                                {0x5346414F, "AFS"},
                                                {0x6B414653, "AFS"},
                                                {0x00C36400, "Ceph"},
                                                {0x01021997, "9P"},
                                                {0x0BD00BD0, "Lustre"}}};
constexpr std::uint64_t fuse_magic = 0x65735546;

}  // namespace

Outcome make_folder(const std::string& folder) {
  std::error_code unseen;
  if (fs::is_directory(folder, unseen)) return Done{};
  if (::mkdir(folder.c_str(), 0750) == 0 || errno == EEXIST) return Done{};
  const int error = errno;
  return Failure{"make the store's folder", folder, words_of(error),
                 "make it by hand or name another with [store] folder", of_disk(error)};
}

std::optional<std::string> network_name(std::uint64_t magic, const std::string& type) {
  if (magic == fuse_magic) {
    if (type == "fuseblk" || type == "fuse.fuse-overlayfs") return std::nullopt;
    return type.empty() ? "FUSE" : type;
  }
  for (const Magic& one : network_magics) {
    if (one.number == magic) return one.name;
  }
  return std::nullopt;
}

Outcome refuse_network(const std::string& folder) {
  struct statfs system {};
  struct stat place {};
  if (::statfs(folder.c_str(), &system) != 0 || ::stat(folder.c_str(), &place) != 0) {
    const int error = errno;
    return Failure{"look at the store's folder", folder, words_of(error),
                   "put that right and start again", of_disk(error)};
  }
  // f_type is signed and of different widths: only its low 32 bits are the number.
  const auto magic = static_cast<std::uint64_t>(system.f_type) & 0xFFFFFFFFU;
  const auto name = network_name(magic, magic == fuse_magic ? type_of_device(place.st_dev) : "");
  if (!name) return Done{};
  return Failure{"open the store", folder,
                 "this is a network file system (" + *name +
                     "), where locks and forced writes cannot be relied on",
                 "name a folder on a local disk with [store] folder"};
}

Result<int> take_service_lock(const std::string& folder) {
  const std::string path = folder + "/antherd.lock";
  const int file = ::open(path.c_str(), O_RDWR | O_CREAT | O_CLOEXEC | O_NOFOLLOW, 0640);
  if (file < 0) {
    const int error = errno;
    return Failure{"lock the store", path, words_of(error), "put that right and start again",
                   of_disk(error)};
  }
  if (::flock(file, LOCK_EX | LOCK_NB) == 0) {
    const std::string process = std::to_string(::getpid()) + "\n";
    // A disk that is full must not keep the service from starting: the number is only a courtesy.
    if (::ftruncate(file, 0) == 0) {
      [[maybe_unused]] const auto written = ::pwrite(file, process.data(), process.size(), 0);
    }
    return file;
  }
  const int error = errno;
  std::array<char, 32> text{};
  const auto size = ::pread(file, text.data(), text.size() - 1, 0);
  ::close(file);
  if (error != EWOULDBLOCK) {
    return Failure{"lock the store", path, words_of(error), "put that right and start again",
                   of_disk(error)};
  }
  std::string process(text.data(), size > 0 ? static_cast<std::size_t>(size) : 0);
  process = process.substr(0, process.find('\n'));
  return Failure{"open the store", folder,
                 "another service already runs on it" +
                     (process.empty() ? std::string() : " (process " + process + ")"),
                 "stop that one first"};
}

Result<std::string> put_aside(const std::string& folder, Instant now) {
  const CivilDate date(std::chrono::floor<std::chrono::days>(now));
  std::array<char, 48> name{};
  std::snprintf(name.data(), name.size(), "antherd-damaged-%04d-%02u-%02u",
                static_cast<int>(date.year()), static_cast<unsigned>(date.month()),
                static_cast<unsigned>(date.day()));
  // The log goes first: should we die in between, the database still lies there to be found.
  constexpr std::array<const char*, 3> parts{"-wal", "-shm", ""};
  std::error_code error;
  std::string target;
  for (int n = 1;; ++n) {
    target = folder + "/" + name.data() + (n > 1 ? "-" + std::to_string(n) : "") + ".db";
    if (std::none_of(parts.begin(), parts.end(), [&](const char* part) {
          return fs::exists(fs::symlink_status(target + part, error));
        })) {
      break;
    }
  }
  const std::string source = folder + "/antherd.db";
  for (const char* part : parts) {
    if (::rename((source + part).c_str(), (target + part).c_str()) == 0 || errno == ENOENT)
      continue;
    const int number = errno;
    return Failure{"set the damaged store aside", source + part, words_of(number),
                   "rename it by hand and start again", of_disk(number)};
  }
  force(folder);
  return target;
}

std::optional<FileState> file_state(const std::string& path) {
  struct stat found {};
  if (::stat(path.c_str(), &found) != 0) return std::nullopt;
  return FileState{found.st_dev, found.st_ino, found.st_size, found.st_mtim.tv_sec,
                   found.st_mtim.tv_nsec};
}

std::optional<std::int64_t> free_bytes(const std::string& folder) {
  struct statvfs room {};
  if (::statvfs(folder.c_str(), &room) != 0) return std::nullopt;
  return static_cast<std::int64_t>(room.f_bavail) * static_cast<std::int64_t>(room.f_frsize);
}

bool has_no_room(const std::string& folder) {
  const auto free = free_bytes(folder);
  return free && *free < ballast_bytes / 8;
}

bool has_ballast(const std::string& folder) {
  const auto there = file_state(folder + "/ballast");
  return there && there->size == ballast_bytes;
}

Outcome make_ballast(const std::string& folder) {
  const std::string path = folder + "/ballast";
  if (has_ballast(folder)) return Done{};
  const auto free = free_bytes(folder);
  if (!free) return Failure{"make the ballast", path, words_of(errno), "it is tried again later"};
  if (*free < ballast_bytes + ballast_margin) {
    return Failure{"make the ballast", path, "less than 24 MiB are free on this disk",
                   "it is made once there is room"};
  }
  const int file = ::open(path.c_str(), O_WRONLY | O_CREAT | O_CLOEXEC | O_NOFOLLOW, 0640);
  if (file < 0) {
    return Failure{"make the ballast", path, words_of(errno), "it is tried again later"};
  }
  int error = ::ftruncate(file, 0) == 0 ? ::posix_fallocate(file, 0, ballast_bytes) : errno;
  ::close(file);
  if (error == 0) return Done{};
  remove_file(path);
  return Failure{"make the ballast", path, words_of(error), "it is tried again later"};
}

Result<bool> remove_ballast(const std::string& folder) {
  const std::string path = folder + "/ballast";
  if (::unlink(path.c_str()) == 0) return true;
  if (errno == ENOENT) return false;
  return Failure{"release the ballast", path, words_of(errno), "free some space by hand"};
}

std::string copy_name(Instant now) {
  using namespace std::chrono;
  // ISO 8601: a week belongs to the year of its Thursday.
  const sys_days day = floor<days>(now);
  const sys_days thursday = day - (weekday(day) - Monday) + days(3);
  const year_month_day date(thursday);
  const sys_days new_year(date.year() / January / 1);
  std::array<char, 48> name{};
  std::snprintf(name.data(), name.size(), "antherd-copy-%04d-W%02d.db",
                static_cast<int>(date.year()),
                static_cast<int>((thursday - new_year).count() / 7 + 1));
  return name.data();
}

std::vector<std::string> copies_in(const std::string& folder, Instant now) {
  std::vector<std::string> copies = files_like_copies(folder, ".db");
  sort_copies(copies, copy_name(now));
  for (std::string& name : copies) name.insert(0, folder + "/");
  return copies;
}

void remove_unfinished_copies(const std::string& folder) {
  for (const std::string& name : files_like_copies(folder, ".part")) {
    remove_file(folder + "/" + name);
  }
}

Outcome publish_copy(const std::string& part, const std::string& folder, const std::string& name) {
  const std::string target = folder + "/" + name;
  if (!force(part) || ::rename(part.c_str(), target.c_str()) != 0 || !force(folder)) {
    return Failure{"keep the weekly copy", target, words_of(errno),
                   "the copies of earlier weeks are untouched"};
  }
  std::vector<std::string> copies = files_like_copies(folder, ".db");
  sort_copies(copies, name);  // itself is the first
  for (std::size_t i = copies_kept; i < copies.size(); ++i) remove_file(folder + "/" + copies[i]);
  return Done{};
}

void remove_file(const std::string& path) noexcept { ::unlink(path.c_str()); }

}  // namespace antherd::store
