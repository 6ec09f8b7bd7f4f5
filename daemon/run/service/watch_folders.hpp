// inotify on the drop folders: a hint to look now. The scan every 60 s does not depend on it
// (network shares send no events).
#pragma once

#include <string>
#include <vector>

namespace antherd::service {

class FolderWatch {
 public:
  FolderWatch() = default;
  FolderWatch(const FolderWatch&) = delete;
  FolderWatch& operator=(const FolderWatch&) = delete;
  ~FolderWatch();

  /// Watches these folders instead of those before. @return whether there is a descriptor
  bool watch(const std::vector<std::string>& folders);
  int descriptor() const { return descriptor_; }
  /// Reads the events away.
  void drain();

 private:
  void close_descriptor();
  int descriptor_ = -1;
};

}  // namespace antherd::service
