// What the faults of the menu do to a season; see season.hpp.
#include <algorithm>

#include "season.hpp"

namespace simulation {

void Season::begin(const Fault& fault) {
  const auto chance = [&] { return static_cast<double>(fault.dice % 1000) / 1000.0; };
  switch (fault.what) {
    case What::clock_1970:
    case What::clock_last_shutdown:
    case What::clock_hours:
    case What::clock_20_years:
      return begin_clock(fault);
    case What::kill:
    case What::power_cut:
    case What::long_off:
    case What::kill_in_commit:
    case What::cut_in_commit:
    case What::kill_in_mail:
    case What::cut_in_mail:
      return begin_death(fault);
    case What::disk_full:
      store_bad_since_ = now_;
      return disk_.refuse(SQLITE_FULL);
    case What::disk_error:
      store_bad_since_ = now_;
      return disk_.refuse(SQLITE_IOERR_WRITE);
    case What::disk_locked:
      store_bad_since_ = now_;
      return disk_.hold_lock(true);
    case What::diary_late:
    case What::diary_undone:
      return diary(fault);
    case What::reload_broken:
    case What::reload_good:
      return reload(fault.what == What::reload_broken || chance() < 0);
    case What::offline:
      server_.begin(fault);
      break;
    default:
      break;
  }
  if (fault.what >= What::mail_down && fault.what < What::offline) return server_.begin(fault);
  for (StationLife& station : stations_) station.begin(fault);
}

void Season::end(const Fault& fault) {
  switch (fault.what) {
    case What::clock_1970:
    case What::clock_last_shutdown:
    case What::clock_hours:
    case What::clock_20_years:
      offset_ = Seconds{0};
      clock_set_ = true;
      return;
    case What::disk_full:
    case What::disk_error:
      disk_.refuse(SQLITE_OK);
      store_bad_since_.reset();
      store_bad_until_ = now_;
      return;
    case What::disk_locked:
      disk_.hold_lock(false);
      store_bad_since_.reset();
      store_bad_until_ = now_;
      return;
    default:
      break;
  }
  server_.end(fault);
  for (StationLife& station : stations_) station.end(fault);
}

void Season::begin_clock(const Fault& fault) {
  const auto hour = static_cast<std::int64_t>(fault.dice % 11) - 5;
  switch (fault.what) {
    case What::clock_1970:  // a small computer starts without a battery
      if (desk_) die(Death::cut, Seconds{40});
      offset_ = Instant{} - now_;
      break;
    case What::clock_last_shutdown:
      if (desk_) die(Death::cut, hours{1 + static_cast<std::int64_t>(fault.dice % 9)});
      offset_ = last_shutdown_ - back_at_;
      break;
    case What::clock_hours:
      offset_ = hours{hour == 0 ? 3 : hour};
      break;
    default:
      offset_ = days{20 * 365 + 5};
      break;
  }
  clock_set_ = false;
}

void Season::begin_death(const Fault& fault) {
  const auto dice = fault.dice;
  const auto off = Seconds{5 + static_cast<std::int64_t>(dice % 1500)};
  switch (fault.what) {
    case What::kill:
      if (desk_) die(Death::kill, off);
      return;
    case What::power_cut:
      if (desk_) die(Death::cut, off);
      return;
    case What::long_off:
      if (desk_) die(Death::cut, fault.to - fault.from);
      return;
    case What::kill_in_mail:
      mail_death_ = {static_cast<int>(dice % 3), Death::kill};
      return;
    case What::cut_in_mail:
      mail_death_ = {static_cast<int>(dice % 3), Death::cut};
      return;
    default:
      death_in_commit_ = fault.what == What::kill_in_commit ? Death::kill : Death::cut;
      disk_.cut_after(1 + static_cast<int>(dice % 40));
      return;
  }
}

/// The sprinklers run on some evenings; the log is kept the same evening.
void Season::water() {
  const Calendar& calendar = settings_->calendar;
  const CivilDay today = calendar.day_of(now_);
  if (today == watered_ || calendar.civil(now_) - CivilTime(today) < hours{20}) return;
  watered_ = today;
  synthetic::Dice dice(seed_ + static_cast<std::uint64_t>(today.time_since_epoch().count()) * 13);
  if (kind_.irrigation == "none" || dice.uniform() * 10 >= kind_.sets_in_ten) return;
  field::Irrigation irrigation;
  irrigation.field = field_name(0);
  irrigation.method = settings_->fields.front().field.irrigation;
  irrigation.start = calendar.at(CivilTime(today) + hours{19});
  irrigation.end = irrigation.start + hours{3};
  if (dice.uniform() < 0.7) irrigation.depth = Millimetre(8);
  if (desk_->store().add(irrigation)) return;
}

/// Entries that come days late, are dated back, or are taken back.
void Season::diary(const Fault& fault) {
  if (!desk_) return;
  const Calendar& calendar = settings_->calendar;
  const CivilDay today = calendar.day_of(now_);
  const auto back = days{1 + static_cast<int>(fault.dice % 6)};
  if (fault.what == What::diary_undone) {
    const auto known = desk_->store().diary(field_name(0));
    if (!known || known->irrigations.empty()) return;
    const auto which = fault.dice % known->irrigations.size();
    if (desk_->store().remove_irrigation(known->irrigations[which].id)) return;
    return;
  }
  if (fault.dice % 3 != 0) {
    const std::string day = clock_text(calendar, calendar.start_of(today - back)).substr(0, 10);
    if (folder_.names("diary").size() < 2) {
      folder_.write("diary/irrigation.csv", "field,start,end,method,depth,set\n");
    }
    folder_.append("diary/irrigation.csv",
                   field_name(0) + "," + day + " 19:30," + day + " 23:00,overhead,9 mm,\n");
    return;
  }
  field::Scouting note;
  note.field = field_name(0);
  note.date = today - back;
  note.stage = field::stage::first_anthers;
  note.began = true;
  const auto age = (note.date - calendar.day_of(start_)).count();
  if (age < 14 || age > 30) return;
  if (desk_->store().add(note)) return;
}

void Season::reload(bool broken) {
  const std::string text = settings_of(kind_, 1 + static_cast<int>(dice_.uniform() * 2));
  folder_.write("antherd.toml", broken ? "this = [is no settings file\n" + text : text);
  if (!desk_) return;
  desk_->reload(service_time());
  if (died()) return;
  if (broken) {
    folder_.write("antherd.toml", settings_of(kind_, 0));
    return;
  }
  settings::Reading reading = settings::read_file(folder_ / "antherd.toml");
  if (!reading.settings) return complaints_.add("good settings are read", "they were refused");
  settings_ = std::make_shared<const settings::Settings>(std::move(*reading.settings));
  complaints_.set_calendar(&settings_->calendar);
  judge_.use(settings_);
}

}  // namespace simulation
