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
  std::string url;       // smtps://host:port, or smtp://host:port (STARTTLS required unless
                         // the host is loopback and `plain` is set)
  std::string user;      // empty: no login
  std::string password;  // a secret: never in a message, log or argument
  std::string from;      // address
  std::string ca_file;   // empty: the system's
  bool plain = false;    // loopback only
  Seconds response_timeout{600};  // for each answer; RFC 5321 §4.5.3.2 asks for 10 min after the
                                  // last dot, and less makes repeats
};

enum class How { accepted, wait, refused, in_doubt, settings_trouble };

/// Whom the answer was about: after a recipient's 450 the others may go on, after a server's 421
/// they may not (see outbox::Concern, which says the same on the other side).
enum class About { server, recipient, letter };

struct Spoken {
  How how = How::wait;
  About about = About::server;
  int code = 0;            // last SMTP reply code, 0 for none
  std::string sentence;    // for people, names server and recipient, never the password
  std::string transcript;  // for `mailtest`: the conversation without credentials
};

/// Sends one letter to its one recipient. Blocks for as long as the server takes, within `stop` and
/// the time limits of `server`; `stop` ends it within 0.2 s (a name look-up within 1 s). Never
/// falls back to an unencrypted line. `before_dot` is called once when the whole body has been read
/// out and before the final dot; when it returns false the conversation is aborted and the letter
/// waits.
Spoken send(const Server& server, const letters::Letter& letter,
            const std::function<bool()>& before_dot, const std::atomic<bool>& stop);

/// Writes one letter as an .eml file (RFC 5322) named after its id, by temporary file, fsync and
/// rename. The same letter written again is the same file; another letter's file is never touched:
/// an id that is taken gets "ID.2.eml". Makes the folder when only its last part is missing; made
/// by root it gets the owner and group of the folder above.
/// @return the path, or what stood in the way
Result<std::string> write_eml(const std::string& folder, const std::string& from,
                              const letters::Letter& letter);

/// The letter in RFC 5322 form with CR LF: Date, From, To, Subject (RFC 2047 where needed),
/// Message-ID <id@host-of-from>, Auto-Submitted: auto-generated (RFC 3834), MIME text/plain UTF-8.
/// ASCII text goes as it is (7bit), all other as quoted-printable, which arrives whole through
/// servers that do not announce 8BITMIME and survives signing.
/// Fails by name on a header value with a control character, an id that is no Message-ID, an
/// address that is none (check_address), a date outside the years 1 to 9999.
Result<std::string> as_rfc5322(const letters::Letter& letter, const std::string& from);

/// Whether an address may stand in a header and an SMTP command: one mailbox, no control
/// characters, no spaces, no quotes, ASCII, RFC 5321 lengths (local part 64, all 254). The Failure
/// says what is wrong.
Outcome check_address(const std::string& address);

}  // namespace antherd::mail
