// Letters as files, for farms whose mail is fetched from a folder. See mail.hpp.
#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <fstream>
#include <sstream>
#include <system_error>

#include "edge/mail/mail.hpp"

namespace antherd::mail {
namespace {

constexpr int most_namesakes = 1000;

std::string reason() { return std::system_category().message(errno); }

Failure failure(const std::string& path, std::string why) {
  return Failure{"write a letter into the mail folder", path, std::move(why),
                 "the letter waits and is tried again"};
}

/// A file descriptor that closes itself.
class Descriptor {
 public:
  explicit Descriptor(int number) : number_(number) {}
  Descriptor(const Descriptor&) = delete;
  Descriptor& operator=(const Descriptor&) = delete;
  ~Descriptor() {
    if (number_ >= 0) ::close(number_);
  }
  int number() const { return number_; }

 private:
  int number_;
};

/// Addressee and identity of a message: what makes it this letter and no other.
std::string identity_of(std::istream& message) {
  std::string identity;
  for (std::string line; std::getline(message, line) && line != "\r" && !line.empty();) {
    if (line.starts_with("To: ") || line.starts_with("Message-ID: ")) identity += line + "\n";
  }
  return identity;
}

/// The path that is free or already holds this very letter; empty when there is none.
std::string own_path(const std::string& folder, const std::string& id, const std::string& message) {
  std::istringstream stream(message);
  const std::string identity = identity_of(stream);
  for (int n = 1; n <= most_namesakes; ++n) {
    const std::string path = folder + "/" + id + (n == 1 ? "" : "." + std::to_string(n)) + ".eml";
    struct stat status {};
    if (::lstat(path.c_str(), &status) != 0) return errno == ENOENT ? path : "";
    if (!S_ISREG(status.st_mode)) continue;
    std::ifstream present(path, std::ios::binary);
    if (identity_of(present) == identity) return path;
  }
  return "";
}

/// Writes all of it down to the disk. @return why not, or an empty string
std::string write_through(const std::string& path, const std::string& text) {
  ::unlink(path.c_str());  // what a power cut may have left
  const Descriptor file(
      ::open(path.c_str(), O_WRONLY | O_CREAT | O_EXCL | O_NOFOLLOW | O_CLOEXEC, 0644));
  if (file.number() < 0) return reason();
  for (std::size_t done = 0; done < text.size();) {
    const ssize_t count = ::write(file.number(), text.data() + done, text.size() - done);
    if (count < 0 && errno == EINTR) continue;
    if (count < 0) return reason();
    done += static_cast<std::size_t>(count);
  }
  return ::fsync(file.number()) == 0 ? "" : reason();
}

/// Makes the folder where only it is missing. A folder that root makes (a test by hand before the
/// service wrote one) belongs to whom the folder above belongs: the service's user must write
/// there.
/// @return why not, or an empty string
std::string make_folder(const std::string& folder) {
  if (::mkdir(folder.c_str(), 0755) != 0) {
    if (errno == EEXIST) return "";
    if (errno != ENOENT) return reason();
    return "the folder above it is not there; where it is the service's own it is made at the "
           "service's first start: start the service first";
  }
  struct stat above {};
  if (::geteuid() != 0 || ::stat((folder + "/..").c_str(), &above) != 0) return "";
  return ::chown(folder.c_str(), above.st_uid, above.st_gid) == 0 ? "" : reason();
}

}  // namespace

Result<std::string> write_eml(const std::string& folder, const std::string& from,
                              const letters::Letter& letter) {
  const Result<std::string> message = as_rfc5322(letter, from);
  if (!message) return message.failure();
  if (const std::string why = make_folder(folder); !why.empty()) return failure(folder, why);
  const Descriptor directory(::open(folder.c_str(), O_RDONLY | O_DIRECTORY | O_CLOEXEC));
  if (directory.number() < 0) return failure(folder, reason());

  const std::string path = own_path(folder, letter.id, *message);
  if (path.empty()) return failure(folder + "/" + letter.id + ".eml", "the name is not free");
  const std::string temporary = folder + "/." + letter.id + ".part";
  std::string why = write_through(temporary, *message);
  if (why.empty() && ::rename(temporary.c_str(), path.c_str()) != 0) why = reason();
  // the name itself must reach the disk too, or a power cut takes the letter back
  if (why.empty() && ::fsync(directory.number()) != 0) why = reason();
  if (!why.empty()) {
    ::unlink(temporary.c_str());
    return failure(path, why);
  }
  return path;
}

}  // namespace antherd::mail
