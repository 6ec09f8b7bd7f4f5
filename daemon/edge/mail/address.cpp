// Which addresses may stand in a header and an SMTP command. See mail.hpp.
#include <algorithm>
#include <string_view>

#include "edge/mail/encoding.hpp"
#include "edge/mail/mail.hpp"

namespace antherd::mail {
namespace {

constexpr std::size_t longest_local = 64;     // RFC 5321 §4.5.3.1.1
constexpr std::size_t longest_address = 254;  // §4.5.3.1.3: a path of 256 with its brackets
constexpr std::size_t longest_label = 63;     // RFC 1035 §2.3.4

bool is_letter_or_digit(char byte) {
  return (byte >= 'a' && byte <= 'z') || (byte >= 'A' && byte <= 'Z') ||
         (byte >= '0' && byte <= '9');
}

/// Dots stand between parts, never at an end or beside another.
bool dots_stand_well(std::string_view text) {
  return !text.starts_with('.') && !text.ends_with('.') &&
         text.find("..") == std::string_view::npos;
}

std::string fault_of_local(std::string_view local) {
  if (local.empty()) return "there is nothing before the @";
  if (local.size() > longest_local) return "the part before the @ is longer than 64 characters";
  if (!dots_stand_well(local)) return "the part before the @ has a dot where none may stand";
  constexpr std::string_view marks = "!#$%&'*+-/=?^_`{|}~.";  // RFC 5322 §3.2.3, atext and dot
  for (char byte : local) {
    if (!is_letter_or_digit(byte) && marks.find(byte) == std::string_view::npos) {
      return std::string("the part before the @ holds \"") + byte + "\"";
    }
  }
  return "";
}

std::string fault_of_domain(std::string_view domain) {
  if (domain.empty()) return "there is nothing after the @";
  if (!dots_stand_well(domain)) return "the part after the @ has a dot where none may stand";
  while (!domain.empty()) {
    const std::string_view label = domain.substr(0, domain.find('.'));
    domain.remove_prefix(std::min(domain.size(), label.size() + 1));
    if (label.size() > longest_label) return "a part of the host is longer than 63 characters";
    if (label.starts_with('-') || label.ends_with('-')) {
      return "a part of the host begins or ends with a hyphen";
    }
    for (char byte : label) {
      if (!is_letter_or_digit(byte) && byte != '-') {
        return std::string("the part after the @ holds \"") + byte + "\"";
      }
    }
  }
  return "";
}

std::string fault_of(std::string_view address) {
  if (address.empty()) return "it is empty";
  if (has_control(address)) return "it holds a control character";
  if (std::any_of(address.begin(), address.end(),
                  [](char byte) { return static_cast<unsigned char>(byte) >= 0x80; })) {
    return "it is not ASCII (write a host with other letters in its xn-- form)";
  }
  if (address.find_first_of("<>,;\"() ") != std::string_view::npos) {
    return "it is more than one bare mailbox (no names, brackets, quotes, spaces or lists)";
  }
  if (address.size() > longest_address) return "it is longer than 254 characters";
  const std::size_t at = address.find('@');
  if (at == std::string_view::npos) return "it has no @";
  if (address.find('@', at + 1) != std::string_view::npos) return "it has more than one @";
  const std::string fault = fault_of_local(address.substr(0, at));
  return fault.empty() ? fault_of_domain(address.substr(at + 1)) : fault;
}

}  // namespace

Outcome check_address(const std::string& address) {
  const std::string fault = fault_of(address);
  if (fault.empty()) return Done{};
  return Failure{"use a mail address", tidy(address, 80), fault,
                 "write it like owner@larkspur.example"};
}

}  // namespace antherd::mail
