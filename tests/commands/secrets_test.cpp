// A canary for a password, and a mail server that tells all it heard: the canary is looked for in
// everything that leaves the process. The service and the commands are the real program.
#include <arpa/inet.h>
#include <netinet/in.h>
#include <signal.h>
#include <sys/socket.h>
#include <unistd.h>

#include <filesystem>
#include <fstream>

#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"
#include "support/paths.hpp"
#include "support/smtp_server.hpp"

using namespace ground;
using program::Service;

namespace {

const std::string user = "alerts@larkspur.example";
const std::string canary = "canary-Of-The-North-Bench-71";
// By hand: printf '…' | base64 (RFC 4648), with \0user\0password of RFC 4616 for the first.
const std::string plain_login =
    "AGFsZXJ0c0BsYXJrc3B1ci5leGFtcGxlAGNhbmFyeS1PZi1UaGUtTm9ydGgtQmVuY2gtNzE=";
const std::string password_in_base64 = "Y2FuYXJ5LU9mLVRoZS1Ob3J0aC1CZW5jaC03MQ==";

/// Every spelling of the secret, without the padding that a careless cut might drop.
const std::vector<std::string> spellings{
    canary, password_in_base64.substr(0, 36), plain_login.substr(0, 70),
    // what stands after the user in the login, whole groups of three bytes
    plain_login.substr(36, 34)};

/// A server that refuses the login and repeats what it was given, as some do for "debugging".
antherd::testing::SmtpScript telling_all() {
  antherd::testing::SmtpScript script;
  script.answers["AUTH"] = "535-5.7.8 you said AUTH PLAIN " + plain_login +
                           "\r\n535-5.7.8 that is " + user + " with " + canary +
                           "\r\n535 5.7.8 or " + password_in_base64;
  return script;
}

/// A farm that logs at the finest level, to its file.
struct Secret {
  Folder folder;
  antherd::testing::SmtpServer server{telling_all()};
  int page_port = free_port();
  std::string searched;  // everything looked through, for counting

  Secret() {
    Farm farm;
    farm.log = "file = \"antherd.log\"\nlevel = \"debug\"\n";
    farm.mail = "server = \"smtp://127.0.0.1:" + std::to_string(server.port()) +
                "\"\nplain = true\nuser = \"" + user + "\"\npassword_file = \"mail-password\"\n";
    farm.sown = farm_clock(now() - days{30}).substr(0, 10);
    farm.more = "\n[page]\nport = " + std::to_string(page_port) + "\n";
    folder.write("mail-password", canary + "\n");
    std::filesystem::permissions(folder / "mail-password", std::filesystem::perms::owner_read);
    settings_in(folder, farm);
  }

  static Instant now() {
    return std::chrono::floor<std::chrono::seconds>(std::chrono::system_clock::now());
  }
  static int free_port() {
    const int socket = ::socket(AF_INET, SOCK_STREAM | SOCK_CLOEXEC, 0);
    sockaddr_in address{};
    address.sin_family = AF_INET;
    address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
    socklen_t size = sizeof address;
    REQUIRE(::bind(socket, reinterpret_cast<sockaddr*>(&address), size) == 0);
    REQUIRE(::getsockname(socket, reinterpret_cast<sockaddr*>(&address), &size) == 0);
    ::close(socket);
    return ntohs(address.sin_port);
  }
  program::Ended run(std::vector<std::string> words) {
    words.insert(words.end(), {"--settings", folder / "antherd.toml"});
    return program::run(words);
  }
  void look_through(const std::string& what, const std::string& text) {
    searched += what + ": " + std::to_string(text.size()) + " bytes\n";
    for (const std::string& spelling : spellings) {
      INFO("in " << what << ": " << spelling);
      CHECK(text.find(spelling) == std::string::npos);
    }
  }
  std::string page() const {
    const int socket = ::socket(AF_INET, SOCK_STREAM | SOCK_CLOEXEC, 0);
    sockaddr_in address{};
    address.sin_family = AF_INET;
    address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
    address.sin_port = htons(static_cast<std::uint16_t>(page_port));
    std::string text;
    if (::connect(socket, reinterpret_cast<sockaddr*>(&address), sizeof address) == 0) {
      const std::string ask = "GET / HTTP/1.1\r\nHost: 127.0.0.1:" + std::to_string(page_port) +
                              "\r\nConnection: close\r\n\r\n";
      REQUIRE(::send(socket, ask.data(), ask.size(), MSG_NOSIGNAL) ==
              static_cast<ssize_t>(ask.size()));
      char bytes[4096];
      for (ssize_t n; (n = ::recv(socket, bytes, sizeof bytes, 0)) > 0;) {
        text.append(bytes, static_cast<std::size_t>(n));
      }
    }
    ::close(socket);
    return text;
  }
};

std::string bytes_of(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(file), {}};
}

}  // namespace

