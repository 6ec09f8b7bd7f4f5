// Letters about the watch itself: a silent station, a sensor in doubt, mail that did not go.
// Silence must never look like good news.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

const StationStory* story_of(const Words& words, const std::string& station) {
  const auto found = words.desk().stations.find(station);
  return found == words.desk().stations.end() ? nullptr : &found->second;
}

std::string names_of_fields(const std::vector<std::string>& fields) {
  std::vector<std::string> named;
  for (const std::string& field : fields) named.push_back(plain(field));
  return list(named);
}

/// The field of the station whose flowers matter most now: one in its window, else any.
const FieldStatus* gravest_field(const Words& words, const StationStory* story) {
  if (story == nullptr) return nullptr;
  for (const auto* fields : {&story->fields_in_window, &story->fields}) {
    const FieldStatus* best = nullptr;
    for (const std::string& field : *fields) {
      const FieldStatus* status = status_of(words.desk(), field);
      if (status != nullptr && (best == nullptr || seen_in_flower(*status))) best = status;
    }
    if (best != nullptr) return best;
  }
  return nullptr;
}

std::string flower_end(const Words& words, const StationStory* story) {
  const FieldStatus* status = gravest_field(words, story);
  return status == nullptr ? "" : ", " + flower_tag(*status);
}

/// The fields that nobody watches while the station is silent.
std::vector<std::string> unwatched(const StationStory& story) {
  std::vector<std::string> fields;
  for (const std::string& field : story.fields) {
    if (!story.stand_in.contains(field)) fields.push_back(field);
  }
  return fields;
}

/// What another station sees meanwhile. Nothing where there is none.
std::string stood_in(const StationStory* story) {
  std::vector<std::string> said;
  if (story == nullptr) return "";
  for (const auto& [field, other] : story->stand_in) {
    said.push_back(capital(plain(field)) + " is watched by its other station, " + plain(other) +
                   ", meanwhile: warnings come, and may fit the field less well.");
  }
  return join(said);
}

/// Who sees heat and wet leaves while the station is silent.
std::string tonight_unseen(const StationStory* story) {
  const std::string fields = story == nullptr ? "" : names_of_fields(unwatched(*story));
  if (story != nullptr && fields.empty() && !story->fields.empty()) {
    return "Tonight: another station stands in for " + names_of_fields(story->fields) + ".";
  }
  return "Tonight: nobody is watching " + (fields.empty() ? "its fields" : fields) +
         "; go by your own thermometer.";
}

Section each_field(const Words& words, const StationStory* story, bool blind) {
  Section section{"FIELDS", "", {}, true, {}};
  if (story == nullptr) return section;
  for (const std::string& field : story->fields) {
    const FieldStatus* status = status_of(words.desk(), field);
    if (status == nullptr) continue;
    std::vector<std::string> held;
    if (status->heat.episode && status->heat.episode->open()) {
      held.push_back("heat warning open at " + level_word(status->heat.episode->level));
    }
    if (status->humid.episode && status->humid.episode->open()) {
      held.push_back("mildew warning open at " + level_word(status->humid.episode->level));
    }
    if (held.empty()) held.push_back("no warning open");
    section.lines.push_back(
        plain(field) + ": " + flower_state(*status) +
        (blind && !story->stand_in.contains(field) ? "; when last seen, " : "; ") + list(held));
  }
  return section;
}

std::string what_to_check(const StationStory* story, const Words& words) {
  std::vector<std::string> said{"Has the station power, is its cable or radio in place?"};
  if (story == nullptr) return said.front();
  const std::string source = plain(story->source);
  if (story->no_temperature) {
    said.front() =
        "Readings come, so power and line are in order. Is the thermometer plugged in, does its "
        "column still hold numbers: " +
        source + "?";
  } else if (source.find("http://") != std::string::npos ||
             source.find("https://") != std::string::npos) {
    said.push_back("Does its address answer from this computer: " + source + "?");
  } else if (!source.empty()) {
    said.push_back("Do new files or lines still arrive: " + source + "?");
  }
  if (!story->last_trouble.empty()) {
    said.push_back("Last trouble: " + plain(story->last_trouble) + ".");
  }
  const bool all_ahead = story->clock && story->clock->how == weather::ClockDoubt::How::refused;
  if (const std::string late = late_arrival(*story, words); !late.empty()) said.push_back(late);
  if (all_ahead) {
    said.push_back(capital(clock_words(*story)) + " Refused rows stand in refused.csv.");
  } else if (story->refused_rows > 0) {
    said.push_back(count(story->refused_rows, "row") +
                   " came in the last 24 h but could not be read: see refused.csv.");
  }
  return join(said);
}

