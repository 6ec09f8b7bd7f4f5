// The folder around the database: the service's lock, the kind of file system, the ballast, setting
// a damaged file aside, naming and keeping copies. It must not know what the database holds.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "core/failures/result.hpp"
#include "core/units/time.hpp"

namespace antherd::store {

constexpr std::int64_t ballast_bytes = 8 << 20;
/// Free space that must remain once the ballast is made, so that it never fills the disk itself.
constexpr std::int64_t ballast_margin = 16 << 20;
/// While the ballast is given up samples wait below this: as much again as the ballast gave, which
/// is for decisions and letters alone.
constexpr std::int64_t samples_margin = 16 << 20;
constexpr std::size_t copies_kept = 2;

/// Makes the folder when only its last part is missing.
Outcome make_folder(const std::string& folder);

/// The name of a network file system by its magic number (statfs), nothing for others. FUSE is
/// judged by its sub-type, e.g. "fuse.sshfs"; "fuseblk" and "fuse.fuse-overlayfs" are local.
std::optional<std::string> network_name(std::uint64_t magic, const std::string& type);
/// Refuses a folder on a network file system, by name.
Outcome refuse_network(const std::string& folder);

/// Takes the service's lock for life: a descriptor to close. Refuses when another process has it.
Result<int> take_service_lock(const std::string& folder);

/// Renames antherd.db, -wal and -shm to antherd-damaged-YYYY-MM-DD[-n].db; the new path.
Result<std::string> put_aside(const std::string& folder, Instant now);

/// What tells that a file was written or replaced; nothing when there is none.
struct FileState {
  std::uint64_t device = 0, inode = 0;
  std::int64_t size = 0, seconds = 0, nanoseconds = 0;
  bool operator==(const FileState&) const = default;
};
std::optional<FileState> file_state(const std::string& path);

/// Free bytes on the folder's disk; nothing when it does not say.
std::optional<std::int64_t> free_bytes(const std::string& folder);
/// Whether less than 1 MiB is free on the folder's disk.
bool has_no_room(const std::string& folder);
bool has_ballast(const std::string& folder);
Outcome make_ballast(const std::string& folder);
Result<bool> remove_ballast(const std::string& folder);

/// "antherd-copy-2026-W28.db"
std::string copy_name(Instant now);
/// Whole paths of the weekly copies, the newest first. Those of weeks after the one of `now` come
/// last: a clock that stood ahead named them, and they would be the newest for years.
std::vector<std::string> copies_in(const std::string& folder, Instant now);
/// Removes what a copy left that did not come to its end.
void remove_unfinished_copies(const std::string& folder);
/// Forces a finished copy to disk, gives it its name and removes all but it and the newest before
/// it; one that bears a later week's name goes first.
Outcome publish_copy(const std::string& part, const std::string& folder, const std::string& name);

/// Removes a file if it is there.
void remove_file(const std::string& path) noexcept;

}  // namespace antherd::store
