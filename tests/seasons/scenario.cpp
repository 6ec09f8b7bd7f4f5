// See scenario.hpp.
#include "seasons/scenario.hpp"

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "run/settings/settings.hpp"

namespace antherd::seasons {
namespace {

using std::chrono::days;

/// What `other` says replaces what `plain` says; tables are gone into, lists replaced whole.
void put_over(toml::table& plain, const toml::table& other) {
  for (const auto& [key, value] : other) {
    const auto* into = plain[key].as_table();
    if (value.is_table() && into != nullptr) {
      put_over(*plain[key].as_table(), *value.as_table());
    } else {
      plain.insert_or_assign(key, value);
    }
  }
}

/// Tables by name as the settings want them: a list, each with its name. A further one is like
/// the plain one but for what it says.
toml::array named(const toml::table& tables, const std::string& plain_name) {
  toml::array list;
  const toml::table* const plain = tables[plain_name].as_table();
  for (const auto& [key, value] : tables) {
    toml::table table = plain == nullptr ? toml::table{} : *plain;
    put_over(table, *value.as_table());
    table.insert_or_assign("name", std::string(key.str()));
    list.push_back(std::move(table));
  }
  return list;
}

std::string settings_text(const toml::table& all) {
  toml::table settings;
  for (const char* key : {"farm", "mail", "alerts", "crop"}) {
    if (const auto* table = all[key].as_table()) settings.insert_or_assign(key, *table);
  }
  settings.insert_or_assign("store", toml::table{{"folder", "store"}});
  settings.insert_or_assign("log", toml::table{{"file", "antherd.log"}, {"level", "error"}});
  settings.insert_or_assign("recipient", toml::array{*all["recipient"].as_table()});
  toml::array stations = named(*all["station"].as_table(), "bench");
  for (toml::node& node : stations) {
    toml::table& drop = *(*node.as_table())["drop"].as_table();
    drop.insert_or_assign("folder", (*node.as_table())["name"].value_or(std::string{}));
  }
  settings.insert_or_assign("station", stations);
  settings.insert_or_assign("field", named(*all["field"].as_table(), "north bench"));
  std::ostringstream text;
  text << settings << "\n";
  return text.str();
}

/// One season's file as it is read.
class Reading {
 public:
  Reading(const toml::table& all, std::string name) : all_(all) {
    scenario_.name = std::move(name);
    scenario_.settings = settings_text(all);
    const auto read = settings::read_text(scenario_.settings, "/nowhere/antherd.toml", false);
    if (!read.settings) throw std::runtime_error(read.complaints.front().sentence());
    scenario_.calendar = read.settings->calendar;
    settings_ = *read.settings;
  }

  Scenario read() {
    read_times();
    read_sky();
    read_sources();
    read_diary();
    read_expectations();
    for (const auto& [key, value] : all_) {
      const std::string name(key.str());
      static const std::set<std::string> known{
          "farm",      "mail",    "alerts", "crop",       "recipient", "station", "field",
          "season",    "weather", "spell",  "hour",       "rain",      "source",  "silent",
          "late_file", "stuck",   "note",   "sprinklers", "expect"};
      if (!known.contains(name)) throw std::runtime_error(where(name) + ": nobody reads it");
    }
    note_busy_days();
    return std::move(scenario_);
  }

 private:
  std::string where(const std::string& table) const { return scenario_.name + " [" + table + "]"; }
  Instant at(CivilTime reading) const { return scenario_.calendar.at(reading); }
  Stretch stretch(Table& table) const { return {at(table.clock("from")), at(table.clock("to"))}; }
  template <class Read>
  void each(const std::string& key, Read read) {
    const auto* list = all_[key].as_array();
    if (list == nullptr) return;
    for (const toml::node& node : *list) {
      Table table(*node.as_table(), where(key));
      read(table);
      table.end();
    }
  }

  void read_times() {
    Table season(*all_["season"].as_table(), where("season"));
    scenario_.weather_from = scenario_.calendar.start_of(season.day("weather_from"));
    scenario_.installed = at(season.clock("installed"));
    scenario_.until = scenario_.calendar.start_of(season.day("until"));
    scenario_.looks_every = season.duration("looks_every");
    season.end();
  }

  void read_sky() {
    Sky& sky = scenario_.sky;
    Table weather(*all_["weather"].as_table(), where("weather"));
    sky.fog_coast = weather.text("model") == "fog coast";
    sky.midsummer = weather.celsius("midsummer");
    sky.midwinter = weather.celsius("midwinter");
    sky.warmest = weather.day("warmest");
    sky.range = weather.difference("night_to_afternoon");
    sky.day_to_day = weather.difference("day_to_day");
    sky.dew_below_night = weather.difference("dew_below_night");
    sky.seed = static_cast<std::uint64_t>(weather.whole("seed", 1));
    weather.end();
    sky.longitude = settings_.stations.front().station.place.longitude.value;
    each("spell", [&](Table& t) {
      sky.spells.push_back({t.day("first"), t.day("last"), t.celsius_if("night"),
                            t.celsius_if("afternoon"), t.difference_if("dew_below_night")});
    });
    each("hour", [&](Table& t) {
      sky.hours.push_back({at(t.clock("at")), t.celsius_if("temperature"), t.number("humidity")});
    });
    each("rain", [&](Table& t) { sky.rain.push_back({stretch(t), t.millimetres("each_hour")}); });
  }