Part no_data_open(const Telling& telling, const Words& words) {
  const StationStory* story = story_of(words, telling.subject);
  const Instant since =
      story != nullptr && story->last_reading ? *story->last_reading : telling.start;
  const std::string length = duration(std::max(Seconds{0}, words.desk().now - since));
  const std::string fields = story == nullptr ? "" : names_of_fields(unwatched(*story));
  const bool covered = story != nullptr && !story->fields.empty() && fields.empty();
  const bool reminder = telling.saying == Saying::reminder;
  Part part;
  part.lead = (reminder ? "Still no data " : "No data ") + severity_word(telling.severity);
  const bool bare = story != nullptr && story->no_temperature;
  part.rest = (bare ? "no temperature " : "silent ") + length + " since " + words.when(since) +
              flower_end(words, story);
  const bool never = story != nullptr && !story->last_reading;
  const std::string what = bare ? "temperature" : "reading";
  part.first =
      plain(telling.subject) +
      (never ? ": no " + what + " has ever come; expected since " : ": no " + what + " since ") +
      words.when(since) + " (" + length + ")" +
      (bare ? "; readings still come, but carry no temperature." : ".");
  part.tonight = tonight_unseen(story);
  std::vector<std::string> silent;
  if (reminder) silent.push_back("A reminder: told first after " + words.when(telling.start) + ".");
  if (!covered) {
    silent.push_back(
        "Heat and wet leaves are not seen now, and no warning about them can come. "
        "No letter about heat or mildew means nothing while this lasts.");
  }
  if (const std::string others = stood_in(story); !others.empty()) silent.push_back(others);
  if (story != nullptr && !story->fields_in_window.empty()) {
    silent.push_back("In their flowering window: " + names_of_fields(story->fields_in_window) +
                     ".");
  }
  part.sections = {
      {"SILENT", join(silent), {}, true},
      each_field(words, story, true),
      {"CHECK", what_to_check(story, words), {}, true},
      {"LOOK",
       "A max-min thermometer in the shade, read in the evening; leaves by touch about "
       "9 am. Readings that the station kept and that arrive later are counted then.",
       {},
       false}};
  part.next = "Word when readings are back; a reminder after " +
              duration(words.desk().remind_after) + " while it lasts.";
  part.brief = (covered          ? "Another station stands in."
                : fields.empty() ? "Its fields not watched."
                                 : capital(fields) + " not watched.") +
               std::string(bare ? " Check the thermometer." : " Check power, file, address.");
  part.still = std::string("When this was decided the station had ") +
               (bare ? "sent no temperature since " : "been silent since ") +
               words.day(words.calendar().day_of(since)) + " " + words.clock(since) + ".";
  return part;
}

/// Whether another station saw the fields through the silence: its hours are not missing.
bool seen_through(const Words& words, const StationStory* story) {
  return story != nullptr && !story->fields.empty() &&
         std::all_of(story->fields.begin(), story->fields.end(), [&](const std::string& field) {
           const FieldStatus* status = status_of(words.desk(), field);
           return status != nullptr && story->stand_in.contains(field) &&
                  status->data.hours_missing_24 == 0;
         });
}

std::string unseen(const Words& words, const StationStory* story) {
  std::vector<std::string> said;
  if (story != nullptr) {
    for (const std::string& field : story->fields) {
      const FieldStatus* status = status_of(words.desk(), field);
      if (status == nullptr) continue;
      const int hours = status->data.hours_missing_24;
      said.push_back(plain(field) + ": " +
                     (hours == 0 ? std::string("no hour of the last 24 is missing")
                                 : count(hours, "hour") + " of the last 24 not seen") +
                     ".");
    }
  }
  said.push_back(
      "What heat or wet leaves there were in missing hours is not known; they neither "
      "raised nor lowered a level. If those readings arrive later, they are counted and "
      "told as learned late.");
  return join(said);
}

Part no_data_ended(const Telling& telling, const Words& words) {
  const StationStory* story = story_of(words, telling.subject);
  Part part;
  part.lead = "Data back";
  const std::string gone =
      telling.figure ? std::to_string(static_cast<int>(*telling.figure + 0.5)) + glue + "h silent"
                     : "after silence";
  part.rest =
      "readings since " + words.when(telling.about) + ", " + gone + flower_end(words, story);
  part.first = plain(telling.subject) + ": readings are back since " + words.when(telling.about) +
               ", " + gone + ".";
  part.tonight = seen_through(words, story)
                     ? "Tonight: the watch goes on; another station stood in."
                     : "Tonight: the watch is on again; the missing hours stay unknown.";
  part.sections = {{"MISSING",
                    "Silent from " + words.when(telling.start) + ". " + unseen(words, story),
                    {},
                    true},
                   each_field(words, story, false)};
  part.next = "Letters about heat and mildew come again as usual.";
  part.brief =
      seen_through(words, story) ? "Another station stood in." : "Missing hours stay unknown.";
  part.still = "Readings were back when this was decided.";
  return part;
}

/// The flag behind a telling: one whose cause is known before the others.
const weather::Flag* failing_flag(const Telling& telling, const StationStory* story) {
  const weather::Flag* found = nullptr;
  if (story == nullptr) return found;
  for (const weather::Flag& flag : story->flags_24) {
    if (flag.verdict == weather::Verdict::good) continue;
    const bool meant =
        telling.detail.empty() || telling.detail.find(weather::describe(flag)) != std::string::npos;
    if (!what_to_mend(flag).empty()) return &flag;
    if (meant && found == nullptr) found = &flag;
  }
  return found;
}

