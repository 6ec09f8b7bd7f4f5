// How a conversation went, and the one sentence that says so. The server's code is asked first,
// the transport second; our own mark before the last dot tells a loss from a doubt.
#include "edge/mail/conversation.hpp"

namespace antherd::mail {
namespace {

constexpr const char* again = "it is tried again";
constexpr const char* mend = "all letters are kept and tried once an hour";

struct Verdict {
  How how;
  About about;
  std::string sentence;
};

/// The words a sentence is made of.
struct Case {
  const Server& server;
  const Conversation& talk;
  std::string place;  // the server
  std::string to;     // the recipient
  std::string reply;  // "(550 5.1.1 no such user)"
};

Verdict wait(const Case& c, const std::string& what, About about = About::server) {
  return {How::wait, about, what + "; the letter to " + c.to + " waits and " + again};
}

/// Asked for one recipient the server may still take letters to others.
Verdict trouble(const Case& c, const std::string& what, const std::string& advice) {
  if (c.talk.step() == Step::recipient) {
    return {How::settings_trouble, About::recipient,
            what + "; " + advice + "; the letter to " + c.to + " is kept and tried once an hour"};
  }
  return {How::settings_trouble, About::server,
          what + "; " + advice + "; " + mend + ", the one to " + c.to + " among them"};
}

Verdict refused(const std::string& what, About about) {
  return {How::refused, about, what + "; it is put aside and not tried again"};
}

Verdict after_dot(const Case& c, Transport transport) {
  const int kind = c.talk.answered() ? c.talk.code() / 100 : 0;
  if (kind == 2) {
    return {How::accepted, About::letter,
            c.place + " accepted the letter to " + c.to + " " + c.reply};
  }
  if (kind == 4) {
    return wait(c, c.place + " read the letter but put it off " + c.reply,
                c.talk.code() == 421 ? About::server : About::letter);
  }
  if (kind == 5) {
    return refused(c.place + " refuses the letter to " + c.to + " " + c.reply, About::letter);
  }
  const std::string how = c.talk.answered() ? "gave an answer that is none " + c.reply
                          : transport == Transport::stopped
                              ? "had not answered when antherd stopped"
                          : transport == Transport::too_slow ? "gave no answer in time"
                                                             : "hung up without an answer";
  return {How::in_doubt, About::server,
          c.place + " was sent the whole letter to " + c.to + " but " + how +
              ", so it is not known whether it arrived"};
}

bool wants_login_or_tls(int code) {  // RFC 4954 §6, RFC 3207 §4
  return code == 530 || code == 534 || code == 535 || code == 538;
}

/// An answer to RCPT that speaks of who we are, not of the mailbox (RFC 3463: 5.7.x, security or
/// policy): without a login it is our settings that are wrong, and no letter may be lost for it.
bool speaks_of_us(const Case& c) {
  if (c.talk.logged_in()) return false;
  return !c.server.user.empty() || c.talk.answer().find(" 5.7.") != std::string::npos;
}

/// What a code of 400 or more means at the step where it came. Not after the last dot.
Verdict by_code(const Case& c) {
  const int code = c.talk.code();
  const bool later = code < 500;
  if (code == 421) return wait(c, c.place + " has no time for mail now " + c.reply);
  if (!later && wants_login_or_tls(code) && c.talk.step() != Step::login) {
    return trouble(c, c.place + " wants a login or an encrypted line first " + c.reply,
                   "check the server's address, user and password file");
  }
  switch (c.talk.step()) {
    case Step::login:
      if (later) return wait(c, c.place + " cannot check the login now " + c.reply);
      return trouble(c, c.place + " refuses the login of " + c.server.user + " " + c.reply,
                     "check the user and the password file");
    case Step::starttls:
      if (later) return wait(c, c.place + " cannot encrypt the line now " + c.reply);
      return trouble(c, c.place + " refuses to encrypt the line " + c.reply,
                     "use smtps:// or another port");
    case Step::sender:
      if (later) return wait(c, c.place + " takes no letters now " + c.reply);
      if (code == 552) {
        return refused(c.place + " finds the letter to " + c.to + " too large " + c.reply,
                       About::letter);
      }
      return trouble(c, c.place + " refuses the sender " + c.server.from + " " + c.reply,
                     "check from in the mail settings");
    case Step::recipient:
      if (later) return wait(c, c.place + " puts this recipient off " + c.reply, About::recipient);
      if (speaks_of_us(c)) {
        return trouble(c, c.place + " does not relay to " + c.to + " without a login " + c.reply,
                       "check the user and the password file");
      }
      return refused(c.place + " refuses the recipient " + c.to + " " + c.reply, About::recipient);
    case Step::body:
      if (later) return wait(c, c.place + " puts the letter off " + c.reply, About::letter);
      return refused(c.place + " refuses the letter to " + c.to + " " + c.reply, About::letter);
    default:
      break;
  }
  if (later) return wait(c, c.place + " takes no mail now " + c.reply);
  return trouble(c, c.place + " turns antherd away " + c.reply, "check the server's address");
}

Verdict by_transport(const Case& c, Transport transport) {
  const std::string line = "the line to " + c.place;
  switch (transport) {
    case Transport::no_name:
      return wait(c, "no address is known for the mail server " + c.place +
                         " (no such host, or no name server answers)");
    case Transport::no_connection:
      return wait(c, c.place + " cannot be reached (connection refused, or no route)");
    case Transport::too_slow:
      return wait(c, c.place + " did not answer in time");
    case Transport::stopped:
      return wait(c, "antherd stopped before " + c.place + " had the whole letter");
    case Transport::no_starttls:
      return trouble(c, c.place + " offers no STARTTLS and nothing is sent unencrypted",
                     "use smtps:// or another port");
    case Transport::no_tls:
      return trouble(c, c.place + " does not speak TLS as asked",
                     "a port for STARTTLS is written smtp://, one for TLS at once smtps://");
    case Transport::unknown_authority:
      return trouble(c, "the certificate of " + c.place + " is signed by an unknown authority",
                     "install its authority on this computer, or check the server's address");
    case Transport::wrong_name:
      return trouble(c, "the certificate of " + c.place + " belongs to another name",
                     "write the server's address as in its certificate");
    case Transport::certificate_expired:
      return trouble(c, "the certificate of " + c.place + " has expired",
                     "check this computer's clock, or ask who runs the server");
    case Transport::certificate_not_yet:
      return wait(c, "the certificate of " + c.place +
                         " is not valid yet (this computer's clock may not be set)");
    case Transport::bad_certificate_file:
      return trouble(c, "the file of certificate authorities for " + c.place + " cannot be read",
                     "check that it is there and readable");
    case Transport::bad_login:
      return trouble(c, c.place + " and antherd have no way of login in common",
                     "antherd knows PLAIN and LOGIN; check the server's address");
    case Transport::bad_url:
      return trouble(c, "the mail server's address " + c.place + " cannot be used",
                     "write smtps://host:port, or smtp://host:port for STARTTLS");
    case Transport::fine:
    case Transport::lost:
      break;
  }
  return wait(c, line + " broke before it had the whole letter");
}

}  // namespace

Spoken judge(const Server& server, const std::string& recipient, const Conversation& talk,
             Transport transport, bool held_back) {
  const std::string reply = "(" + talk.answer() + ")";
  const Case c{server, talk, place_of(server.url), recipient, reply};
  Verdict verdict{How::wait, About::server, ""};
  if (held_back) {
    verdict = wait(c, "the last dot was held back from " + c.place +
                          " because the letter's state could not be stored");
  } else if (talk.step() == Step::after_dot) {
    verdict = after_dot(c, transport);
  } else if (talk.answered() && talk.code() >= 400 && transport != Transport::stopped) {
    verdict = by_code(c);
  } else {
    verdict = by_transport(c, transport);
  }
  return Spoken{verdict.how, verdict.about, talk.code(), talk.without_secrets(verdict.sentence),
                talk.transcript()};
}

}  // namespace antherd::mail