TEST_CASE("the canary is found where it must be: on the wire, and so the search can find it") {
  Secret secret;
  const auto tested = secret.run({"mailtest"});
  CHECK(tested.status == 1);
  CHECK(secret.server.wire().find(plain_login) != std::string::npos);
  for (const std::string& spelling : spellings) {
    CHECK((plain_login + " " + password_in_base64 + " " + canary).find(spelling) !=
          std::string::npos);
  }
}

TEST_CASE("mailtest explains a refused login without the password in any spelling") {
  Secret secret;
  const auto tested = secret.run({"mailtest"});
  INFO(tested.out << tested.err);
  CHECK(tested.out.find("refuses the login of " + user) != std::string::npos);
  CHECK(tested.out.find("The conversation:") != std::string::npos);
  CHECK(tested.out.find("that is " + user + " with ***") != std::string::npos);
  secret.look_through("mailtest", tested.out + tested.err);
}

TEST_CASE("the service's refused login is said at once, and the password stands nowhere") {
  Secret secret;
  Service service(secret.folder.path());
  REQUIRE(service.told("READY=1"));
  // The review by mail is a letter to carry: the login is refused, which the log says.
  const auto mailed = secret.run({"review", "--mail"});
  INFO(mailed.out << mailed.err);
  service.signal(SIGHUP);  // it looks at once
  const auto refused = [&] {
    return bytes_of(secret.folder / "antherd.log").find("refuses the login") != std::string::npos;
  };
  for (int i = 0; i < 100 && !refused(); ++i) service.told("STATUS=", std::chrono::seconds{2});
  REQUIRE(refused());

  const std::string process = "/proc/" + std::to_string(service.process()) + "/";
  for (const char* name : {"cmdline", "environ", "maps", "status", "limits"}) {
    secret.look_through(process + name, bytes_of(process + name));
  }
  const std::string limits = bytes_of(process + "limits");
  const std::string core =
      limits.substr(std::min(limits.find("Max core file size"), limits.size()));
  CHECK(core.substr(0, core.find('\n')).find(" 0 ") != std::string::npos);
  const std::string page = secret.page();
  CHECK(page.find("Larkspur Bench") != std::string::npos);
  secret.look_through("the page", page);
  const auto now = secret.run({"now"});
  INFO(now.out);
  CHECK(now.status == 3);
  CHECK(now.out.find("refuses the login") != std::string::npos);
  for (const std::vector<std::string>& words : {std::vector<std::string>{"check"},
                                                {"now"},
                                                {"letters"},
                                                {"letters", "--lines"},
                                                {"review"},
                                                {"hours", "north bench"},
                                                {"--help"}}) {
    const auto said = words[0] == "--help" ? program::run(words) : secret.run(words);
    secret.look_through(words[0], said.out + said.err);
  }
  service.signal(SIGTERM);
  REQUIRE(service.wait(std::chrono::seconds{20}));
  secret.look_through("standard error", service.words());
  int files = 0;
  for (const auto& entry : std::filesystem::recursive_directory_iterator(secret.folder.path())) {
    if (!entry.is_regular_file() || entry.path().filename() == "mail-password") continue;
    ++files;
    secret.look_through(entry.path().filename().string(), bytes_of(entry.path().string()));
  }
  INFO(secret.searched);
  CHECK(files >= 3);  // the settings, the log, the store
  CHECK(secret.searched.find("antherd.db: ") != std::string::npos);
  CHECK(secret.searched.find("antherd.log: ") != std::string::npos);
}

TEST_CASE("the shipped unit forbids core files") {
  const std::string unit = bytes_of(paths::source() + "/systemd/antherd.service");
  CHECK(unit.find("\nLimitCORE=0\n") != std::string::npos);
}
