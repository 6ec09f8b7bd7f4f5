// A letter as it leaves the core: words and identity, no transport.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/alerts/decide.hpp"
#include "core/units/time.hpp"

namespace antherd::letters {

enum class Units { us, metric };
enum class Language { english, spanish };

/// One person who is told.
struct Recipient {
  std::string address;
  std::vector<std::string> fields;  // empty: all
  bool brief = false;               // 160 characters
  Language language = Language::english;
  std::optional<std::pair<int, int>> quiet;  // minutes after farm midnight, from…to
};

/// One finished letter to one recipient. Lines end in "\n" here; the mail edge makes CR LF.
struct Letter {
  std::string id;         // stable identity, becomes the Message-ID's left side; [a-z0-9.-]
  std::string recipient;  // address
  std::string subject;    // ≤ 70 characters, no control characters
  std::string body;       // UTF-8, lines ≤ 78 columns
  std::string kind;       // "heat", "humid_spell", …, "daily", "weekly"
  alerts::Severity severity = alerts::Severity::minor;
  Instant decided;                     // when it was decided: its Date
  std::optional<Instant> valid_until;  // 72 h for alerts
  std::string still;   // one sentence for a delayed copy: what held when it was decided
  bool raise = false;  // a rise in severity always goes
};

}  // namespace antherd::letters
