// See watch_folders.hpp.
#include "run/service/watch_folders.hpp"

#include <sys/inotify.h>
#include <unistd.h>

#include <array>

namespace antherd::service {

FolderWatch::~FolderWatch() { close_descriptor(); }

void FolderWatch::close_descriptor() {
  if (descriptor_ >= 0) close(descriptor_);
  descriptor_ = -1;
}

bool FolderWatch::watch(const std::vector<std::string>& folders) {
  close_descriptor();
  if (folders.empty()) return false;
  descriptor_ = inotify_init1(IN_NONBLOCK | IN_CLOEXEC);
  if (descriptor_ < 0) return false;
  for (const std::string& folder : folders) {
    inotify_add_watch(descriptor_, folder.c_str(), IN_CLOSE_WRITE | IN_MODIFY | IN_MOVED_TO);
  }
  return true;
}

void FolderWatch::drain() {
  std::array<char, 8192> events{};
  while (read(descriptor_, events.data(), events.size()) > 0) {
  }
}

}  // namespace antherd::service
