// Who is told, and through which server: [mail] and [[recipient]].
#include <sys/stat.h>

#include <algorithm>

#include "edge/clock/nearest.hpp"
#include "run/settings/parts.hpp"
#include "run/settings/password.hpp"
#include "run/settings/quantities.hpp"
#include "run/settings/url.hpp"

namespace antherd::settings {
namespace {

constexpr std::size_t longest_address = 254;  // RFC 5321 §4.5.3.1.3, less the angle brackets

std::optional<std::string> address_of(const Table& table, const std::string& key) {
  const Wanted wanted{"one mail address", key + " = \"owner@larkspur.example\""};
  const auto address = table.name(key, longest_address, wanted, true);
  if (!address) return {};
  const Outcome fine = mail::check_address(*address);
  if (fine) return address;
  table.refuse(key, {wanted.allowed + " (" + fine.failure().why + ")", wanted.example});
  return {};
}

/// "Mon 06:00"; the day in three letters or whole.
std::optional<WeeklyTime> weekly_from(std::string_view text) {
  static const std::vector<std::string> days{"Monday", "Tuesday",  "Wednesday", "Thursday",
                                             "Friday", "Saturday", "Sunday"};
  const std::size_t blank = std::min(text.find(' '), text.size());
  const std::string_view day = text.substr(0, blank);
  const Result<int> minute = parse_clock(text.substr(blank));
  for (std::size_t i = 0; minute && i < days.size(); ++i) {
    if (same_word(day, days[i]) || same_word(day, days[i].substr(0, 3))) {
      return WeeklyTime{static_cast<int>(i) + 1, *minute};
    }
  }
  return {};
}

/// "22:00-05:30"
std::optional<std::pair<int, int>> quiet_from(std::string_view text) {
  const std::size_t dash = text.find('-');
  if (dash == std::string_view::npos) return {};
  const Result<int> from = parse_clock(text.substr(0, dash));
  const Result<int> to = parse_clock(text.substr(dash + 1));
  if (!from || !to || *from == *to) return {};
  return std::pair{*from, *to};
}

/// The server's address with its port; complains of what must not be.
std::string read_url(const Table& table, bool plain) {
  const Wanted wanted{"an address that begins with smtps:// or smtp://, with host and port alone",
                      "server = \"smtps://mail.larkspur.example:465\""};
  const auto written = table.name("server", 300, wanted, true);
  if (!written) return "";
  const Result<Url> url = parse_url(*written);
  const bool known = url && (url->scheme == "smtps" || url->scheme == "smtp") &&
                     (url->path.empty() || url->path == "/");
  if (!known) {
    const std::string why = url ? "" : " (" + url.failure().why + ")";
    const bool secret = written->find('@') != std::string::npos;
    table.complain("server", secret ? "another text" : in_quotes(*written),
                   {wanted.allowed + why, wanted.example});
    return "";
  }
  if (plain && (url->scheme != "smtp" || !is_loopback(url->host))) {
    table.object("plain", "true with the server " + in_quotes(*written),
                 "only a server on this very computer (smtp://localhost) may go without "
                 "encryption; remove the line");
  }
  // The usual ports: submission over TLS (RFC 8314), submission (RFC 6409), relay (RFC 5321).
  const int usual = url->scheme == "smtps" ? 465 : plain ? 25 : 587;
  return url->scheme + "://" + url->host + ":" + std::to_string(url->port != 0 ? url->port : usual);
}

void read_login(Work& work, const Table& table, mail::Server& server) {
  const Wanted user{"the login name at the mail server", "user = \"alerts@larkspur.example\""};
  server.user = table.name("user", longest_address, user).value_or("");
  const auto path = path_of(work, table, "password_file", false);
  if (table.has("user") && !table.has("password_file")) {
    table.miss("password_file",
               {"the file with the password of user", "password_file = \"mail-password\""});
  }
  if (table.has("password_file") && !table.has("user")) table.miss("user", user);
  if (!path || !work.ask_disk) return;
  Result<std::string> password = read_password(*path);
  if (password) {
    server.password = *std::move(password);
  } else {
    const Failure& why = password.failure();
    table.object("password_file", in_quotes(why.on_what),
                 why.why + (why.what_next.empty() ? "" : "; " + why.what_next));
  }
}

void read_server(Work& work, const Table& table, Mail& mail) {
  mail::Server& server = mail.server.emplace();
  server.plain = table.truth("plain").value_or(false);
  server.url = read_url(table, server.plain);
  server.from = mail.from;
  read_login(work, table, server);
  server.ca_file = path_of(work, table, "ca_file", false).value_or("");
  struct stat status {};
  if (work.ask_disk && !server.ca_file.empty() && stat(server.ca_file.c_str(), &status) != 0) {
    table.object("ca_file", in_quotes(server.ca_file), "there is no such file");
  }
}

void read_fields_of(const Work& work, const Table& table, letters::Recipient& recipient) {
  const Wanted wanted{"a list of field names; without the key: all fields",
                      "fields = [\"north bench\"]"};
  const auto fields = table.texts("fields", wanted);
  if (!fields) return;
  if (fields->empty()) table.refuse("fields", wanted);
  const std::vector<std::string> known = names_of(work, "field");
  for (const std::string& name : *fields) {
    if (std::find(known.begin(), known.end(), name) != known.end()) continue;
    const auto near = clock::nearest_to(name, known);
    table.object("fields", in_quotes(name),
                 near.empty() ? "there is no field of that name"
                              : "there is no field of that name; did you mean " +
                                    in_quotes(near.front()) + "?");
  }
  recipient.fields = *fields;
}

void read_recipient(Work& work, const Node& node, std::size_t index) {
  const std::string label = label_of(node, "[[recipient]]", "address", index);
  const Table table(node, "[[recipient]]", label, "", work.faults);
  letters::Recipient recipient;
  recipient.address = address_of(table, "address").value_or("");
  read_fields_of(work, table, recipient);
  recipient.brief = table.truth("brief").value_or(false);
  const auto language = table.text("language", {"en", "language = \"en\""});
  if (language && *language == "es") {
    table.object("language", in_quotes(*language), "letters in Spanish are not in this version",
                 "language = \"en\"");
  } else if (language && *language != "en") {
    table.refuse("language", {"en", "language = \"en\""});
  }
  const Wanted wanted{"two different clock times from 00:00 to 23:59, from-to",
                      "quiet = \"22:00-05:30\""};
  if (const auto quiet = table.text("quiet", wanted)) {
    recipient.quiet = quiet_from(*quiet);
    if (!recipient.quiet) table.refuse("quiet", wanted);
  }
  work.settings.recipients.push_back(std::move(recipient));
}

}  // namespace

void read_mail(Work& work) {
  const auto table = section(work, "mail");
  if (!table) return;
  Mail mail;
  mail.from = address_of(*table, "from").value_or("");
  if (table->has("server") && table->has("folder")) {
    table->object("folder", "both server and folder", "letters go one way; keep one of them");
  } else if (table->has("folder")) {
    mail.folder = path_of(work, *table, "folder", true).value_or("");
    for (const char* key : {"user", "password_file", "plain", "ca_file"}) {
      if (table->has(key)) table->object(key, "the key with a folder", "it needs a server");
    }
  } else {
    read_server(work, *table, mail);
  }
  const Wanted weekly{"a weekday and a clock time", "weekly = \"Mon 06:00\""};
  if (const auto written = table->text("weekly", weekly)) {
    const auto time = weekly_from(*written);
    if (time) mail.weekly = *time;
    if (!time) table->refuse("weekly", weekly);
  }
  const Wanted daily{"a clock time from 00:00 to 23:59", "daily = \"19:00\""};
  mail.daily_minute =
      table->quantity("daily", parse_clock, 0, 1439, daily).value_or(mail.daily_minute);
  mail.at_most_per_day = table
                             ->whole("at_most_per_day", 1, 1000,
                                     {"a whole number from 1 to 1000", "at_most_per_day = 12"})
                             .value_or(mail.at_most_per_day);
  if (work.root.find("recipient") == nullptr) {
    work.faults.complaints.push_back(
        {work.faults.file, table->line(), "[mail]", "", "at least one [[recipient]] table below it",
         "[[recipient]] with address = \"owner@larkspur.example\" below it", ""});
  }
  work.settings.mail = std::move(mail);
}

void read_recipients(Work& work) {
  const auto nodes = sections(work, "recipient");
  if (!nodes.empty() && work.root.find("mail") == nullptr) {
    work.faults.complaints.push_back(
        {work.faults.file, nodes.front()->line, "[[recipient]]", "a recipient without [mail]", "",
         "[mail] with server = \"smtps://mail.larkspur.example:465\" and from = "
         "\"alerts@larkspur.example\" below it",
         "letters need a [mail] table with a server or a folder"});
  }
  for (std::size_t i = 0; i < nodes.size(); ++i) read_recipient(work, *nodes[i], i);
  refuse_repeats(work, "recipient", "address");
}

}  // namespace antherd::settings
