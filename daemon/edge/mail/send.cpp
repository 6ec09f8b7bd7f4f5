// One letter over SMTP by libcurl's easy interface. See mail.hpp; how a conversation is understood
// stands in conversation.hpp.
#include <curl/curl.h>
#include <sys/socket.h>
#include <unistd.h>

#include <algorithm>
#include <condition_variable>
#include <cstring>
#include <memory>
#include <mutex>
#include <string_view>
#include <thread>
#include <vector>

#include "edge/mail/conversation.hpp"
#include "edge/mail/encoding.hpp"
#include "edge/mail/mail.hpp"

namespace antherd::mail {
namespace {

constexpr long long connect_limit_us = 30'000'000;  // TCP alone; a greeting may take longer
constexpr std::chrono::milliseconds watch_every{100};
constexpr int farewell_watches = 20;  // 2 s for the answer to QUIT
// Over TLS, or on loopback, the plain ways are as safe as any, and the only ones that every server
// understands alike. Left to itself libcurl picks GSSAPI for a user with an @.
constexpr const char* ways_of_login = "AUTH=PLAIN;AUTH=LOGIN";

/// libcurl looks at `stop` only once a second while it waits for an answer. The watch shuts the
/// sockets down instead, which ends any wait at once; and it bounds the farewell.
class Watch {
 public:
  explicit Watch(const std::atomic<bool>& stop) : stop_(stop), thread_([this] { run(); }) {}
  Watch(const Watch&) = delete;
  Watch& operator=(const Watch&) = delete;
  ~Watch() {
    {
      const std::lock_guard lock(mutex_);
      over_ = true;
    }
    wake_.notify_all();
    thread_.join();
  }
  /// The outcome is known; what follows is politeness.
  void farewell() {
    const std::lock_guard lock(mutex_);
    farewell_ = true;
  }
  int open(const curl_sockaddr& address) {
    const int socket = ::socket(address.family, address.socktype | SOCK_CLOEXEC, address.protocol);
    const std::lock_guard lock(mutex_);
    if (socket >= 0) sockets_.push_back(socket);
    return socket;
  }
  int close(int socket) {
    const std::lock_guard lock(mutex_);
    std::erase(sockets_, socket);
    return ::close(socket);
  }

 private:
  void run() {
    std::unique_lock lock(mutex_);
    int farewells = 0;
    while (!wake_.wait_for(lock, watch_every, [this] { return over_; })) {
      if (farewell_) ++farewells;
      if (!stop_ && farewells < farewell_watches) continue;
      for (int socket : sockets_) ::shutdown(socket, SHUT_RDWR);
    }
  }

