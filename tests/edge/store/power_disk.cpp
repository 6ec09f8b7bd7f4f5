// See power_disk.hpp.
#include "power_disk.hpp"

#include <algorithm>
#include <cstring>
#include <new>
#include <stdexcept>

namespace ground {
namespace {

/// SQLite's view of one open file.
struct Handle {
  sqlite3_file base;
  PowerDisk* disk;
  std::string* name;
  int lock;  // SQLITE_LOCK_NONE … EXCLUSIVE
};
Handle& handle_of(sqlite3_file* file) { return *reinterpret_cast<Handle*>(file); }
PowerDisk& disk_of(sqlite3_vfs* vfs) { return *static_cast<PowerDisk*>(vfs->pAppData); }
PowerDisk::File& content_of(sqlite3_file* file) {
  return handle_of(file).disk->files()[*handle_of(file).name];
}

void put_into(std::string& bytes, const PowerDisk::Write& write) {
  const auto at = static_cast<std::size_t>(write.at);
  if (write.truncation) {
    bytes.resize(at);
    return;
  }
  if (bytes.size() < at + write.bytes.size()) bytes.resize(at + write.bytes.size());
  std::copy(write.bytes.begin(), write.bytes.end(),
            bytes.begin() + static_cast<std::ptrdiff_t>(at));
}

void set_lock(sqlite3_file* file, int lock) {
  auto& held = content_of(file).locks;
  int& mine = handle_of(file).lock;
  if (mine > SQLITE_LOCK_NONE) held.erase(held.find(mine));
  if (lock > SQLITE_LOCK_NONE) held.insert(lock);
  mine = lock;
}

int close_file(sqlite3_file* file) {
  set_lock(file, SQLITE_LOCK_NONE);
  delete handle_of(file).name;
  return SQLITE_OK;
}

int read_file(sqlite3_file* file, void* into, int size, sqlite3_int64 at) {
  if (handle_of(file).disk->dead() || handle_of(file).disk->fails()) return SQLITE_IOERR_READ;
  const std::string& bytes = content_of(file).now;
  const auto wanted = static_cast<std::size_t>(size);
  const auto from = std::min(static_cast<std::size_t>(at), bytes.size());
  const std::size_t there = std::min(wanted, bytes.size() - from);
  std::memcpy(into, bytes.data() + from, there);
  std::memset(static_cast<char*>(into) + there, 0, wanted - there);
  return there == wanted ? SQLITE_OK : SQLITE_IOERR_SHORT_READ;
}

int write_file(sqlite3_file* file, const void* bytes, int size, sqlite3_int64 at) {
  PowerDisk& disk = *handle_of(file).disk;
  if (disk.dead()) return SQLITE_IOERR_WRITE;
  if (disk.fails()) {
    disk.change(content_of(file),
                {false, at,
                 std::string(static_cast<const char*>(bytes), static_cast<std::size_t>(size) / 2)});
    return SQLITE_IOERR_WRITE;
  }
  if (disk.refusal() != SQLITE_OK) return disk.refusal();
  disk.change(
      content_of(file),
      {false, at, std::string(static_cast<const char*>(bytes), static_cast<std::size_t>(size))});
  return disk.count_down() ? SQLITE_OK : SQLITE_IOERR_WRITE;
}

int truncate_file(sqlite3_file* file, sqlite3_int64 size) {
  PowerDisk& disk = *handle_of(file).disk;
  if (disk.dead() || disk.fails()) return SQLITE_IOERR_TRUNCATE;
  if (disk.refusal() != SQLITE_OK) return SQLITE_IOERR_TRUNCATE;
  disk.change(content_of(file), {true, size, {}});
  return disk.count_down() ? SQLITE_OK : SQLITE_IOERR_TRUNCATE;
}

int sync_file(sqlite3_file* file, int) {
  Handle& handle = handle_of(file);
  if (handle.disk->fails()) return SQLITE_IOERR_FSYNC;
  // The power may go while the disk is still at it.
  if (handle.disk->dead() || !handle.disk->count_down()) return SQLITE_IOERR_FSYNC;
  handle.disk->force(*handle.name, content_of(file));
  return SQLITE_OK;
}

int file_size(sqlite3_file* file, sqlite3_int64* size) {
  *size = static_cast<sqlite3_int64>(content_of(file).now.size());
  return SQLITE_OK;
}

int lock_file(sqlite3_file* file, int wanted) {
  if (wanted <= handle_of(file).lock) return SQLITE_OK;
  auto others = content_of(file).locks;
  if (const int mine = handle_of(file).lock; mine > 0) others.erase(others.find(mine));
  const int highest = others.empty() ? SQLITE_LOCK_NONE : *others.rbegin();
  const int allowed = wanted == SQLITE_LOCK_SHARED     ? SQLITE_LOCK_RESERVED
                      : wanted == SQLITE_LOCK_RESERVED ? SQLITE_LOCK_SHARED
                                                       : SQLITE_LOCK_NONE;
  if (highest > allowed) return SQLITE_BUSY;
  set_lock(file, wanted);
  return SQLITE_OK;
}
int unlock_file(sqlite3_file* file, int kept) {
  if (kept < handle_of(file).lock) set_lock(file, kept);
  return SQLITE_OK;
}
int nobody_reserved(sqlite3_file*, int* answer) { return *answer = 0, SQLITE_OK; }
int no_control(sqlite3_file*, int, void*) { return SQLITE_NOTFOUND; }
int sector_size(sqlite3_file*) { return 4096; }
// As SQLite takes it for granted on Unix: a write changes no byte outside its range.
int characteristics(sqlite3_file*) { return SQLITE_IOCAP_POWERSAFE_OVERWRITE; }

int map_shared(sqlite3_file* file, int region, int size, int extend, void volatile** memory) {
  auto& regions = content_of(file).shared;
  const auto wanted = static_cast<std::size_t>(region);
  *memory = nullptr;
  if (regions.size() <= wanted) {
    if (extend == 0) return SQLITE_OK;
    while (regions.size() <= wanted) {
      regions.emplace_back(static_cast<std::size_t>(size), '\0');
    }
  }
  *memory = regions[wanted].data();
  return SQLITE_OK;
}
int lock_shared(sqlite3_file* file, int, int, int flags) {
  const bool wanted = (flags & SQLITE_SHM_LOCK) != 0 && (flags & SQLITE_SHM_EXCLUSIVE) != 0;
  return wanted && handle_of(file).disk->held() ? SQLITE_BUSY : SQLITE_OK;
}
void shared_barrier(sqlite3_file*) {}
int unmap_shared(sqlite3_file* file, int remove) {
  if (remove != 0) content_of(file).shared.clear();
  return SQLITE_OK;
}

const sqlite3_io_methods methods = [] {
  sqlite3_io_methods made{};
  made.iVersion = 2;
  made.xClose = close_file;
  made.xRead = read_file;
  made.xWrite = write_file;
  made.xTruncate = truncate_file;
  made.xSync = sync_file;
  made.xFileSize = file_size;
  made.xLock = lock_file;
  made.xUnlock = unlock_file;
  made.xCheckReservedLock = nobody_reserved;
  made.xFileControl = no_control;
  made.xSectorSize = sector_size;
  made.xDeviceCharacteristics = characteristics;
  made.xShmMap = map_shared;
  made.xShmLock = lock_shared;
  made.xShmBarrier = shared_barrier;
  made.xShmUnmap = unmap_shared;
  return made;
}();

int open_file(sqlite3_vfs* vfs, const char* name, sqlite3_file* file, int flags, int* granted) {
  file->pMethods = nullptr;
  PowerDisk& disk = disk_of(vfs);
  if (disk.dead() || name == nullptr) return SQLITE_CANTOPEN;
  if ((flags & SQLITE_OPEN_CREATE) == 0 && disk.files().count(name) == 0) return SQLITE_CANTOPEN;
  disk.files()[name];
  handle_of(file).disk = &disk;
  handle_of(file).lock = SQLITE_LOCK_NONE;
  handle_of(file).name = new std::string(name);
  file->pMethods = &methods;
  if (granted != nullptr) *granted = flags;
  return SQLITE_OK;
}

int delete_file(sqlite3_vfs* vfs, const char* name, int) {
  PowerDisk& disk = disk_of(vfs);
  if (disk.dead() || !disk.count_down()) return SQLITE_IOERR_DELETE;
  return disk.files().erase(name) == 1 ? SQLITE_OK : SQLITE_IOERR_DELETE_NOENT;
}

int is_there(sqlite3_vfs* vfs, const char* name, int, int* answer) {
  *answer = disk_of(vfs).files().count(name) == 1 ? 1 : 0;
  return SQLITE_OK;
}

int full_name(sqlite3_vfs*, const char* name, int size, char* into) {
  sqlite3_snprintf(size, into, "%s", name);
  return SQLITE_OK;
}

/// Whoever waits for a lock has waited: no test sleeps.
int no_sleep(sqlite3_vfs*, int microseconds) { return microseconds; }

}  // namespace

PowerDisk::PowerDisk(std::uint32_t seed) : random_(seed) {
  vfs_ = *sqlite3_vfs_find("unix");  // its clock and chance; the rest is ours
  vfs_.iVersion = 1;
  vfs_.szOsFile = sizeof(Handle);
  vfs_.pNext = nullptr;
  vfs_.zName = "antherd-power";
  vfs_.pAppData = this;
  vfs_.xOpen = open_file;
  vfs_.xDelete = delete_file;
  vfs_.xAccess = is_there;
  vfs_.xFullPathname = full_name;
  vfs_.xSleep = no_sleep;
  if (sqlite3_vfs_register(&vfs_, 1) != SQLITE_OK) throw std::runtime_error("no power disk");
}

PowerDisk::~PowerDisk() { sqlite3_vfs_unregister(&vfs_); }

bool PowerDisk::count_down() {
  if (left_ > 0 && --left_ == 0) dead_ = true;
  return !dead_;
}

bool PowerDisk::fails() {
  if (failing_ == 0) return false;
  if (sound_ > 0) return --sound_, false;
  --failing_;
  return true;
}

void PowerDisk::change(File& file, Write write) {
  put_into(file.now, write);
  file.pending.push_back(std::move(write));
}

bool PowerDisk::force(const std::string& name, File& file) {
  if (!lied_about_.empty() && name.ends_with(lied_about_)) return true;
  for (const Write& write : file.pending) put_into(file.durable, write);
  file.pending.clear();
  ++tally_.syncs;
  return true;
}

void PowerDisk::revive() {
  ++tally_.cuts;
  for (auto& [name, file] : files_) {
    for (Write& write : file.pending) {
      const auto fate = random_() % 3;
      if (fate == 0) {
        ++tally_.forgotten;
        continue;
      }
      if (fate == 1 && !write.truncation && write.bytes.size() > 1) {
        ++tally_.torn;
        write.bytes.resize(1 + random_() % (write.bytes.size() - 1));
      } else {
        ++tally_.kept;
      }
      put_into(file.durable, write);
    }
    file.pending.clear();
    file.shared.clear();
    file.now = file.durable;
  }
  dead_ = false;
  left_ = 0;
}

void PowerDisk::wake() {
  for (auto& [name, file] : files_) file.shared.clear();
  dead_ = false;
  left_ = 0;
}

}  // namespace ground
