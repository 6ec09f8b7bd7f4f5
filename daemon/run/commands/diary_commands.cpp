// antherd water and antherd scout: what the grower did and saw.
#include <algorithm>
#include <cmath>
#include <iostream>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"
#include "core/risk/rules.hpp"
#include "run/commands/common.hpp"
#include "run/service/intake.hpp"
#include "run/settings/quantities.hpp"

namespace antherd::commands {
namespace {

Exit wrong(const std::string& what, const std::string& why, const std::string& example) {
  std::cerr << "antherd: " << what << ": " << why << "; nothing was written. Example: " << example
            << "\n";
  return Exit::usage;
}

Failure refuse(const std::string& option, const std::string& why) {
  return Failure{"read " + option, "", why, "nothing was written"};
}

template <class Entries>
bool holds(const Entries& entries, std::int64_t id) {
  return std::any_of(entries.begin(), entries.end(), [&](const auto& e) { return e.id == id; });
}

Exit not_there(std::int64_t id, const std::string& field) {
  return say(Failure{"take back entry " + std::to_string(id), field,
                     "this field has no entry of this number",
                     "nothing was changed; --list shows the numbers"});
}

/// "2026-07-14 23:00", or "23:00" on the day of `like`.
Result<CivilTime> reading_of(const std::string& text, std::optional<CivilTime> like) {
  if (like) {
    if (const auto clock = settings::parse_clock(text)) {
      const CivilDay day = std::chrono::floor<std::chrono::days>(*like);
      const CivilTime same_day = CivilTime(day) + std::chrono::minutes{*clock};
      return same_day > *like ? same_day : same_day + std::chrono::days{1};
    }
  }
  return settings::parse_civil_time(text);
}

/// In the farm's own units.
std::string depth_text(const settings::Settings& settings, const std::optional<Millimetre>& depth) {
  if (!depth) return "depth unknown";
  letters::Desk desk;
  desk.calendar = &settings.calendar;
  desk.units = settings.units;
  return letters::unglued(letters::Words(desk).depth(*depth));
}

std::string sentence_of(const settings::Settings& settings, const field::Irrigation& irrigation) {
  const Calendar& calendar = settings.calendar;
  std::string text =
      farm_text(calendar, irrigation.start) + " to " + farm_text(calendar, irrigation.end) + ", " +
      field::name_of(irrigation.method) + ", " + depth_text(settings, irrigation.depth);
  if (irrigation.set > 0) text += ", set " + std::to_string(irrigation.set);
  return text;
}

Result<field::Irrigation> irrigation_of(const settings::Settings& settings,
                                        const settings::FieldPlan& plan, const Invocation& call) {
  field::Irrigation irrigation;
  irrigation.field = plan.field.name;
  if (call.start.empty() || call.end.empty()) {
    return refuse("--start and --end", "both are needed: --start \"2026-07-14 20:00\" --end 23:00");
  }
  const std::string start_given = "--start '" + call.start + "'";
  const std::string end_given = "--end '" + call.end + "'";
  const auto start = reading_of(call.start, std::nullopt);
  if (!start) return refuse(start_given, start.failure().why);
  const auto end = reading_of(call.end, *start);
  if (!end) return refuse(end_given, end.failure().why);
  const auto from = service::farm_instant(settings, *start);
  if (!from) return refuse(start_given, from.failure().why);
  const auto to = service::farm_instant(settings, *end);
  if (!to) return refuse(end_given, to.failure().why);
  if (*to <= *from) return refuse("--end", "it is not after --start");
  if (*to - *from > std::chrono::hours{96}) return refuse("--end", "more than 96 h after --start");
  const Present by = present(settings, open_to_read(settings));
  const auto ahead_at_most = by.doubted ? std::chrono::days{38} : std::chrono::days{7};
  if (*from > by.now + ahead_at_most && !settings.exercise) {
    return refuse("--start '" + call.start + "'", "it lies more than 7 days ahead");
  }
  irrigation.start = *from;
  irrigation.end = *to;
  irrigation.method = plan.field.irrigation;
  if (!call.method.empty() || irrigation.method == field::Method::none) {
    if (call.method == "overhead") {
      irrigation.method = field::Method::overhead;
    } else if (call.method == "drip") {
      irrigation.method = field::Method::drip;
    } else if (call.method == "furrow") {
      irrigation.method = field::Method::furrow;
    } else {
      return refuse("--method", call.method.empty()
                                    ? "the settings say irrigation = \"none\" of this field; say "
                                      "overhead, drip or furrow"
                                    : "'" + call.method + "' is none of overhead, drip, furrow");
    }
  }
  if (!call.depth.empty() && call.depth != "unknown") {
    const auto depth = settings::parse_depth(call.depth);
    if (!depth) return refuse("--depth '" + call.depth + "'", depth.failure().why);
    irrigation.depth = *depth;
  }
  irrigation.set = call.set;
  return irrigation;
}

/// The humid level tomorrow with and without it, where the store knows enough.
/// @param written  its number in the log, where it was written
void say_what_it_does(const SettingsPointer& settings, const field::Irrigation& irrigation,
                      std::optional<std::int64_t> written) {
  if (irrigation.method != field::Method::overhead) {
    std::cout << field::name_of(irrigation.method)
              << " wets no leaf: no part of the mildew watch.\n";
    return;
  }
  const auto store = open_to_read(*settings);
  if (!store) return;
  const Instant now = present(*settings, store).now;
  auto past = past_from_store(settings, *store, now);
  if (!past) return;
  std::erase_if(past->diaries[irrigation.field].irrigations,
                [&](const field::Irrigation& known) { return known.id == written; });
  Past with = *past;
  with.diaries[irrigation.field].irrigations.push_back(irrigation);
  const auto level_in = [&](const Past& facts) {
    service::Lookout lookout = lookout_over(facts);
    lookout.turn(now, closed_at(facts, now));
    return lookout.desk(now).fields.at(irrigation.field).humid;
  };
  const auto before = level_in(*past), after = level_in(with);
  std::cout << "Sprinkler nights of the last five: " << after.night_sets_last_five
            << " (without it " << before.night_sets_last_five
            << "). Were tomorrow like today, the humid spell would "
            << "stand at " << risk::name_of(after.if_not_watered) << " (without it "
            << risk::name_of(before.if_not_watered) << "). An estimate: scout before acting.\n";
}

/// What is known of a field at a moment, with a diary of its own; nothing without weather.
struct Standing {
  service::Lookout lookout;
  Instant now;

