// One field's chapter of the review.
#include <algorithm>

#include "core/letters/review.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

std::string saying_words(Saying saying) {
  switch (saying) {
    case Saying::opened:
      return "opened";
    case Saying::raised:
      return "raised";
    case Saying::reminder:
      return "reminder";
    case Saying::eased:
      return "eased";
    case Saying::ended:
      return "ended";
    case Saying::notice:
      return "notice";
    case Saying::learned_late:
      return "learned late";
  }
  return "";
}

std::string date_and_time(Instant end, const Words& words) {
  return words.day(words.day_of_end(end)) + glue + words.clock(end);
}

Section seen(const FieldReview& field) {
  const int missing = std::max(0, field.hours_expected - field.hours_valid);
  std::vector<std::string> said{std::to_string(field.hours_valid) + " of " +
                                count(field.hours_expected, "hour") + " seen."};
  if (missing > 0) {
    said.push_back(count(missing, "hour") +
                   " not seen: what happened then is not known and is in no figure here.");
  }
  const auto not_judged = std::count_if(field.humid_days.begin(), field.humid_days.end(),
                                        [](const season::HumidDay& day) { return !day.judged; });
  if (not_judged > 0) {
    said.push_back(count(static_cast<int>(not_judged), "humid day") +
                   " not judged for want of data.");
  }
  const std::string doubtful = flags_named(field.status.data.flags_24);
  if (!doubtful.empty()) said.push_back("Doubtful in the last 24 h: " + doubtful + ".");
  if (!field.status.data.rain_measured) said.push_back("Rain is not measured.");
  return {"SEEN", join(said), {}, true, {}};
}

Section flower(const FieldReview& field, const Words& words) {
  Section section{"FLOWER", flower_paragraph(field.status, words), {}, true, {}};
  for (const field::Scouting& note : field.notes) {
    std::vector<std::string> parts;
    if (note.stage) parts.push_back(stage_words(*note.stage) + (note.began ? " began" : ""));
    if (note.disease) parts.push_back(*note.disease ? "mildew seen" : "no mildew seen");
    if (!note.note.empty()) parts.push_back(plain(note.note));
    std::string line;
    for (const std::string& part : parts) line += (line.empty() ? "" : ", ") + part;
    if (!line.empty()) section.lines.push_back(words.day(note.date) + ": " + line);
  }
  return section;
}

const char* const indicative =
    " (indicative: no dose–response curve has been published for this crop)";

/// One hot day in flower: what opened, and what it may have affected.
std::string exposed_day(const season::DayExposure& day, const FieldReview& field,
                        const Words& words) {
  std::string hours;
  for (const season::HeatDay& heat : field.days) {
    if (heat.date != day.date || !heat.hours_35) continue;
    hours = std::to_string(*heat.hours_35) + glue + "h at " +
            words.threshold(words.heat_rules(field.status.field).severe) + " or more; ";
  }
  return words.day(day.date) + ": " + hours + in_hundred(day.share) +
         " of the flowers opened, affected " + in_hundred(day.low) + " to " + in_hundred(day.high);
}

Section exposure(const FieldReview& field, const Words& words) {
  const FieldStatus& status = field.status;
  Section section{"HEAT AND FLOWERS", "", {}, true, {}, ""};
  std::vector<std::string> said;
  if (!status.flower.known) {
    said.push_back("Flowers met by heat: not known while flowering is not known.");
  } else {
    for (const season::DayExposure& day : field.exposed_days) {
      section.lines.push_back(exposed_day(day, field, words));
    }
    said.push_back("Exposed this season: " + exposed_words(status, words) + ".");
    if (field.affected_high > 0) {
      said.push_back("Affected this season: " + in_hundred(field.affected_low) + " to " +
                     in_hundred(field.affected_high) + indicative + ".");
    }
    if (!section.lines.empty()) {
      said.push_back("A day's affected range also counts buds that open within a week of it.");
    }
  }
  if (field.warm_nights > 0) {
    said.push_back(count(field.warm_nights, "warm night") +
                   " between flower and ripe; at one trial site such nights went with fewer "
                   "grains. No letter is sent for them.");
  } else {
    said.push_back("No warm night counted between flower and ripe.");
  }
  section.text = join(said);
  return section;
}

std::string seed_line(const SeedCount& count_of, const FieldReview& field, const Words& words) {
  const int year = static_cast<int>(CivilDate{count_of.date}.year());
  std::string text = words.day(count_of.date) + " " + std::to_string(year) + ": " +
                     std::to_string(count_of.held) + " of " + std::to_string(count_of.looked) +
                     " hold a seed";
  if (count_of.exposed) text += "; exposed by then " + in_hundred(*count_of.exposed);
  if (!count_of.hot_days) return text + "; its weather is not kept here";
  return text + "; " +
         (*count_of.hot_days == 0 ? std::string("no day") : count(*count_of.hot_days, "day")) +
         " at " + words.threshold(words.heat_rules(field.status.field).severe) +
         " or more in the 30 days before";
}

/// The farm's own record: what was counted beside what the heat was.
Section seed_set(const FieldReview& field, const Words& words) {
  Section section{"SEED SET", "", {}, true, {}, ""};
  for (const SeedCount& one : field.seed_counts) {
    section.lines.push_back(seed_line(one, field, words));
  }
  if (!section.lines.empty()) {
    section.text =
        "Clusters with a swelling seed, of those that were opened; a record of this "
        "farm, not a measure of harm.";
  }
  return section;
}

std::string method_words(field::Method method) {
  switch (method) {
    case field::Method::overhead:
      return "overhead";
    case field::Method::drip:
      return "drip";
    case field::Method::furrow:
      return "furrow";
    case field::Method::none:
      break;
  }
  return "water";
}