  const std::atomic<bool>& stop_;
  std::mutex mutex_;
  std::condition_variable wake_;
  std::vector<int> sockets_;
  bool over_ = false;
  bool farewell_ = false;
  std::thread thread_;  // last: it uses all the others
};

/// What the callbacks share.
struct Call {
  const std::atomic<bool>& stop;
  const std::function<bool()>& before_dot;
  Conversation& talk;
  std::string_view text;
  Watch* watch = nullptr;
  std::size_t read = 0;
  CURL* handle = nullptr;
  bool asked = false;
  bool held_back = false;
  bool too_slow = false;
};

bool may_finish(Call& call) {
  try {
    return !call.before_dot || call.before_dot();
  } catch (...) {  // it may not pass through C
    return false;
  }
}

std::size_t read_text(char* to, std::size_t size, std::size_t count, void* pointer) {
  Call& call = *static_cast<Call*>(pointer);
  if (call.stop) return CURL_READFUNC_ABORT;
  const std::size_t part = std::min(size * count, call.text.size() - call.read);
  if (part > 0) {
    std::memcpy(to, call.text.data() + call.read, part);
    call.read += part;
    return part;
  }
  // libcurl asks again only when all before is on the wire; on 0 it sends the last dot.
  if (!call.asked) {
    call.asked = true;
    call.held_back = !may_finish(call);
    if (!call.held_back) call.talk.last_dot(call.text.size());
  }
  return call.held_back ? CURL_READFUNC_ABORT : 0;
}

int look_up(void* pointer, curl_off_t, curl_off_t, curl_off_t, curl_off_t) {
  Call& call = *static_cast<Call*>(pointer);
  curl_off_t connected = 0, total = 0;
  curl_easy_getinfo(call.handle, CURLINFO_CONNECT_TIME_T, &connected);
  curl_easy_getinfo(call.handle, CURLINFO_TOTAL_TIME_T, &total);
  if (connected == 0 && total > connect_limit_us) call.too_slow = true;
  return call.stop || call.too_slow ? 1 : 0;
}

int overhear(CURL*, curl_infotype kind, char* data, std::size_t size, void* pointer) {
  Call& call = *static_cast<Call*>(pointer);
  Conversation& talk = call.talk;
  const std::string_view text(data, size);
  if (kind == CURLINFO_HEADER_IN) talk.heard(text);
  if (kind == CURLINFO_HEADER_OUT) talk.said(text);
  if (kind == CURLINFO_TEXT) talk.noted(text);
  if (talk.parting()) call.watch->farewell();
  return 0;
}

std::size_t ignore(char*, std::size_t size, std::size_t count, void*) { return size * count; }

curl_socket_t open_socket(void* pointer, curlsocktype, curl_sockaddr* address) {
  return static_cast<Watch*>(pointer)->open(*address);
}

int close_socket(void* pointer, curl_socket_t socket) {
  return static_cast<Watch*>(pointer)->close(socket);
}

struct Address {
  std::string scheme, host, port, user, path;
};

std::string part_of(CURLU* url, CURLUPart part) {
  char* text = nullptr;
  if (curl_url_get(url, part, &text, CURLU_DEFAULT_PORT) != CURLUE_OK) return "";
  std::string copy(text);
  curl_free(text);
  return copy;
}

/// The parts of smtp://host:port; nothing when it is no such address, or holds more than that.
std::optional<Address> parse(const std::string& text) {
  if (has_control(text)) return {};
  const std::unique_ptr<CURLU, decltype(&curl_url_cleanup)> url(curl_url(), &curl_url_cleanup);
  if (curl_url_set(url.get(), CURLUPART_URL, text.c_str(), 0) != CURLUE_OK) return {};
  const Address address{part_of(url.get(), CURLUPART_SCHEME), part_of(url.get(), CURLUPART_HOST),
                        part_of(url.get(), CURLUPART_PORT), part_of(url.get(), CURLUPART_USER),
                        part_of(url.get(), CURLUPART_PATH)};
  const bool known = address.scheme == "smtp" || address.scheme == "smtps";
  if (!known || !address.user.empty() || (address.path != "/" && !address.path.empty())) return {};
  return address;
}

bool is_loopback(const std::string& host) {
  return host == "localhost" || host == "[::1]" || host.starts_with("127.");
}

Transport transport_of_certificate(CURL* handle) {
  // OpenSSL's numbers: 9 not yet valid, 10 expired. A chain that is sound but bears another name
  // never gets as far as a number: it stays at 0, or at the 1 that libcurl begins with.
  long verdict = 0;
  curl_easy_getinfo(handle, CURLINFO_SSL_VERIFYRESULT, &verdict);
  if (verdict == 0 || verdict == 1) return Transport::wrong_name;
  if (verdict == 9) return Transport::certificate_not_yet;
  if (verdict == 10) return Transport::certificate_expired;
  return Transport::unknown_authority;
}

Transport transport_of(CURLcode code, CURL* handle, const Call& call, std::string_view remark) {
  if (call.too_slow) return Transport::too_slow;
  if (call.stop && code != CURLE_OK) return Transport::stopped;
  switch (code) {
    case CURLE_OK:
      return Transport::fine;
    case CURLE_COULDNT_RESOLVE_HOST:
    case CURLE_COULDNT_RESOLVE_PROXY:
      return Transport::no_name;
    case CURLE_COULDNT_CONNECT:
      return Transport::no_connection;
    case CURLE_OPERATION_TIMEDOUT:
      return Transport::too_slow;
    case CURLE_USE_SSL_FAILED:
    case CURLE_REMOTE_ACCESS_DENIED:
      return Transport::no_starttls;
    case CURLE_PEER_FAILED_VERIFICATION:
      return transport_of_certificate(handle);
    case CURLE_SSL_CACERT_BADFILE:
      return Transport::bad_certificate_file;
    case CURLE_LOGIN_DENIED:
    case CURLE_AUTH_ERROR:
      return Transport::bad_login;
    case CURLE_UNSUPPORTED_PROTOCOL:
    case CURLE_URL_MALFORMAT:
      return Transport::bad_url;
    case CURLE_SSL_CONNECT_ERROR:
      // the other side answered in the clear; any other end of a handshake is a lost line
      return remark.find("wrong version number") != std::string_view::npos ? Transport::no_tls
                                                                           : Transport::lost;
    default:
      return Transport::lost;
  }
}

template <class Value>
void set(CURL* handle, CURLoption option, Value value) {
  ANTHERD_CHECK(curl_easy_setopt(handle, option, value) == CURLE_OK);
}

void set_line(CURL* handle, const Server& server, const Address& address) {
  set(handle, CURLOPT_URL, server.url.c_str());
  set(handle, CURLOPT_PROTOCOLS_STR, "smtp,smtps");
  set(handle, CURLOPT_PROXY, "");  // none, whatever the environment says
  set(handle, CURLOPT_NOSIGNAL, 1L);
  set(handle, CURLOPT_QUICK_EXIT, 1L);  // a dead name server must not hold the shutdown
  const bool in_the_clear = server.plain && is_loopback(address.host);
  set(handle, CURLOPT_USE_SSL, static_cast<long>(in_the_clear ? CURLUSESSL_NONE : CURLUSESSL_ALL));
  set(handle, CURLOPT_SSLVERSION, static_cast<long>(CURL_SSLVERSION_TLSv1_2));
  set(handle, CURLOPT_SSL_VERIFYPEER, 1L);
  set(handle, CURLOPT_SSL_VERIFYHOST, 2L);
  if (!server.ca_file.empty()) set(handle, CURLOPT_CAINFO, server.ca_file.c_str());
  const long limit = static_cast<long>(server.response_timeout.count());
  set(handle, CURLOPT_SERVER_RESPONSE_TIMEOUT, limit);
  set(handle, CURLOPT_CONNECTTIMEOUT, limit);  // up to the login; TCP has 30 s, see look_up
  set(handle, CURLOPT_TIMEOUT, 3 * limit);     // a server that drips: RFC 5321 sums to 30 min
  if (!server.user.empty()) {
    set(handle, CURLOPT_USERNAME, server.user.c_str());
    set(handle, CURLOPT_PASSWORD, server.password.c_str());
    set(handle, CURLOPT_LOGIN_OPTIONS, ways_of_login);
  }
}

void set_callbacks(CURL* handle, Call& call, Watch& watch) {
  set(handle, CURLOPT_UPLOAD, 1L);
  set(handle, CURLOPT_READFUNCTION, &read_text);
  set(handle, CURLOPT_READDATA, static_cast<void*>(&call));
  set(handle, CURLOPT_WRITEFUNCTION, &ignore);
  set(handle, CURLOPT_NOPROGRESS, 0L);
  set(handle, CURLOPT_XFERINFOFUNCTION, &look_up);
  set(handle, CURLOPT_XFERINFODATA, static_cast<void*>(&call));
  set(handle, CURLOPT_VERBOSE, 1L);
  set(handle, CURLOPT_DEBUGFUNCTION, &overhear);
  set(handle, CURLOPT_DEBUGDATA, static_cast<void*>(&call));
  set(handle, CURLOPT_OPENSOCKETFUNCTION, &open_socket);
  set(handle, CURLOPT_OPENSOCKETDATA, static_cast<void*>(&watch));
  set(handle, CURLOPT_CLOSESOCKETFUNCTION, &close_socket);
  set(handle, CURLOPT_CLOSESOCKETDATA, static_cast<void*>(&watch));
}

void prepare_library() {
  static const CURLcode prepared = curl_global_init(CURL_GLOBAL_DEFAULT);
  ANTHERD_CHECK(prepared == CURLE_OK);
}

Spoken converse(const Server& server, const Address& address, const letters::Letter& letter,
                Conversation& talk, Call& call) {
  Watch watch(call.stop);  // outlives the handle, whose sockets it closes
  const std::unique_ptr<CURL, decltype(&curl_easy_cleanup)> handle(curl_easy_init(),
                                                                   &curl_easy_cleanup);
  ANTHERD_CHECK(handle != nullptr);
  call.handle = handle.get();
  call.watch = &watch;
  char remark[CURL_ERROR_SIZE] = "";
  set(handle.get(), CURLOPT_ERRORBUFFER, remark);
  set_line(handle.get(), server, address);
  set_callbacks(handle.get(), call, watch);
  const std::string from = "<" + server.from + ">", to = "<" + letter.recipient + ">";
  const std::unique_ptr<curl_slist, decltype(&curl_slist_free_all)> recipients(
      curl_slist_append(nullptr, to.c_str()), &curl_slist_free_all);
  set(handle.get(), CURLOPT_MAIL_FROM, from.c_str());
  set(handle.get(), CURLOPT_MAIL_RCPT, recipients.get());
  const CURLcode code = curl_easy_perform(handle.get());
  const Transport transport = transport_of(code, handle.get(), call, remark);
  watch.farewell();
  return judge(server, letter.recipient, talk, transport, call.held_back);
}

}  // namespace

std::string place_of(const std::string& url) {
  const std::optional<Address> address = parse(url);
  if (address) return address->host + ":" + address->port;
  // what stands before an @ may be a password
  return "\"" + tidy(url.substr(url.rfind('@') + 1), 80) + "\"";
}

Spoken send(const Server& server, const letters::Letter& letter,
            const std::function<bool()>& before_dot, const std::atomic<bool>& stop) {
  prepare_library();
  Conversation talk(server);
  const std::optional<Address> address = parse(server.url);
  if (!address) return judge(server, tidy(letter.recipient, 80), talk, Transport::bad_url, false);
  const Result<std::string> text = as_rfc5322(letter, server.from);
  if (!text) {
    const bool sender = !check_address(server.from);
    return Spoken{sender ? How::settings_trouble : How::refused,
                  sender ? About::server : About::letter, 0,
                  place_of(server.url) + " was not asked: " + text.failure().sentence(), ""};
  }
  Call call{stop, before_dot, talk, *text};
  return converse(server, *address, letter, talk, call);
}

}  // namespace antherd::mail
