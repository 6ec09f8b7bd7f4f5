// See scene.hpp.
#include "scene.hpp"

namespace scene {

using alerts::Kind;
using alerts::Saying;
using risk::Level;

namespace {

constexpr Seconds farm_offset{-7 * 3600};

season::HumidDay humid_day(int day, double infection, bool water, bool dry, double score,
                           Level level, bool night_set) {
  season::HumidDay made;
  made.date = july(day);
  made.judged = true;
  made.infection = infection;
  made.water = water;
  made.dry_out = dry;
  made.score = score;
  made.score_before_halving = score;
  made.level = level;
  made.own_level = level;
  made.night_set = night_set;
  made.wet_hours = night_set ? 11 : 3;
  made.valid_hours = 24;
  return made;
}

season::HeatDay heat_day(int day, double hottest, int hour, int h32, int h35, int h38,
                         Level level) {
  season::HeatDay made;
  made.date = july(day);
  made.t_max = Celsius(hottest);
  made.t_max_hour = hour_of(at(day, hour));
  made.hours_32 = h32;
  made.hours_35 = h35;
  made.hours_38 = h38;
  made.degree_hours = h32 * 2.0;
  made.longest_run = h32;
  if (h32 > 0) made.first_hot_hour = hour_of(at(day, hour - h32 + 1));
  made.level = level;
  made.weather_level = level;
  made.in_window = true;
  made.flower_share = 0.07;
  made.valid_hours = 16;
  return made;
}

}  // namespace

Instant at(int day, int hour, int minute) {
  const auto midnight = std::chrono::sys_days{std::chrono::year{2026} / 7 / day};
  return Instant(midnight) - farm_offset + Seconds{hour * 3600 + minute * 60};
}

CivilDay july(int day) { return CivilDay{CivilDate{std::chrono::year{2026} / 7 / day}}; }

const Calendar& calendar() {
  static const Calendar farm = Calendar::fixed(farm_offset, "America/Los_Angeles");
  return farm;
}

season::FieldStatus north() {
  season::FieldStatus status;
  status.field = "north bench";
  status.as_of = at(14, 16);
  status.irrigation = field::Method::overhead;
  status.last_irrigation_end = at(13, 23);
  status.temperature = Celsius(36.1);
  status.humidity = Percent(21);
  season::FlowerStatus& flower = status.flower;
  flower.scouted = true;
  flower.last_note = july(8);
  flower.last_note_stage = 60;
  flower.part = season::Part::window;
  flower.stage = 63.4;
  flower.p_begun = 0.99;
  flower.p_over = 0.02;
  flower.p_flower = 0.97;
  flower.window_first = july(6);
  flower.window_last = july(26);
  flower.flower_first = july(8);
  flower.flower_last = july(22);
  flower.flower_first_days = 2;
  flower.day_of_window = 9;
  flower.days_in_window = 21;
  flower.thermal_time = 752;
  flower.needed_first_anthers = 688;
  status.heat.today = heat_day(14, 36.1, 15, 4, 1, 0, Level::severe);
  status.heat.yesterday = heat_day(13, 31.4, 16, 0, 0, 0, Level::none);
  status.heat.exposed_share = 0.124;
  status.heat.hot_days = 2;
  status.heat.if_cooler = Level::severe;
  status.heat.if_hotter = Level::severe;
  status.humid.last_five = {humid_day(10, 0.2, false, true, 0, Level::none, false),
                            humid_day(11, 1.4, true, true, 1, Level::none, true),
                            humid_day(12, 0.3, false, true, 0, Level::none, false),
                            humid_day(13, 0.4, false, true, 0, Level::none, false),
                            humid_day(14, 1.6, true, true, 1, Level::moderate, true)};
  status.humid.last_five.back().r = 2.0;
  status.humid.last_five.back().f3 = 2;
  status.humid.last = status.humid.last_five.back();
  status.humid.night_sets_last_five = 2;
  status.humid.streak = 1;
  status.humid.if_watered_tonight = Level::severe;
  status.humid.if_not_watered = Level::moderate;
  status.data.station = "bench";
  status.data.last_reading = at(14, 16);
  status.data.rain_measured = true;
  return status;
}

season::FieldStatus south() {
  season::FieldStatus status = north();
  status.field = "south bench";
  status.irrigation = field::Method::drip;
  status.last_irrigation_end = at(12, 9, 30);
  status.flower.scouted = false;
  status.flower.last_note.reset();
  status.flower.last_note_stage.reset();
  status.flower.p_flower = 0.64;
  status.flower.stage = 61;
  status.flower.window_first = july(10);
  status.flower.window_last = july(31);
  status.flower.flower_first = july(13);
  status.flower.flower_last = july(27);
  status.flower.flower_first_days = 4.2;
  status.flower.day_of_window = 5;
  status.flower.days_in_window = 22;
  status.temperature = Celsius(33.4);
  status.heat.today = heat_day(14, 33.6, 15, 3, 0, 0, Level::moderate);
  status.heat.exposed_share = 0;
  status.heat.hot_days = 0;
  status.heat.if_cooler = Level::none;
  status.heat.if_hotter = Level::moderate;
  for (season::HumidDay& day : status.humid.last_five) {
    day.night_set = false;
    day.water = false;
    day.infection = 0.2;
    day.score = 0;
    day.score_before_halving = 0;
    day.level = Level::none;
  }
  status.humid.last_five.back().r = 0;
  status.humid.last = status.humid.last_five.back();
  status.humid.night_sets_last_five = 0;
  status.humid.streak = 0;
  status.humid.if_watered_tonight = Level::none;
  status.humid.if_not_watered = Level::none;
  status.data.shield_may_read_high = true;
  return status;
}

letters::Desk desk() {
  letters::Desk made;
  made.farm = "Larkspur Bench";
  made.calendar = &calendar();
  made.now = at(14, 16, 5);
  made.fields = {{"north bench", north()}, {"south bench", south()}};
  letters::StationStory story;
  story.station = "bench";
  story.last_reading = at(14, 16);
  story.fields = {"north bench", "south bench"};
  story.fields_in_window = story.fields;
  story.source = "files bench-*.csv in drop/";
  made.stations = {{"bench", story}};
  made.next_daily = at(14, 19);
  made.next_weekly = at(20, 6);
  return made;
}

letters::Recipient owner() {
  letters::Recipient recipient;
  recipient.address = "owner@larkspur.example";
  return recipient;
}

alerts::Telling heat(Saying saying, Level level) {
  alerts::Telling telling;
  telling.saying = saying;
  telling.kind = Kind::heat;
  telling.subject = "north bench";
  telling.episode = "heat/north bench/2026-07-14T19:00:00Z";
  telling.start = at(14, 12);
  telling.level = level;
  telling.peak = level;
  telling.severity = alerts::severity_of(level);
  telling.figure = 36.1;
  telling.about = at(14, 16);
  return telling;
}

alerts::Telling humid(Saying saying, Level level) {
  alerts::Telling telling = heat(saying, level);
  telling.kind = Kind::humid_spell;
  telling.episode = "humid_spell/north bench/2026-07-11T04:00:00Z";
  telling.start = at(11, 19);
  telling.figure = 3.5;
  telling.about = at(14, 19);
  return telling;
}

alerts::Telling silent(Saying saying) {
  alerts::Telling telling;
  telling.saying = saying;
  telling.kind = Kind::no_data;
  telling.subject = "bench";
  telling.episode = "no_data/bench/2026-07-14T20:05:00Z";
  telling.start = at(14, 13, 5);
  telling.level = saying == Saying::ended ? Level::none : Level::severe;
  telling.peak = Level::severe;
  telling.severity = alerts::severity_of(telling.level);
  telling.figure = saying == Saying::ended ? 3 : 1;
  telling.about = at(14, 16);
  return telling;
}

alerts::Telling doubtful() {
  alerts::Telling telling = silent(Saying::opened);
  telling.kind = Kind::doubtful_sensor;
  telling.episode = "doubtful_sensor/bench/2026-07-14T16:00:00Z";
  telling.start = at(14, 10);
  telling.level = Level::moderate;
  telling.severity = alerts::Severity::moderate;
  telling.detail = "stuck for 6 h or more";
  telling.figure.reset();
  return telling;
}

alerts::Telling notice(Kind kind, const std::string& key) {
  alerts::Telling telling;
  telling.saying = Saying::notice;
  telling.kind = kind;
  telling.subject = "north bench";
  telling.episode = std::string(alerts::name_of(kind)) + "/north bench/" + key + "/2026-07-14";
  telling.key = key;
  telling.start = telling.about = at(14, 7);
  telling.certainty = alerts::Certainty::possible;
  telling.figure = 0;
  return telling;
}

namespace {

void add_episodes(letters::FieldReview& field) {
  alerts::Episode hot;
  hot.kind = Kind::heat;
  hot.subject = "north bench";
  hot.start = at(8, 13);
  hot.peak = Level::extreme;
  hot.closed = at(12, 0);
  alerts::Episode wet = hot;
  wet.kind = Kind::humid_spell;
  wet.start = at(8, 22);
  wet.peak = wet.level = Level::severe;
  wet.closed.reset();
  field.episodes = {hot, wet};
  for (const auto& [saying, level, hour] :
       {std::tuple{Saying::opened, Level::moderate, at(8, 16)},
        std::tuple{Saying::raised, Level::severe, at(9, 15)},
        std::tuple{Saying::raised, Level::extreme, at(10, 16)}}) {
    alerts::Said said;
    said.kind = Kind::heat;
    said.subject = "north bench";
    said.saying = saying;
    said.level = level;
    said.at = hour;
    field.said.push_back(said);
  }
}

void add_diary(letters::FieldReview& field) {
  season::Watered water;
  water.irrigation.field = "north bench";
  water.irrigation.start = at(9, 20);
  water.irrigation.end = at(9, 23);
  water.irrigation.depth = Millimetre(12.7);
  water.irrigation.set = 1;
  water.before = Millimetre(42);
  water.after = Millimetre(29.3);
  water.drained = Millimetre(0);
  water.wet_until = at(10, 5);
  season::Watered unknown;
  unknown.irrigation = water.irrigation;
  unknown.irrigation.start = at(10, 22);
  unknown.irrigation.end = at(11, 1, 30);
  unknown.irrigation.depth.reset();
  unknown.wet_until = at(11, 5);
  season::Watered early = water;
  early.irrigation.start = at(12, 15);
  early.irrigation.end = at(12, 17, 45);
  early.before = Millimetre(10);
  early.after = Millimetre(0);
  early.drained = Millimetre(2.7);
  early.limit_near = true;
  field.irrigations = {water, unknown, early};
  field.exposed_days = {{july(9), true, 0.05, 0.002, 0.06}, {july(10), true, 0.07, 0.004, 0.12}};
  field.seed_counts = {{july(12), 14, 20, 0.12, 2},
                       {july(12) - std::chrono::days{365}, 17, 20, {}, 0},
                       {july(12) - std::chrono::days{730}, 19, 20, {}, {}}};
  field::Scouting note;
  note.field = "north bench";
  note.date = july(8);
  note.stage = 60;
  note.disease = false;
  note.note = "west side ahead";
  field.notes = {note};
}

}  // namespace

letters::Review review() {
  letters::Review made;
  made.title = "Week 2026-W28";
  made.first = july(6);
  made.last = july(12);
  letters::FieldReview field;
  field.status = north();
  field.status.as_of = at(13, 6);
  field.days = {heat_day(6, 27.2, 15, 0, 0, 0, Level::none),
                heat_day(7, 29.9, 16, 0, 0, 0, Level::none),
                heat_day(8, 33.4, 16, 4, 0, 0, Level::moderate),
                heat_day(9, 36.7, 16, 6, 2, 0, Level::severe),
                heat_day(10, 38.3, 15, 7, 4, 1, Level::extreme),
                heat_day(11, 31.0, 16, 0, 0, 0, Level::none),
                season::HeatDay{}};
  field.days.back().date = july(12);
  for (int day = 6; day <= 11; ++day) field.coolest[july(day)] = Celsius(10.0 + day * 0.4);
  field.humid_days = {humid_day(6, 0.2, false, true, 0, Level::none, false),
                      humid_day(7, 0.4, false, true, 0, Level::none, false),
                      humid_day(8, 1.2, false, true, 0.5, Level::none, false),
                      humid_day(9, 1.5, true, true, 1, Level::none, true),
                      humid_day(10, 2.2, true, false, 1.5, Level::moderate, true),
                      humid_day(11, 1.9, true, true, 1, Level::severe, true),
                      season::HumidDay{}};
  field.humid_days.back().date = july(12);
  field.humid_days.back().level = Level::severe;
  add_episodes(field);
  add_diary(field);
  field.hours_expected = 168;
  field.hours_valid = 144;
  field.warm_nights = 2;
  field.affected_low = 0.004;
  field.affected_high = 0.18;
  made.fields = {field};
  alerts::Said silence;
  silence.kind = Kind::no_data;
  silence.subject = "bench";
  silence.level = Level::severe;
  silence.at = at(12, 6);
  made.said_of_stations = {silence};
  made.letters_sent = 9;
  made.letters_waiting = 1;
  made.letters_parked = 1;
  made.parked = {"foreman@larkspur.example: Heat Severe, Thu 9 Jul 3 pm: no such mailbox (550)"};
  made.troubles = {"Sat 11 Jul 2 am: mail server refused the connection for 40 min"};
  return made;
}

letters::Review quiet_review() {
  letters::Review made;
  made.title = "Week 2026-W28";
  made.first = july(6);
  made.last = july(12);
  letters::FieldReview field;
  field.status = south();
  field.status.data.shield_may_read_high = false;
  for (int day = 6; day <= 12; ++day) {
    field.days.push_back(heat_day(day, 24.0 + day * 0.3, 15, 0, 0, 0, Level::none));
    field.humid_days.push_back(humid_day(day, 0.2, false, true, 0, Level::none, false));
    field.coolest[july(day)] = Celsius(9.0);
  }
  field.hours_expected = field.hours_valid = 168;
  made.fields = {field};
  made.letters_sent = 1;
  return made;
}

}  // namespace scene
