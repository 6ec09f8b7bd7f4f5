// A new store where one had been: the diary is the only thing that nobody can read again, so it is
// taken back from the weekly copy, and people are told once.
#include <charconv>
#include <filesystem>
#include <sstream>

#include "edge/store/inside.hpp"
#include "edge/store/schema.hpp"

namespace antherd::store {
namespace {

constexpr const char* key = "beginning";
constexpr const char* told = "told";

std::string text_of(const Beginning& beginning) {
  const auto copied = beginning.copied.value_or(Instant{}).time_since_epoch().count();
  return std::to_string(copied) + ' ' + std::to_string(beginning.irrigations) + ' ' +
         std::to_string(beginning.notes) + ' ' + beginning.aside;
}

std::optional<Beginning> beginning_of(const std::string& text) {
  if (text == told) return std::nullopt;
  std::istringstream words(text);
  long long copied = 0;
  Beginning beginning;
  words >> copied >> beginning.irrigations >> beginning.notes >> beginning.aside;
  if (copied > 0) beginning.copied = Instant{Seconds{copied}};
  return beginning;
}

/// Takes the diary of an attached copy over, in a transaction.
void take_diary(Database& database, Beginning& beginning) {
  if (database.number("PRAGMA copy.application_id") != application_id ||
      database.text("PRAGMA copy.quick_check(1)") != "ok") {
    throw Trouble{SQLITE_CORRUPT, "the weekly copy is damaged", {}};
  }
  // Beside what somebody may have written into the new store already.
  database.script(R"sql(
INSERT INTO main.irrigation(field, start, "end", method, depth, "set")
  SELECT field, start, "end", method, depth, "set" FROM copy.irrigation EXCEPT
  SELECT field, start, "end", method, depth, "set" FROM main.irrigation ORDER BY 1, 2;
INSERT INTO main.scouting(field, date, stage, began, disease, seed_set, seed_looked, note)
  SELECT field, date, stage, began, disease, seed_set, seed_looked, note FROM copy.scouting EXCEPT
  SELECT field, date, stage, began, disease, seed_set, seed_looked, note FROM main.scouting
  ORDER BY 1, 2;
)sql");
  beginning.irrigations = static_cast<int>(database.number("SELECT count(*) FROM copy.irrigation"));
  beginning.notes = static_cast<int>(database.number("SELECT count(*) FROM copy.scouting"));
}

}  // namespace

Outcome Store::Inside::begin_anew() {
  const auto copies = copies_in(options.folder, options.now);
  const auto undone = attempt("see how the store began", [&] {
    // A copy is made after the first start was noted: without that note this store is a new one,
    // even when an earlier start died before it could say so.
    const bool begun = database->number("SELECT count(*) FROM note WHERE key = 'first_start'") > 0;
    const bool noted = database->number("SELECT count(*) FROM note WHERE key = 'beginning'") > 0;
    return !noted && (anew || (!begun && !copies.empty()));
  });
  if (!undone) return undone.failure();
  if (!*undone) return Done{};
  const auto note_down = [&](Beginning beginning, const std::string* copy) {
    if (aside) beginning.aside = std::filesystem::path(*aside).filename().string();
    return attempt("take the diary back from the weekly copy", [&] {
      if (copy != nullptr) {
        database->use("ATTACH ? AS copy").bind(reading_uri(*copy, Database::Mode::still)).run();
      }
      try {
        Transaction transaction(*database);
        if (copy != nullptr) take_diary(*database, beginning);
        put(Notes{{key, text_of(beginning)}});
        transaction.commit();
      } catch (const Trouble&) {
        database->rollback();
        if (copy != nullptr) database->script("DETACH copy");
        throw;
      }
      if (copy != nullptr) database->script("DETACH copy");
      return Done{};
    });
  };
  for (const std::string& copy : copies) {
    Beginning beginning;
    if (const auto state = file_state(copy)) beginning.copied = Instant{Seconds{state->seconds}};
    if (note_down(beginning, &copy)) return Done{};
  }
  return note_down({}, nullptr);
}

Result<std::optional<Beginning>> Store::beginning() const {
  const auto text = note(key);
  if (!text) return text.failure();
  if (!*text) return std::optional<Beginning>();
  return beginning_of(**text);
}

Notes Store::beginning_told() { return {{key, told}}; }

bool Store::has_copy_of_week(Instant now) const {
  return file_state(inside_->options.folder + "/" + copy_name(now)).has_value();
}

}  // namespace antherd::store
