// A letter in the form of RFC 5322. See mail.hpp.
#include <string_view>

#include "edge/mail/encoding.hpp"
#include "edge/mail/mail.hpp"

namespace antherd::mail {
namespace {

constexpr std::size_t longest_id = 200;  // leaves room in a header line and in a file name
constexpr std::size_t longest_subject = 500;

Failure failure(const letters::Letter& letter, std::string why) {
  return Failure{"write a letter", tidy(letter.id, 80) + " to " + tidy(letter.recipient, 80),
                 std::move(why), "the letter is kept and named in the weekly log"};
}

/// An id that may stand before the @ of a Message-ID and name a file: letters, digits and . _ + -,
/// not beginning or ending with a dot, nor with two in a row.
bool is_identity(std::string_view id) {
  constexpr std::string_view allowed =
      "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789._+-";
  return !id.empty() && id.size() <= longest_id &&
         id.find_first_not_of(allowed) == std::string_view::npos && !id.starts_with('.') &&
         !id.ends_with('.') && id.find("..") == std::string_view::npos;
}

}  // namespace

Result<std::string> as_rfc5322(const letters::Letter& letter, const std::string& from) {
  if (auto sender = check_address(from); !sender) return sender.failure();
  if (auto recipient = check_address(letter.recipient); !recipient) return recipient.failure();
  if (!is_identity(letter.id)) return failure(letter, "its id cannot be a Message-ID");
  if (has_control(letter.subject)) {
    return failure(letter, "its subject holds a control character");
  }
  if (letter.subject.size() > longest_subject) return failure(letter, "its subject is too long");
  const auto day = std::chrono::floor<std::chrono::days>(letter.decided);
  const int year{CivilDate(day).year()};
  if (year < 1 || year > 9999) return failure(letter, "its date is outside the years 1 to 9999");

  const std::string text = repaired_utf8(letter.body);
  const std::optional<std::string> seven_bit = as_seven_bit(text);
  std::string message;
  message += "Date: " + date_text(letter.decided) + "\r\n";
  message += "From: <" + from + ">\r\n";
  message += "To: <" + letter.recipient + ">\r\n";
  message += header_line("Subject", letter.subject);
  message += "Message-ID: <" + letter.id + from.substr(from.find('@')) + ">\r\n";
  message += "Auto-Submitted: auto-generated\r\n";
  message += "MIME-Version: 1.0\r\n";
  message += "Content-Type: text/plain; charset=utf-8\r\n";
  message += std::string("Content-Transfer-Encoding: ") +
             (seven_bit ? "7bit" : "quoted-printable") + "\r\n";
  message += "\r\n";
  message += seven_bit ? *seven_bit : as_quoted_printable(text);
  return message;
}

}  // namespace antherd::mail