  const season::State& state(const std::string& field) const { return lookout.state(field); }
};

std::optional<Standing> standing_of(const Past& past, Instant now) {
  Standing standing{lookout_over(past), now};
  standing.lookout.turn(now, closed_at(past, now));
  return standing;
}

/// What the irrigations did that are booked, from the season folded once more.
std::vector<season::Watered> effects_of(const SettingsPointer& settings, const store::Store& store,
                                        const std::string& field) {
  const Instant now = present(*settings, open_to_read(*settings)).now;
  const auto past = past_from_store(settings, store, now);
  if (!past) return {};
  const auto standing = standing_of(*past, now);
  if (!standing->state(field).last) return {};
  season::Chronicle chronicle;
  season::fold(standing->lookout.plan(field), standing->lookout.diary(field),
               standing->lookout.hours_of(field),
               *standing->state(field).last + std::chrono::hours{1}, &chronicle);
  return chronicle.watered;
}

Exit list_water(const SettingsPointer& settings, const store::Store& store,
                const std::string& field) {
  const auto diary = store.diary(field);
  if (!diary) return say(diary.failure());
  const field::Field& ground = settings->field(field)->field;
  const season::DiaryView view(*diary, {ground.latitude, ground.longitude, ground.elevation});
  const auto effects = effects_of(settings, store, field);
  letters::Desk desk;
  desk.calendar = &settings->calendar;
  desk.units = settings->units;
  for (const auto& irrigation : diary->irrigations) {
    std::cout << irrigation.id << "  " << sentence_of(*settings, irrigation) << "\n";
    const auto booked = std::find_if(effects.begin(), effects.end(), [&](const auto& one) {
      return one.irrigation.id == irrigation.id;
    });
    const std::string effect = letters::effect_words(
        booked != effects.end() ? *booked : season::night_of(irrigation, view), desk);
    if (!effect.empty()) std::cout << "     " << effect << "\n";
  }
  if (diary->irrigations.empty()) std::cout << field << ": nothing is logged.\n";
  return Exit::done;
}

/// The flowering window without and with a note, as of the newest reading. A note counts from noon
/// of its day: before that the weather of the last day is carried on.
void say_window(const SettingsPointer& settings, const field::Scouting& note,
                std::int64_t written) {
  const bool of_flowers =
      note.stage && *note.stage >= field::stage::buds && *note.stage <= field::stage::flowers_done;
  const auto store = open_to_read(*settings);
  if (!of_flowers || !store) return;
  const Instant now = present(*settings, store).now;
  auto with = past_from_store(settings, *store, now);
  if (!with) return;
  Past without = *with;
  std::erase_if(without.diaries[note.field].notes,
                [&](const field::Scouting& known) { return known.id == written; });
  const Instant noon = settings->calendar.at(CivilTime(note.date) + std::chrono::hours{12});
  const auto flower_in = [&](const Past& facts) -> std::optional<season::FlowerStatus> {
    const auto standing = standing_of(facts, now);
    const season::State& state = standing->state(note.field);
    if (!state.last) return std::nullopt;
    const auto& plan = standing->lookout.plan(note.field);
    const auto& diary = standing->lookout.diary(note.field);
    const season::State then = season::carried_to(state, plan, diary, noon + one_hour);
    return season::status(then, plan, diary).flower;
  };
  const auto before = flower_in(without), after = flower_in(*with);
  if (!before || !after) return;
  const letters::Desk desk = lookout_over(*with).desk(now);
  const letters::Words words(desk);
  const auto line = [&](const char* label, const season::FlowerStatus& flower) {
    std::cout << label << letters::unglued(letters::window_words(flower, words)) << "\n";
  };
  line("Flowering window before the note: ", *before);
  line("Flowering window after the note:  ", *after);
  if (after->note_held) {
    std::cout << "The note does not fit the warmth since sowing: both windows are watched until a "
                 "second note agrees with one of the two.\n";
  }
}

/// That of the call, else today's.
Result<CivilDay> date_of_note(const settings::Settings& settings, const settings::FieldPlan& plan,
                              const Invocation& call) {
  const Present by = present(settings, open_to_read(settings));
  CivilDay day = settings.calendar.day_of(by.now);
  std::string given = "the date, by this computer " + day_text(day);
  if (!call.date.empty()) {
    const auto date = settings::parse_day(call.date);
    given = "--date '" + call.date + "'";
    if (!date) return refuse(given, date.failure().why);
    day = *date;
  }
  const auto latest = last_day_of_notes(settings, by);
  if (latest && day > *latest) {
    return refuse(given, "it lies in the future, after " + day_text(*latest));
  }
  if (day < plan.field.sown) return refuse(given, "it lies before sowing");
  return day;
}

Result<field::Scouting> note_of(const settings::Settings& settings, const settings::FieldPlan& plan,
                                const Invocation& call) {
  field::Scouting note;
  note.field = plan.field.name;
  const auto date = date_of_note(settings, plan, call);
  if (!date) return date.failure();
  note.date = *date;
  if (!call.stage.empty()) {
    note.stage = field::stage_from_word(call.stage);
    if (!note.stage) {
      return refuse("--stage", "'" + call.stage +
                                   "' is none of emerged, buds, first-anthers, full-flower, "
                                   "flowers-done, milk, dough, ripe, nor a BBCH code from 9 to 99");
    }
  }
  if (call.began && !note.stage) return refuse("--began", "it needs a --stage that began");
  note.began = call.began || note.stage == field::stage::first_anthers;
  if (!call.disease.empty()) {
    if (call.disease != "yes" && call.disease != "no") {
      return refuse("--disease", "'" + call.disease + "' is neither yes nor no");
    }
    note.disease = call.disease == "yes";
  }
  if (!call.seed_set.empty()) {
    const auto slash = call.seed_set.find('/');
    const auto held = settings::parse_number(call.seed_set.substr(0, slash));
    const auto looked =
        settings::parse_number(slash == std::string::npos ? "" : call.seed_set.substr(slash + 1));
    const auto whole = [](double value) { return value == std::floor(value); };
    const bool fits = held && looked && whole(*held) && whole(*looked) && *held >= 0 &&
                      *looked >= 1 && *held <= *looked && *looked <= 1000;
    if (!fits) {
      return refuse("--seed-set", "'" + call.seed_set + "' is not like 14/20");
    }
    note.seed_set = static_cast<int>(*held);
    note.seed_looked = static_cast<int>(*looked);
  }
  // A note is printed and mailed: it is one line of text and nothing else.
  const bool plain = std::none_of(call.note.begin(), call.note.end(), [](char c) {
    return static_cast<unsigned char>(c) < 0x20 || c == 0x7f;
  });
  if (!plain) return refuse("--note", "it holds a control character or more than one line");
  note.note = call.note;
  if (!note.stage && !note.disease && !note.seed_set && note.note.empty()) {
    return refuse("the note", "it says nothing; give --stage, --disease, --seed-set or --note");
  }
  return note;
}

Exit list_notes(const store::Store& store, const std::string& field) {
  const auto diary = store.diary(field);
  if (!diary) return say(diary.failure());
  for (const auto& note : diary->notes) {
    std::cout << note.id << "  " << day_text(note.date);
    if (note.stage) std::cout << "  " << field::word_for_stage(*note.stage);
    if (note.began) std::cout << ", began that day";
    if (note.disease) std::cout << ", disease " << (*note.disease ? "seen" : "not seen");
    if (note.seed_set) std::cout << ", seed set " << *note.seed_set << "/" << *note.seed_looked;
    if (!note.note.empty()) std::cout << ", " << note.note;
    std::cout << "\n";
  }
  if (diary->notes.empty()) std::cout << field << ": no notes.\n";
  return Exit::done;
}

}  // namespace

Exit water(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const settings::FieldPlan* plan = read_field(*settings, call);
  if (!plan) return Exit::usage;
  if (call.list || call.undo) {
    auto store = call.list ? open_to_read(*settings) : open_to_write(*settings);
    if (!store) return say(store.failure());
    if (call.list) return list_water(settings, *store, plan->field.name);
    const auto diary = store->diary(plan->field.name);
    if (!diary) return say(diary.failure());
    if (!holds(diary->irrigations, *call.undo)) return not_there(*call.undo, plan->field.name);
    if (auto done = store->remove_irrigation(*call.undo); !done) return say(done.failure());
    std::cout << "Entry " << *call.undo << " is taken back.\n";
    return Exit::done;
  }
  const auto irrigation = irrigation_of(*settings, *plan, call);
  if (!irrigation) {
    return wrong(irrigation.failure().what, irrigation.failure().why,
                 "antherd water north --start \"2026-07-14 20:00\" --end 23:00 --depth \"0.5 in\"");
  }
  std::optional<std::int64_t> written;
  const std::string sentence = sentence_of(*settings, *irrigation);
  if (call.try_only) {
    std::cout << "Tried, not written: " << plan->field.name << ", " << sentence << ".\n";
  } else {
    auto store = open_to_write(*settings);
    if (!store) return say(store.failure());
    const auto id = store->add(*irrigation);
    if (!id) return say(id.failure());
    written = *id;
    std::cout << "Written as entry " << *id << ": " << plan->field.name << ", " << sentence
              << ".\n";
  }
  say_what_it_does(settings, *irrigation, written);
  return Exit::done;
}

Exit scout(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  const settings::FieldPlan* plan = read_field(*settings, call);
  if (!plan) return Exit::usage;
  if (call.list || call.undo) {
    auto store = call.list ? open_to_read(*settings) : open_to_write(*settings);
    if (!store) return say(store.failure());
    if (call.list) return list_notes(*store, plan->field.name);
    const auto diary = store->diary(plan->field.name);
    if (!diary) return say(diary.failure());
    if (!holds(diary->notes, *call.undo)) return not_there(*call.undo, plan->field.name);
    if (auto done = store->remove_scouting(*call.undo); !done) return say(done.failure());
    std::cout << "Note " << *call.undo << " is taken back.\n";
    return Exit::done;
  }
  const auto note = note_of(*settings, *plan, call);
  if (!note) {
    return wrong(note.failure().what, note.failure().why,
                 "antherd scout north --date 2026-07-01 --stage first-anthers");
  }
  auto store = open_to_write(*settings);
  if (!store) return say(store.failure());
  const auto id = store->add(*note);
  if (!id) return say(id.failure());
  std::cout << "Written as note " << *id << ": " << plan->field.name << ", " << day_text(note->date)
            << (note->stage ? ", " + field::word_for_stage(*note->stage) : "")
            << (note->seed_set ? ", seed in " + std::to_string(*note->seed_set) + " of " +
                                     std::to_string(*note->seed_looked) + " clusters"
                               : "")
            << ".\n";
  say_window(settings, *note, *id);
  return Exit::done;
}

}  // namespace antherd::commands
