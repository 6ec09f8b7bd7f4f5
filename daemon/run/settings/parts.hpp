// The parts of the settings, each read by its own file; settings.cpp puts them together.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "run/settings/document.hpp"
#include "run/settings/settings.hpp"
#include "run/settings/table.hpp"

namespace antherd::settings {

/// What the readers of the parts share.
struct Work {
  const Node& root;
  Faults& faults;
  Settings& settings;  // grows part by part, in the order of the functions below
  std::string base;    // the folder from which relative paths hang
  bool ask_disk = false;
};

void read_farm(Work& work);
void read_store_and_log(Work& work);
void read_alerts(Work& work);
void read_diary(Work& work);
void read_page(Work& work);
void read_watch(Work& work);
void read_stations(Work& work);
void read_fields(Work& work);
void read_mail(Work& work);
void read_recipients(Work& work);
/// Remarks on what is allowed but odd: a longitude of the wrong sign, an unused station.
void remark_on(Work& work);

/// What one station's record looks like (the tables [station.drop] and [station.http]).
/// @param at  the key that names a value's place: "column" or "at"
void read_record(const Table& table, const std::string& at, const Calendar& farm_zone,
                 weather::Station& station, station::RecordForm& record);

/// The traits of a crop type: one of the three, or a [crop.NAME] table.
std::optional<crop::Traits> traits_named(const Work& work, const std::string& name);
/// Complains of faulty [crop.NAME] tables, used or not.
void check_crops(Work& work);

/// A [name] table that may stand once; complains where it was written as [[name]].
std::optional<Table> section(Work& work, const std::string& name);
/// The [[name]] tables; complains where one was written as [name].
std::vector<const Node*> sections(Work& work, const std::string& name);
/// "[[station]] bench", or "[[station]] 2" for the second of those without a usable name.
std::string label_of(const Node& node, const std::string& table, const std::string& key,
                     std::size_t index);
/// The names of all [[table]]s, usable or not.
std::vector<std::string> names_of(const Work& work, const std::string& table);
/// Complains of names that differ from an earlier one by capitals only, or not at all.
void refuse_repeats(Work& work, const std::string& table, const std::string& key);

/// A path that hangs from the settings file's folder.
std::string hung(const Work& work, const std::string& path);
/// A path as a setting: not empty, no control characters; already hung. Relative for `where`.
std::optional<std::string> path_of(const Work& work, const Table& table, const std::string& key,
                                   bool required);

}  // namespace antherd::settings
