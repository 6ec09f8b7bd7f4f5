// Small facts by name.
#include "edge/store/inside.hpp"

namespace antherd::store {

void Store::Inside::put(const Notes& notes) {
  Statement statement = database->use(
      "INSERT INTO note(key, value) VALUES(?, ?) "
      "ON CONFLICT(key) DO UPDATE SET value = excluded.value WHERE value IS NOT excluded.value");
  for (const auto& [key, value] : notes) statement.bind(key, value).run();
}

Result<std::optional<std::string>> Store::note(const std::string& key) const {
  return inside_->read("read a note", [&]() -> std::optional<std::string> {
    Statement row = inside_->database->use("SELECT value FROM note WHERE key = ?");
    if (!row.bind(key).step()) return std::nullopt;
    return row.text();
  });
}

Result<Notes> Store::notes_with_prefix(const std::string& prefix) const {
  return inside_->read("read notes", [&] {
    Notes found;
    Statement row =
        inside_->database->use("SELECT key, value FROM note WHERE key >= ? ORDER BY key");
    row.bind(prefix);
    while (row.step()) {
      std::string key = row.text();
      if (!key.starts_with(prefix)) break;
      found.emplace(std::move(key), row.text());
    }
    return found;
  });
}

Outcome Store::put_notes(const Notes& notes, std::span<const std::string> gone,
                         std::span<const std::string> misread) {
  return inside_->write_from_reserve("keep notes", [&] {
    Statement remove =
        inside_->database->use("DELETE FROM note WHERE substr(key, 1, length(?1)) = ?1");
    for (const std::string& prefix : gone) remove.bind(prefix).run();
    for (const std::string& station : misread) {
      const auto id = inside_->known_station(station);
      if (!id) continue;
      inside_->database->use("DELETE FROM sample WHERE station = ?").bind(*id).run();
      inside_->database->use("DELETE FROM sample_conflict WHERE station = ?").bind(*id).run();
    }
    inside_->put(notes);
    return Done{};
  });
}

Outcome Store::drop_notes(std::span<const std::string> keys) {
  return inside_->write("drop notes", [&] {
    Statement remove = inside_->database->use("DELETE FROM note WHERE key = ?");
    for (const std::string& key : keys) remove.bind(key).run();
    return Done{};
  });
}

}  // namespace antherd::store
