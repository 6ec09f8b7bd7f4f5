// See conversation.hpp.
#include "edge/mail/conversation.hpp"

#include <charconv>

#include "edge/mail/encoding.hpp"

namespace antherd::mail {
namespace {

constexpr std::size_t longest_answer = 300;
constexpr std::size_t longest_transcript = 16 * 1024;
constexpr std::size_t shortest_secret = 3;  // replacing less would only garble the text

void replace_all(std::string& text, const std::string& what) {
  if (what.size() < shortest_secret) return;
  for (std::size_t at = 0; (at = text.find(what, at)) != std::string::npos;) {
    text.replace(at, what.size(), "***");
    at += 3;
  }
}

std::string base64_stem(const std::string& text) {
  std::string stem = base64(text);
  while (stem.ends_with('=')) stem.pop_back();
  return stem;
}

/// The characters of base64 that the secret alone decides when so many bytes stand before it, and
/// anything behind: a secret is found in whatever text it was encoded with.
std::string base64_core(const std::string& secret, std::size_t before) {
  const std::string coded = base64(std::string(before, '\0') + secret);
  const std::size_t first = (before * 8 + 5) / 6;
  const std::size_t last = (before + secret.size()) * 8 / 6;
  return last > first ? coded.substr(first, last - first) : "";
}

/// The code of a reply line, 0 when it is none.
int code_of(std::string_view line) {
  int code = 0;
  if (line.size() < 3) return 0;
  const auto [end, error] = std::from_chars(line.data(), line.data() + 3, code);
  return error == std::errc{} && end == line.data() + 3 && code >= 200 && code <= 599 ? code : 0;
}

bool begins_with_word(std::string_view text, std::string_view word) {
  return text.starts_with(word) &&
         (text.size() == word.size() || text[word.size()] == ' ' || text[word.size()] == '\r');
}

}  // namespace

Conversation::Conversation(const Server& server)
    : secrets_{server.password, base64_stem(server.password),
               base64_stem(std::string(1, '\0') + server.user + std::string(1, '\0') +
                           server.password)} {
  for (std::size_t before = 0; before < 3; ++before) {
    secrets_.push_back(base64_core(server.password, before));
  }
}

std::string Conversation::without_secrets(std::string text) const {
  for (const std::string& secret : secrets_) replace_all(text, secret);
  return text;
}

void Conversation::write_down(std::string_view mark, std::string_view text) {
  if (transcript_.size() > longest_transcript) return;
  // Before anything is cut: half a secret would not be known again.
  const std::string harmless = tidy(without_secrets(std::string(text)), longest_answer);
  transcript_ += std::string(mark) + " " + without_secrets(harmless) + "\n";
  if (transcript_.size() > longest_transcript) transcript_ += "* the rest is left out\n";
}

void Conversation::said(std::string_view text) {
  if (begins_with_word(text, "QUIT")) {  // what follows is no answer to anything
    write_down(">", text);
    parting_ = true;
    return;
  }
  if (step_ == Step::after_dot) return;
  if (in_login_) {
    write_down(">", "(credentials)");
    return;
  }
  if (begins_with_word(text, "EHLO") || begins_with_word(text, "HELO")) step_ = Step::hello;
  if (begins_with_word(text, "STARTTLS")) step_ = Step::starttls;
  if (begins_with_word(text, "AUTH")) step_ = Step::login;
  if (begins_with_word(text, "MAIL")) step_ = Step::sender;
  if (begins_with_word(text, "RCPT")) step_ = Step::recipient;
  if (begins_with_word(text, "DATA")) step_ = Step::body;
  answered_ = false;
  in_login_ = step_ == Step::login;
  if (in_login_) {  // "AUTH PLAIN", and never what may stand behind it
    const std::size_t end = text.find(' ', std::string_view("AUTH ").size());
    const bool more = end != std::string_view::npos;
    write_down(">", std::string(text.substr(0, end)) + (more ? " (credentials)" : ""));
  } else {
    write_down(">", text);
  }
}

void Conversation::heard(std::string_view text) {
  write_down("<", text);
  if (parting_) return;
  const int code = code_of(text);
  const std::string harmless = without_secrets(std::string(text));  // before it is cut
  if (partial_.empty()) {
    partial_ = harmless.substr(0, longest_answer);
  } else if (partial_.size() < longest_answer) {
    partial_ += " ";
    partial_ += harmless.substr(code == 0 ? 0 : std::min<std::size_t>(4, harmless.size()));
  }
  if (code == 0 || (text.size() > 3 && text[3] == '-')) return;  // more lines follow
  code_ = code;
  answered_ = true;
  answer_ = tidy(without_secrets(tidy(partial_, 2 * longest_answer)), longest_answer);
  partial_.clear();
  if (in_login_ && code / 100 != 3) {
    in_login_ = false;
    logged_in_ = code / 100 == 2;
  }
}

void Conversation::noted(std::string_view text) {
  // Only what helps a person who reads a failed conversation; the rest is the library's chatter.
  for (std::string_view word : {"SSL", "TLS", "subject", "issuer", "expire", "Trying", "refused",
                                "resolve", "Connected to", "imed out"}) {
    if (text.find(word) == std::string_view::npos) continue;
    write_down("*", text);
    return;
  }
}

void Conversation::last_dot(std::size_t bytes) {
  write_down(">", "(the letter, " + std::to_string(bytes) + " bytes, and the last dot)");
  step_ = Step::after_dot;
  answered_ = false;
  partial_.clear();
}

}  // namespace antherd::mail
