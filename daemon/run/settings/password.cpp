// See password.hpp.
#include "run/settings/password.hpp"

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstdlib>
#include <cstring>
#include <filesystem>

namespace antherd::settings {
namespace {

constexpr std::size_t longest_password = 1000;

/// An open file that closes itself.
class File {
 public:
  explicit File(const std::string& path)
      : descriptor_(open(path.c_str(), O_RDONLY | O_CLOEXEC | O_NONBLOCK | O_NOCTTY)) {}
  File(const File&) = delete;
  File& operator=(const File&) = delete;
  ~File() {
    if (descriptor_ >= 0) close(descriptor_);
  }
  int descriptor() const { return descriptor_; }

 private:
  int descriptor_;
};

Result<std::string> password_in(const std::string& path, bool guarded) {
  const auto refused = [&](std::string why, std::string next) {
    return Failure{"read the mail password", path, std::move(why), std::move(next)};
  };
  const File file(path);
  if (file.descriptor() < 0) {
    return refused(std::strerror(errno), "put the password there as one line");
  }
  struct stat status {};
  if (fstat(file.descriptor(), &status) != 0) return refused(std::strerror(errno), "");
  if (!S_ISREG(status.st_mode)) return refused("it is not a plain file", "");
  if (!guarded && (status.st_mode & (S_IRWXG | S_IRWXO)) != 0) {
    return refused("others than its owner may use it", "run: chmod 600 " + path);
  }
  std::string text(longest_password + 2, '\0');
  const ssize_t length = read(file.descriptor(), text.data(), text.size());
  if (length < 0) return refused(std::strerror(errno), "");
  text.resize(static_cast<std::size_t>(length));
  if (text.ends_with('\n')) text.pop_back();
  if (text.ends_with('\r')) text.pop_back();
  if (text.empty()) return refused("it is empty", "put the password there as one line");
  if (text.size() > longest_password) return refused("it is longer than 1000 bytes", "");
  for (const char letter : text) {
    const auto byte = static_cast<unsigned char>(letter);
    if (byte < 0x20 || byte == 0x7F) {
      return refused("it holds more than one line, or a control character",
                     "put the password there as one line");
    }
  }
  return text;
}

}  // namespace

Result<std::string> read_password(const std::string& path) {
  const char* const credentials = std::getenv("CREDENTIALS_DIRECTORY");
  if (credentials != nullptr && *credentials != '\0') {
    const auto guarded =
        std::filesystem::path(credentials) / std::filesystem::path(path).filename();
    std::error_code trouble;
    if (std::filesystem::exists(guarded, trouble)) return password_in(guarded.string(), true);
  }
  return password_in(path, false);
}

}  // namespace antherd::settings