  void read_sources() {
    for (const auto& setting : settings_.stations) {
      Source source;
      source.station = setting.station.name;
      source.every = setting.station.interval;
      if (const auto* own = all_["source"][source.station].as_table()) {
        Table table(*own, where("source"));
        source.warmer_by = table.difference_if("warmer_by").value_or(0);
        source.whole_degrees = table.yes("whole_degrees");
        table.end();
      }
      scenario_.sources.push_back(source);
    }
    each("silent", [&](Table& t) { source(t).silent.push_back(stretch(t)); });
    each("late_file", [&](Table& t) {
      source(t).late.push_back({stretch(t), at(t.clock("arrives"))});
    });
    each("stuck", [&](Table& t) { source(t).stuck.push_back({stretch(t), t.text("value")}); });
  }
  Source& source(Table& table) {
    const std::string name = table.text("station", "bench");
    for (Source& source : scenario_.sources) {
      if (source.station == name) return source;
    }
    table.refuse("station", "there is none of that name");
  }

  void read_diary() {
    each("note", [&](Table& t) {
      field::Scouting note;
      note.field = t.text("field", "north bench");
      note.date = t.day("date");
      if (t.has("stage")) {
        note.stage = field::stage_from_word(t.text("stage"));
        if (!note.stage) t.refuse("stage", "no such stage");
      }
      note.began = t.yes("began");
      if (t.has("disease")) note.disease = t.yes("disease");
      const auto written = t.clock_if("written").value_or(CivilTime(note.date) + one_hour * 20);
      scenario_.entries.push_back({at(written), {{}, {note}}});
    });
    each("sprinklers", [&](Table& t) { read_sprinklers(t); });
    std::stable_sort(scenario_.entries.begin(), scenario_.entries.end(),
                     [](const Entry& a, const Entry& b) { return a.at < b.at; });
  }

  /// An irrigation on each evening, or every n-th, written down at its end.
  void read_sprinklers(Table& t) {
    const CivilDay first = t.day("first"), last = t.day("last");
    const auto from = t.minutes("from"), to = t.minutes("to");
    const int every = t.whole("every", 1);
    field::Irrigation set;
    set.field = t.text("field", "north bench");
    const std::string method = t.text("method", "overhead");
    for (const auto m : {field::Method::overhead, field::Method::drip, field::Method::furrow}) {
      if (method == field::name_of(m)) set.method = m;
    }
    if (t.has("depth")) set.depth = Millimetre(t.millimetres("depth"));
    const auto written = t.clock_if("written");
    for (CivilDay day = first; day <= last; day += days{every}) {
      set.start = at(CivilTime(day) + from);
      set.end = at(CivilTime(to <= from ? day + days{1} : day) + to);
      scenario_.entries.push_back({written ? at(*written) : set.end, {{set}, {}}});
    }
  }

  void read_expectations() {
    each("expect", [&](Table& t) {
      Expectation e;
      e.what = t.text("what");
      e.about = t.text("about", "");
      if (t.has("is_from") || t.has("at_least")) e.low = t.number("at_least");
      if (t.has("at_most")) e.high = t.number("at_most");
      if (t.has("number")) e.low = e.high = t.number("number");
      e.is = t.text("is", "");
      e.from = t.clock_if("from");
      e.to = t.clock_if("to");
      e.why = t.text("why");
      if (!e.why.starts_with("common practice") && !e.why.starts_with("judgement")) {
        t.refuse("why", "say whether it is common practice or judgement");
      }
      scenario_.expectations.push_back(e);
    });
  }

  void note_busy_days() {
    auto& busy = scenario_.busy;
    const auto moment = [&](Instant at) { busy.push_back({at, at}); };
    for (const Spell& spell : scenario_.sky.spells) {
      busy.push_back({scenario_.calendar.start_of(spell.first),
                      scenario_.calendar.start_of(spell.last + days{1})});
    }
    for (const FixedHour& hour : scenario_.sky.hours) moment(hour.at);
    for (const Rain& rain : scenario_.sky.rain) busy.push_back(rain.when);
    for (const Entry& entry : scenario_.entries) moment(entry.at);
    for (const Source& source : scenario_.sources) {
      busy.insert(busy.end(), source.silent.begin(), source.silent.end());
      for (const LateFile& late : source.late) busy.push_back({late.when.from, late.arrives});
      for (const Stuck& stuck : source.stuck) busy.push_back(stuck.when);
    }
  }

  const toml::table& all_;
  settings::Settings settings_;
  Scenario scenario_;
};

/// The comment lines at a file's head, without their marks.
std::string opening_comment(const std::string& path) {
  std::ifstream file(path);
  std::string line, text;
  while (std::getline(file, line) && line.starts_with("# ")) {
    text += (text.empty() ? "" : "\n") + line.substr(2);
  }
  if (text.empty()) throw std::runtime_error(path + ": it opens without a sentence");
  return text;
}

}  // namespace

Scenario read_scenario(const std::string& folder, const std::string& name) {
  const std::string path = folder + "/" + name + ".toml";
  try {
    toml::table all = toml::parse_file(folder + "/plain.toml");
    put_over(all, toml::parse_file(path));
    Scenario scenario = Reading(all, name).read();
    scenario.sentence = opening_comment(path);
    return scenario;
  } catch (const toml::parse_error& error) {
    std::ostringstream text;
    text << name << ": " << error;
    throw std::runtime_error(text.str());
  }
}

std::vector<std::string> scenario_names(const std::string& folder) {
  std::vector<std::string> names;
  for (const auto& entry : std::filesystem::directory_iterator(folder)) {
    const std::string stem = entry.path().stem().string();
    if (entry.path().extension() == ".toml" && stem != "plain") names.push_back(stem);
  }
  std::sort(names.begin(), names.end());
  return names;
}

}  // namespace antherd::seasons
