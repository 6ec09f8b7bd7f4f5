// Loaded before the C library by tests/faults/read_only.sh: while the file READ_ONLY_WHILE exists,
// every change below READ_ONLY_FOLDER fails with EROFS, as on a file system that turned read-only.
#include <dlfcn.h>
#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstdarg>
#include <cstdio>
#include <cstdlib>
#include <cstring>

namespace {

/// The C library's own function of that name.
template <typename Function>
Function* real(const char* name) {
  return reinterpret_cast<Function*>(dlsym(RTLD_NEXT, name));
}

bool below_folder(const char* path) {
  const char* folder = std::getenv("READ_ONLY_FOLDER");
  return folder != nullptr && std::strncmp(path, folder, std::strlen(folder)) == 0;
}

bool worn() {
  const char* file = std::getenv("READ_ONLY_WHILE");
  return file != nullptr && access(file, F_OK) == 0;
}

bool refused(const char* path) {
  const int before = errno;
  const bool no = worn() && below_folder(path);
  errno = no ? EROFS : before;
  return no;
}

bool refused(int file) {
  char link[64], path[4096];
  std::snprintf(link, sizeof link, "/proc/self/fd/%d", file);
  const int before = errno;
  const ssize_t length = readlink(link, path, sizeof path - 1);
  errno = before;
  if (length <= 0) return false;
  path[length] = '\0';
  return refused(path);
}

bool writes(int flags) { return (flags & (O_WRONLY | O_RDWR | O_CREAT | O_TRUNC)) != 0; }

}  // namespace

extern "C" {

#define OPEN(name)                                                         \
  int name(const char* path, int flags, ...) {                             \
    va_list more;                                                          \
    va_start(more, flags);                                                 \
    const mode_t mode = (flags & O_CREAT) != 0 ? va_arg(more, mode_t) : 0; \
    va_end(more);                                                          \
    if (writes(flags) && refused(path)) return -1;                         \
    static auto* const next = real<int(const char*, int, ...)>(#name);     \
    return next(path, flags, mode);                                        \
  }
OPEN(open)
OPEN(open64)
#undef OPEN

#define WRITE(name, offset)                                                           \
  ssize_t name(int file, const void* bytes, size_t count, offset at) {                \
    if (refused(file)) return -1;                                                     \
    static auto* const next = real<ssize_t(int, const void*, size_t, offset)>(#name); \
    return next(file, bytes, count, at);                                              \
  }
WRITE(pwrite, off_t)
WRITE(pwrite64, off64_t)
#undef WRITE

ssize_t write(int file, const void* bytes, size_t count) {
  if (refused(file)) return -1;
  static auto* const next = real<ssize_t(int, const void*, size_t)>("write");
  return next(file, bytes, count);
}

#define TRUNCATE(name, offset)                               \
  int name(int file, offset length) noexcept {               \
    if (refused(file)) return -1;                            \
    static auto* const next = real<int(int, offset)>(#name); \
    return next(file, length);                               \
  }
TRUNCATE(ftruncate, off_t)
TRUNCATE(ftruncate64, off64_t)
#undef TRUNCATE

int unlink(const char* path) noexcept {
  if (refused(path)) return -1;
  static auto* const next = real<int(const char*)>("unlink");
  return next(path);
}

int rename(const char* from, const char* to) noexcept {
  if (refused(from) || refused(to)) return -1;
  static auto* const next = real<int(const char*, const char*)>("rename");
  return next(from, to);
}

int mkdir(const char* path, mode_t mode) noexcept {
  if (refused(path)) return -1;
  static auto* const next = real<int(const char*, mode_t)>("mkdir");
  return next(path, mode);
}

}  // extern "C"
