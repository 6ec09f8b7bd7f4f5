// One letter → one SMTP conversation → one receipt; or one .eml file. libcurl's easy interface,
// blocking, for the mail worker's thread (the final dot blocks while the server thinks).
#pragma once

#include <atomic>
#include <functional>
#include <string>

#include "core/failures/result.hpp"
#include "core/letters/letter.hpp"

namespace antherd::mail {

struct Server {
  std::string url;             // smtps://host:port, or smtp://host:port (STARTTLS required unless
                               // the host is loopback and `plain` is set)
  std::string user;            // empty: no login
  std::string password;        // a secret: never in a message, log or argument
  std::string from;            // address
  std::string ca_file;         // empty: the system's
  bool plain = false;          // loopback only
  Seconds response_timeout{600};
};

enum class How { accepted, wait, refused, in_doubt, settings_trouble };

struct Spoken {
  How how = How::wait;
  int code = 0;                // last SMTP reply code, 0 for none
  std::string sentence;        // for people, names server and recipient, never the password
  std::string transcript;      // for `mailtest`: the conversation without credentials
};

/// Sends one letter. `before_dot` is called once when the whole body has been read out and before
/// the final dot; when it returns false the conversation is aborted and the letter waits.
Spoken send(const Server& server, const letters::Letter& letter,
            const std::function<bool()>& before_dot, const std::atomic<bool>& stop);

/// Writes one letter as an .eml file (RFC 5322), by temporary file, fsync and rename.
/// @return the path
Result<std::string> write_eml(const std::string& folder, const std::string& from,
                              const letters::Letter& letter);

/// The letter in RFC 5322 form with CR LF: Date, From, To, Subject (RFC 2047 where needed),
/// Message-ID <id@host-of-from>, Auto-Submitted: auto-generated, MIME text/plain UTF-8.
/// Fails by name on a header value with a control character.
Result<std::string> as_rfc5322(const letters::Letter& letter, const std::string& from);

/// Whether an address may stand in a header and an SMTP command: one mailbox, no control
/// characters, no spaces, RFC 5321 lengths. The Failure says what is wrong.
Outcome check_address(const std::string& address);

}  // namespace antherd::mail