/// The check that fails, with what it is about where the flags tell.
std::string failing_check(const Telling& telling, const StationStory* story) {
  if (const auto* flag = failing_flag(telling, story)) return fault_words(*flag);
  return telling.detail.empty() ? "a quality check keeps failing" : plain(telling.detail);
}

std::string sensor_check(const Telling& telling, const StationStory* story) {
  const auto* flag = failing_flag(telling, story);
  const std::string cause = flag == nullptr ? "" : what_to_mend(*flag);
  if (!cause.empty()) return cause;
  return "Hold a second thermometer in the shade beside it. Is the shield clean, the fan turning, "
         "the plug dry? Is the column or unit in the settings right?";
}

Part doubtful(const Telling& telling, const Words& words) {
  const StationStory* story = story_of(words, telling.subject);
  const std::string fault = failing_check(telling, story);
  const bool over = telling.saying == Saying::ended || telling.saying == Saying::eased;
  Part part;
  if (over) {
    part.lead = "Sensor back in order";
    part.rest = "since " + words.closing(telling.about);
    part.first = plain(telling.subject) + ": readings pass the checks again since " +
                 words.closing(telling.about) + ".";
    part.tonight = "Tonight: the watch relies on it again; the doubtful hours stay doubtful.";
    part.sections = {each_field(words, story, false)};
    part.next = "If the checks fail again, a new letter comes.";
    part.brief = "Doubtful hours stay doubtful.";
    part.still = "The sensor passed its checks when this was decided.";
    return part;
  }
  part.lead = (telling.saying == Saying::reminder ? "Sensor still doubtful " : "Doubtful sensor ") +
              severity_word(telling.severity);
  part.rest = fault + ", " + words.closing(telling.about) + flower_end(words, story);
  part.first = plain(telling.subject) + ": " + fault + ", since " + words.when(telling.start) + ".";
  part.tonight = "Tonight: trust your own thermometer and your own eyes over this station.";
  const std::string named = story == nullptr ? "" : flags_named(story->flags_24);
  part.sections = {
      {"SENSOR",
       (telling.saying == Saying::reminder
            ? "A reminder: this has been open since " + words.when(telling.start) + ". "
            : std::string()) +
           "A check has failed for 6 h or more. Warnings that rest on this sensor may come late, "
           "not "
           "at all, or without cause." +
           (named.empty() ? "" : " Last 24 h: " + named + "."),
       {},
       true},
      each_field(words, story, false),
      {"CHECK", sensor_check(telling, story), {}, false}};
  // Outside the window there are no reminders, and no word of its end: the review has it.
  part.next = telling.level >= Level::moderate
                  ? "Word when it has passed for a day; a reminder after " +
                        duration(words.desk().remind_after) + " while it lasts."
                  : "The weekly review names it while it lasts; a letter comes again when a "
                    "flowering window opens.";
  part.brief = "Warnings may be wrong or late. Check sensor and shield.";
  part.still = "The sensor was in doubt when this was decided.";
  return part;
}

}  // namespace

Part station_part(const Telling& telling, const Words& words) {
  const bool over = telling.saying == Saying::ended || telling.saying == Saying::eased;
  Part part = telling.kind == Kind::doubtful_sensor ? doubtful(telling, words)
              : over                                ? no_data_ended(telling, words)
                                                    : no_data_open(telling, words);
  part.name = plain(telling.subject);
  return part;
}

Part service_part(const Telling& telling, const Words& words) {
  const bool over = telling.saying == Saying::ended || telling.saying == Saying::eased;
  const std::string from = words.when(telling.start);
  Part part;
  part.name = plain(telling.subject);
  part.lead = over ? "Mail works again" : "Mail trouble " + severity_word(telling.severity);
  part.rest = (over ? "it waited from " : "letters wait since ") + from;
  part.first = over ? "Letters go out again; they waited from " + from + " to " +
                          words.when(telling.about) + "."
                    : "Letters have been waiting since " + from + ".";
  part.tonight = over ? "Tonight: read the delayed letters; each says when it was decided."
                      : "Tonight: do not count on letters; look at the screen: antherd now";
  part.sections = {
      {"MAIL",
       (telling.detail.empty() ? "" : "The mail server said: " + plain(telling.detail) + ". ") +
           std::string("The watch itself went on all the while, and nothing that was "
                       "decided has been dropped without being named."),
       {"antherd letters"},
       true}};
  part.next = over ? "Letters come as usual." : "Word when mail works again.";
  part.brief = over ? "Read the delayed letters." : "Look at antherd now.";
  part.still =
      over ? "Mail worked when this was decided." : "Mail was waiting when this was decided.";
  return part;
}

}  // namespace antherd::letters
