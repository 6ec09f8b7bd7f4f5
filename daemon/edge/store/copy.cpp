// The weekly copy: a store without samples, in one file that can be renamed to antherd.db.
#include <array>

#include "edge/store/inside.hpp"
#include "edge/store/schema.hpp"

namespace antherd::store {
namespace {

/// Whole tables, parents first. Triggers of the copy have run by the time that diary_version is
/// taken over.
constexpr std::array<std::array<const char*, 3>, 8> tables{
    {{"INSERT INTO main.station SELECT * FROM original.station",
      "SELECT count(*) FROM main.station", "SELECT count(*) FROM original.station"},
     {"INSERT INTO main.hour SELECT * FROM original.hour", "SELECT count(*) FROM main.hour",
      "SELECT count(*) FROM original.hour"},
     {"INSERT INTO main.irrigation SELECT * FROM original.irrigation",
      "SELECT count(*) FROM main.irrigation", "SELECT count(*) FROM original.irrigation"},
     {"INSERT INTO main.scouting SELECT * FROM original.scouting",
      "SELECT count(*) FROM main.scouting", "SELECT count(*) FROM original.scouting"},
     {"INSERT INTO main.said SELECT * FROM original.said", "SELECT count(*) FROM main.said",
      "SELECT count(*) FROM original.said"},
     {"INSERT INTO main.letter SELECT * FROM original.letter", "SELECT count(*) FROM main.letter",
      "SELECT count(*) FROM original.letter"},
     {"INSERT INTO main.line SELECT * FROM original.line", "SELECT count(*) FROM main.line",
      "SELECT count(*) FROM original.line"},
     {"INSERT INTO main.note SELECT * FROM original.note", "SELECT count(*) FROM main.note",
      "SELECT count(*) FROM original.note"}}};

void fill(Database& copy, const std::string& source) {
  migrate(copy, migrations());
  copy.use("ATTACH ? AS original").bind(source).run();
  copy.script("BEGIN");  // one look at all tables of the original
  for (const auto& [take, ours, theirs] : tables) {
    copy.use(take).run();
    if (copy.number(ours) != copy.number(theirs)) {
      throw Trouble{SQLITE_CORRUPT, "the copy lacks rows", "it was thrown away"};
    }
  }
  copy.script(
      "UPDATE main.diary_version SET number = (SELECT number FROM original.diary_version);"
      "UPDATE main.sqlite_sequence SET seq = (SELECT seq FROM original.sqlite_sequence AS theirs "
      "WHERE theirs.name = main.sqlite_sequence.name);"
      "COMMIT; DETACH original");
  const std::string answer = copy.text("PRAGMA quick_check(1)");
  if (answer != "ok") throw Trouble{SQLITE_CORRUPT, answer, "it was thrown away"};
}

}  // namespace

Outcome Store::copy_without_samples(Instant now) {
  const std::string& folder = inside_->options.folder;
  const std::string name = copy_name(now);
  const std::string part = folder + "/" + name + ".part";
  Outcome filled = inside_->attempt("make the weekly copy", [&] {
    if (!inside_->settled()) inside_->connect();
    remove_unfinished_copies(folder);
    const auto how =
        inside_->mode == Database::Mode::write ? Database::Mode::beside : inside_->mode;
    Database copy(part, Database::Mode::write, inside_->options.patience);
    // Nobody reads it before it is whole and forced to disk: no journal on disk is needed.
    copy.text("PRAGMA main.journal_mode = MEMORY");
    copy.script("PRAGMA main.synchronous = OFF");
    fill(copy, reading_uri(inside_->path, how));
    if (!inside_->settled()) {
      throw Trouble{SQLITE_BUSY, "the store changed under the copy", "it is made the next time"};
    }
    return Done{};
  });
  if (filled) filled = publish_copy(part, folder, name);
  if (!filled) remove_file(part);
  return filled;
}

}  // namespace antherd::store