Section water_log(const FieldReview& field, const Words& words) {
  Section section{"WATER", "", {}, true, {}};
  for (const season::Watered& watered : field.irrigations) {
    const field::Irrigation& one = watered.irrigation;
    const std::string effect = effect_words(watered, words.desk());
    const Calendar& calendar = words.calendar();
    const bool same_day = calendar.day_of(one.start) == words.day_of_end(one.end);
    section.lines.push_back(words.day(calendar.day_of(one.start)) + " " + words.clock(one.start) +
                            " to " + (same_day ? "" : words.day(words.day_of_end(one.end)) + " ") +
                            words.clock(one.end) + ", " + method_words(one.method) +
                            (one.depth ? ", " + words.depth(*one.depth) : ", depth unknown") +
                            (one.set > 0 ? ", set " + std::to_string(one.set) : "") +
                            (effect.empty() ? "" : ": " + effect));
  }
  if (section.lines.empty()) {
    section.text = field.status.irrigation == field::Method::none
                       ? "No irrigation is set for this field."
                       : "No water was logged. If any ran, enter it: the mildew watch goes by "
                         "this log.";
  }
  return section;
}

Section decided(const FieldReview& field, const Words& words) {
  Section section{"DECIDED", "", {}, true, {}};
  for (const alerts::Episode& episode : field.episodes) {
    section.lines.push_back(
        kind_words(episode.kind) + " from " + words.day(words.calendar().day_of(episode.start)) +
        glue + words.clock(episode.start) +
        (episode.closed ? " to " + date_and_time(*episode.closed, words) : ", still open") +
        ", at most " + level_word(episode.peak));
  }
  if (section.lines.empty()) section.text = "No warning was due.";
  return section;
}

Section told(const FieldReview& field, const Words& words) {
  Section section{"TOLD", "", {}, true, {}};
  for (const alerts::Said& said : field.said) section.lines.push_back(said_line(said, words));
  if (section.lines.empty()) section.text = "Nothing.";
  return section;
}

/// "humidity (set for this field): right in 1210 of 1440 h (84 %), missed 90 wet h, …".
std::string rule_line(const season::HumidStatus& humid, risk::Film film) {
  const risk::SensorRecord& record = humid.sensor;
  const auto at = static_cast<std::size_t>(film);
  const int right = record.right(film);
  std::string name = film == risk::Film::energy      ? "a leaf's energy balance"
                     : film == risk::Film::dew_point ? "dew point"
                                                     : "humidity";
  if (film == humid.film) name += " (set for this field)";
  return name + ": right in " + std::to_string(right) + " of " + count(record.hours, "hour") +
         " (" + number(100.0 * right / record.hours, 0) + " %); missed " +
         count(record.missed[at], "wet hour") + ", took " + count(record.imagined[at], "dry one") +
         " for wet";
}

/// Where a sensor tells the truth: how the rules that stand in for it would have done.
std::string leaf_sensor(const season::HumidStatus& humid) {
  constexpr int enough = 14 * 24;
  const risk::SensorRecord& record = humid.sensor;
  if (record.hours == 0) return "";
  Section section{"LEAF SENSOR", "", {}, true, {}};
  for (const risk::Film film : {risk::Film::humidity, risk::Film::dew_point, risk::Film::energy}) {
    section.lines.push_back(rule_line(humid, film));
  }
  section.text = "The sensor told " + count(record.hours, "hour") + " since sowing, " +
                 std::to_string(record.wet) +
                 " of them wet, and its word stands. The rules stand in where it is silent. " +
                 (record.hours < enough
                      ? "Two weeks are the least to compare them by."
                      : "Another one is chosen by the field's film, see config/antherd.toml.");
  return section_text(section);
}

}  // namespace

std::string said_line(const alerts::Said& said, const Words& words) {
  std::string text = words.day(words.calendar().day_of(said.at)) + glue + words.clock(said.at) +
                     ": " + plain(said.subject) + ", " + kind_words(said.kind) + " " +
                     saying_words(said.saying);
  if (said.level != Level::none) text += ", " + level_word(said.level);
  if (said.seen) text += " (seen)";
  return text;
}

std::string effect_words(const season::Watered& watered, const Desk& desk) {
  const Words words(desk);
  std::vector<std::string> said;
  if (watered.before && watered.after) {
    const auto missing = [&](Millimetre depth) {
      return depth.value < 0.05 ? std::string("full") : words.depth(depth) + " short";
    };
    said.push_back("root zone " + missing(*watered.before) + " before, " + missing(*watered.after) +
                   " after");
  }
  if (watered.drained && watered.drained->value >= 0.5) {
    said.push_back(words.depth(*watered.drained) + " drained below the roots");
  }
  if (watered.wet_until) {
    said.push_back(std::string("leaves wet until sunrise") +
                   (watered.limit_near
                        ? " (had it ended an hour earlier it would not count as a night set)"
                        : ""));
  }
  std::string text;
  for (const std::string& part : said) text += (text.empty() ? "" : "; ") + part;
  return unglued(text);
}

std::string field_chapter(const FieldReview& field, const Words& words) {
  const std::string name = clip(plain(field.status.field), page_width);
  std::string text =
      "\n" + std::string(page_width, '=') + "\n" + name + "\n\n" + day_table(field, words);
  for (const Section& section :
       {seen(field), flower(field, words), exposure(field, words), seed_set(field, words),
        water_log(field, words), decided(field, words), told(field, words)}) {
    text += section_text(section);
  }
  text += leaf_sensor(field.status.humid);
  return text;
}

}  // namespace antherd::letters
