// What is read from the disk: the file itself, the password and its guards.
#include <sys/stat.h>
#include <unistd.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>

#include "farm.hpp"
#include "run/settings/password.hpp"
#include "support/catch.hpp"

using namespace antherd;
namespace files = std::filesystem;

namespace {

/// A folder of its own that goes with the test.
class Folder {
 public:
  Folder() {
    std::string name = (files::temp_directory_path() / "antherd-settings-XXXXXX").string();
    REQUIRE(mkdtemp(name.data()) != nullptr);
    path_ = name;
  }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  ~Folder() {
    std::error_code ignored;
    files::remove_all(path_, ignored);
  }
  std::string operator/(const std::string& name) const { return path_ + "/" + name; }
  std::string put(const std::string& name, const std::string& text, mode_t mode = 0600) const {
    std::ofstream(*this / name, std::ios::binary) << text;
    REQUIRE(chmod((*this / name).c_str(), mode) == 0);
    return *this / name;
  }

 private:
  std::string path_;
};

const std::string secret = "correct horse";

std::string with_login() {
  return test::farm_with("from = ",
                         "user = \"alerts\"\npassword_file = \"mail-password\"\nfrom = ");
}

std::string only_complaint(const std::string& path) {
  const settings::Reading reading = settings::read_file(path);
  CHECK_FALSE(reading.settings);
  REQUIRE(reading.complaints.size() == 1);
  const std::string sentence = reading.complaints[0].sentence();
  CHECK(sentence.find(secret) == std::string::npos);
  return sentence;
}

}  // namespace

TEST_CASE("a password that only its owner may read is read, without its line end") {
  const Folder folder;
  folder.put("mail-password", secret + "\r\n");
  const settings::Reading reading =
      settings::read_file(folder.put("farm.toml", with_login(), 0644));
  REQUIRE(reading.settings);
  CHECK(reading.settings->mail->server->password == secret);
  // the drop folder does not exist yet: remarked, not refused
  CHECK(reading.remarks == std::vector<std::string>{"station \"bench\": there is no folder " +
                                                    (folder / "drop") + " yet"});
}

TEST_CASE("a password that group or others may touch is refused with the remedy") {
  const Folder folder;
  const std::string farm = folder.put("farm.toml", with_login(), 0644);
  for (const mode_t mode : {0640, 0604, 0620, 0777}) {
    const std::string path = folder.put("mail-password", secret, mode);
    CHECK(only_complaint(farm) == farm + ":9: [mail], password_file: got \"" + path +
                                      "\"; others than its owner may use it; run: chmod 600 " +
                                      path);
  }
}

TEST_CASE("passwords that cannot be one are refused by name") {
  const Folder folder;
  const std::string path = folder / "mail-password";
  CHECK(settings::read_password(path).failure().why == "No such file or directory");
  folder.put("mail-password", "");
  CHECK(settings::read_password(path).failure().why == "it is empty");
  folder.put("mail-password", "\n");
  CHECK(settings::read_password(path).failure().why == "it is empty");
  folder.put("mail-password", "one\ntwo\n");
  CHECK(settings::read_password(path).failure().why ==
        "it holds more than one line, or a control character");
  folder.put("mail-password", std::string(1001, 'x'));
  CHECK(settings::read_password(path).failure().why == "it is longer than 1000 bytes");
  folder.put("mail-password", std::string(1000, 'x'));
  CHECK(settings::read_password(path));
  files::remove(path);
  files::create_directory(path);
  CHECK(settings::read_password(path).failure().why == "it is not a plain file");
  files::remove(path);
  REQUIRE(mkfifo(path.c_str(), 0600) == 0);
  CHECK(settings::read_password(path).failure().why == "it is not a plain file");
}

TEST_CASE("the service manager's credentials come first and need no mode") {
  const Folder folder, credentials;
  folder.put("mail-password", "other");
  credentials.put("mail-password", secret, 0440);
  REQUIRE(setenv("CREDENTIALS_DIRECTORY", (credentials / "").c_str(), 1) == 0);
  const auto first = settings::read_password(folder / "mail-password");
  files::remove(credentials / "mail-password");
  const auto second = settings::read_password(folder / "mail-password");
  REQUIRE(unsetenv("CREDENTIALS_DIRECTORY") == 0);
  REQUIRE(first);
  CHECK(*first == secret);
  REQUIRE(second);
  CHECK(*second == "other");
}

TEST_CASE("files that are none are one complaint without a line") {
  const Folder folder;
  CHECK(only_complaint(folder / "farm.toml") ==
        (folder / "farm.toml") +
            ": it cannot be read: No such file or directory; name another "
            "file with --settings");
  CHECK(only_complaint(folder / "") ==
        (folder / "") + ": it is not a plain file; name another file with --settings");
  REQUIRE(mkfifo((folder / "pipe").c_str(), 0600) == 0);
  CHECK(only_complaint(folder / "pipe") ==
        (folder / "pipe") + ": it is not a plain file; name another file with --settings");
}

TEST_CASE("a certificate that is not there is refused") {
  const Folder folder;
  const std::string farm =
      folder.put("farm.toml", test::farm_with("from = ", "ca_file = \"our-ca.pem\"\nfrom = "));
  CHECK(only_complaint(farm) == farm + ":8: [mail], ca_file: got \"" + (folder / "our-ca.pem") +
                                    "\"; there is no such file");
}

TEST_CASE("relative paths hang from the settings file, also when that is named relatively") {
  const Folder folder;
  folder.put("farm.toml", test::farm_text, 0644);
  const files::path before = files::current_path();
  files::current_path(folder / "");
  const settings::Reading reading = settings::read_file("farm.toml");
  const files::path here = files::current_path();
  files::current_path(before);
  REQUIRE(reading.settings);
  CHECK(reading.settings->path == (here / "farm.toml").lexically_normal().string());
  CHECK(reading.settings->stations[0].drop->folder == (here / "drop").lexically_normal().string());
}

TEST_CASE("the named settings file is used, else one of two known places") {
  CHECK(settings::choose_file("mine.toml") == "mine.toml");
  const bool installed = files::exists("/etc/antherd/antherd.toml");
  CHECK(settings::choose_file("") == (installed ? "/etc/antherd/antherd.toml" : "./antherd.toml"));
}
