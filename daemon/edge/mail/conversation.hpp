// One SMTP conversation as it is overheard: how far it came, what the server last answered, and a
// transcript without credentials. It must not know libcurl.
#pragma once

#include <string>
#include <string_view>

#include "edge/mail/mail.hpp"

namespace antherd::mail {

/// How far a conversation has come: what the next answer of the server is about.
enum class Step {
  line,       // name look-up, TCP, TLS of smtps, the server's greeting
  hello,      // EHLO
  starttls,   // STARTTLS and the TLS that follows
  login,      // AUTH
  sender,     // MAIL
  recipient,  // RCPT
  body,       // DATA and the text, up to but not including the last dot
  after_dot   // the last dot may have left
};

class Conversation {
 public:
  explicit Conversation(const Server& server);

  void said(std::string_view text);   // one command of ours
  void heard(std::string_view text);  // one line of the server's
  void noted(std::string_view text);  // a remark of the transport's, e.g. about certificates
  void last_dot(std::size_t bytes);   // our own mark: from here on a loss is a doubt

  Step step() const { return step_; }
  /// Whether the last command (or greeting, or last dot) has its complete answer.
  bool answered() const { return answered_; }
  bool parting() const { return parting_; }              // QUIT was said: the rest is politeness
  int code() const { return code_; }                     // of the last complete answer, 0 for none
  const std::string& answer() const { return answer_; }  // "535 5.7.8 …", tidy, ≤ 300 bytes
  bool logged_in() const { return logged_in_; }
  const std::string& transcript() const { return transcript_; }
  /// Text with the password, plain or in base64, replaced.
  std::string without_secrets(std::string text) const;

 private:
  void write_down(std::string_view mark, std::string_view text);

  std::vector<std::string> secrets_;
  Step step_ = Step::line;
  bool answered_ = false;
  bool in_login_ = false;  // from AUTH to its last answer nothing of ours is written down
  bool logged_in_ = false;
  bool parting_ = false;
  int code_ = 0;
  std::string partial_;  // lines of an answer that is not complete
  std::string answer_;
  std::string transcript_;
};

/// How the transport ended, in words that are not libcurl's.
enum class Transport {
  fine,
  no_name,        // no such host, or no name server
  no_connection,  // refused, no route
  too_slow,
  lost,         // any other loss of the line
  no_starttls,  // not offered, or refused
  no_tls,       // the other side speaks no TLS
  unknown_authority,
  wrong_name,
  certificate_expired,
  certificate_not_yet,  // mostly a clock of ours that is not set
  bad_certificate_file,
  bad_login,  // refused or no way in common
  bad_url,
  stopped  // we were told to stop
};

/// How it went: by the server's code first, then by the transport.
/// @param held_back  before_dot said no
Spoken judge(const Server& server, const std::string& recipient, const Conversation& talk,
             Transport transport, bool held_back);

/// "mail.larkspur.example:465": who is spoken of in sentences; the whole URL when it is none.
std::string place_of(const std::string& url);

}  // namespace antherd::mail
