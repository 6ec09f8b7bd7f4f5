// The weekly log and the season's: what was seen, not seen, decided and told.
#include "core/letters/review.hpp"

#include <algorithm>
#include <cmath>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr Seconds weekly_holds{7 * 24 * 3600};

std::string period(const Review& review, const Words& words) {
  return words.day(review.first) + " to " + words.day(review.last);
}

/// In which words a field's period went, for the head of the review.
std::string in_short(const FieldReview& field, const Words& words) {
  const risk::HeatRules& rules = words.heat_rules(field.status.field);
  Level heat = Level::none;
  Level mildew = Level::none;
  int hot = 0;
  std::optional<Celsius> top;
  for (const season::HeatDay& day : field.days) {
    heat = std::max(heat, day.level);
    if (day.hours_35.value_or(0) > 0) ++hot;
    if (day.t_max && (!top || *day.t_max > *top)) top = day.t_max;
  }
  bool judged = false;
  for (const season::HumidDay& day : field.humid_days) {
    mildew = std::max(mildew, day.level);
    judged = judged || day.judged;
  }
  std::vector<std::string> said{flower_state(field.status)};
  said.push_back(top ? "at most " + words.temperature(*top, rules) : "no temperature seen");
  if (hot > 0)
    said.push_back(count(hot, "day") + " at " + words.threshold(rules.severe) + " or more");
  // What nobody saw is not "below Moderate".
  said.push_back("heat " + (top || heat > Level::none ? level_word(heat) : "not seen"));
  said.push_back("mildew " + (judged || mildew > Level::none ? level_word(mildew) : "not judged"));
  const int missing = field.hours_expected - field.hours_valid;
  said.push_back(missing > 0 ? count(missing, "hour") + " not seen" : "every hour seen");
  std::string text = plain(field.status.field) + ": ";
  for (std::size_t i = 0; i < said.size(); ++i) text += (i > 0 ? ", " : "") + said[i];
  return text + ".";
}

std::string head(const Review& review, const Words& words) {
  const Desk& desk = words.desk();
  std::string text = paragraph((desk.exercise ? "EXERCISE: " : "") + plain(desk.farm) + ", " +
                               plain(review.title) + " (" + period(review, words) + ")");
  if (desk.exercise) text += paragraph("This is an exercise: an invented season.");
  if (!desk.clock_set) text += paragraph("Computer clock not set: times are the station's own.");
  text += "\n";
  if (review.fields.empty()) text += "No field is in the settings.\n";
  for (const FieldReview& field : review.fields) {
    for (const std::string& line : wrap(in_short(field, words), page_width, 0, 2)) {
      text += line + "\n";
    }
  }
  return text;
}

bool quiet(const Review& review) {
  return review.said_of_stations.empty() &&
         std::all_of(review.fields.begin(), review.fields.end(), [](const FieldReview& field) {
           return field.episodes.empty() && field.said.empty();
         });
}

std::string verdicts_line(const StationReview& station) {
  const weather::VerdictCount& count = station.verdicts;
  std::string text = plain(station.station) + ": " + std::to_string(count.seen()) + " h of " +
                     std::to_string(count.expected) + " seen, " + std::to_string(count.good) +
                     " good, " + std::to_string(count.suspect) + " suspect, " +
                     std::to_string(count.wrong) + " wrong";
  std::vector<std::string> reasons;
  for (const auto& [reason, hours] : count.reasons) {
    reasons.push_back(reason + " " + std::to_string(hours) + " h");
  }
  return text + (reasons.empty() ? "." : " (" + list(reasons) + ").");
}

std::string stations(const Review& review, const Words& words) {
  Section section{"STATIONS", "", {}, true, {}};
  for (const StationReview& station : review.stations) {
    section.lines.push_back(verdicts_line(station));
    const auto story = words.desk().stations.find(station.station);
    if (story == words.desk().stations.end() || !story->second.clock) continue;
    section.lines.push_back(plain(station.station) + ": " + clock_words(story->second));
    const char end = section.lines.back().back();
    if (end != '?') section.lines.back() += ".";
  }
  for (const DriftReview& drift : review.drifts) {
    section.lines.push_back(drift_sentence(drift, words.desk()));
  }
  for (const alerts::Said& said : review.said_of_stations) {
    section.lines.push_back(said_line(said, words));
  }
  return section_text(section);
}

std::string letters_paragraph(const Review& review) {
  std::vector<std::string> said{"Sent " + std::to_string(review.letters_sent) + ", waiting " +
                                std::to_string(review.letters_waiting) + ", parked " +
                                std::to_string(review.letters_parked) + "."};
  if (review.letters_parked > 0) {
    said.push_back(
        "Parked letters did not reach anybody: antherd letters --retry ID sends one "
        "again.");
  }
  Section section{"LETTERS", join(said), {}, true, {}};
  for (const std::string& line : review.parked) section.lines.push_back("parked: " + plain(line));
  return section_text(section);
}

std::string mail_trouble_line(const alerts::Episode& trouble, const Words& words) {
  return "mail: letters waited from " + words.when(trouble.start) +
         (trouble.closed ? " to " + words.when(*trouble.closed)
                         : ", and none has been accepted since");
}

std::string troubles(const Review& review, const Words& words) {
  Section section{"TROUBLES", "", {}, true, {}};
  for (const alerts::Episode& trouble : review.mail_troubles) {
    section.lines.push_back(mail_trouble_line(trouble, words));
  }
  for (const std::string& line : review.troubles) section.lines.push_back(plain(line));
  if (section.lines.empty()) section.text = "The watch itself reports none.";
  return section_text(section);
}

std::string next(const Words& words) {
  const Desk& desk = words.desk();
  if (!desk.next_weekly || *desk.next_weekly <= desk.now) {
    return section_text(
        {"NEXT", "The next review comes in a week, also when nothing happened.", {}, true, {}});
  }
  return section_text({"NEXT",
                       "The next review comes " + words.ahead(*desk.next_weekly) +
                           ", also when nothing happened. If it does not come, the watch itself "
                           "is down.",
                       {},
                       true,
                       {}});
}

Review for_recipient(const Review& review, const Recipient& recipient) {
  Review own = review;
  std::erase_if(own.fields, [&](const FieldReview& field) {
    return !gets_field(recipient, field.status.field);
  });
  return own;
}

std::string brief_review(const Review& review, const Words& words) {
  std::string text = (words.desk().exercise ? "EXERCISE: " : "") + plain(review.title) + ": ";
  int hot = 0;
  int missing = 0;
  Level heat = Level::none;
  Level mildew = Level::none;
  for (const FieldReview& field : review.fields) {
    for (const season::HeatDay& day : field.days) {
      heat = std::max(heat, day.level);
      if (day.hours_35.value_or(0) > 0) ++hot;
    }
    for (const season::HumidDay& day : field.humid_days) mildew = std::max(mildew, day.level);
    missing += std::max(0, field.hours_expected - field.hours_valid);
  }
  text += "heat " + level_word(heat) + " (" + count(hot, "hot field-day") + "), mildew " +
          level_word(mildew) + ", " + count(missing, "hour") + " not seen, " +
          count(review.letters_sent, "letter") + " sent";
  if (review.letters_parked > 0) text += ", " + std::to_string(review.letters_parked) + " parked";
  return clip(unglued(text + "."), brief_width) + "\n";
}

std::string weekly_summary(const Review& review) {
  Level worst = Level::none;
  for (const FieldReview& field : review.fields) {
    for (const season::HeatDay& day : field.days) worst = std::max(worst, day.level);
    for (const season::HumidDay& day : field.humid_days) worst = std::max(worst, day.level);
  }
  return worst == Level::none ? "nothing reached Moderate" : "up to " + level_word(worst);
}

}  // namespace

std::string drift_sentence(const DriftReview& drift, const Desk& desk) {
  const bool us = desk.units == Units::us;
  std::vector<std::string> moved;
  weather::Drift warmth, damp;
  warmth.temperature = drift.drift.temperature;
  damp.humidity = drift.drift.humidity;
  const auto direction = [](double by, const char* up, const char* down) {
    return by > 0 ? up : down;
  };
  if (warmth.large()) {
    const double by = warmth.temperature * (us ? 1.8 : 1.0);
    moved.push_back(number(std::abs(by), 1) + glue + (us ? "°F" : "°C") +
                    direction(by, " warmer", " cooler"));
  }
  if (damp.large()) {
    moved.push_back(number(std::abs(damp.humidity), 0) + glue + "%" +
                    direction(damp.humidity, " damper", " drier"));
  }
  return plain(drift.one) + " and " + plain(drift.other) + " have drifted apart: against " +
         plain(drift.other) + ", " + plain(drift.one) + " read " + list(moved) +
         " in the last 14 days than in the 14 before. One of the two sensors, shields or places "
         "has changed.";
}

std::string compose_review(const Review& review, const Desk& desk) {
  const Words words(desk);
  std::string text = head(review, words);
  if (quiet(review)) {
    text += "\n" + paragraph(
                       "Nothing was decided and nothing told in this time. What was seen, and "
                       "what was not, stands below.");
  }
  for (const FieldReview& field : review.fields) text += field_chapter(field, words);
  text +=
      stations(review, words) + letters_paragraph(review) + troubles(review, words) + next(words);
  return text + "\n" + paragraph(standing_caution(Language::english));
}

std::vector<Letter> compose_weekly(const Review& review, std::span<const Recipient> recipients,
                                   const Desk& desk) {
  const Words words(desk);
  std::vector<Letter> letters;
  for (const Recipient& recipient : recipients) {
    const Review own = for_recipient(review, recipient);
    Part part;
    part.lead = plain(review.title);
    part.name = plain(desk.farm);
    part.rest = "(" + weekly_summary(own) + ")";
    Letter letter;
    letter.id = calendar_id("weekly-" + words.iso(review.first) + "-" + words.iso(review.last),
                            recipient, desk);
    letter.recipient = recipient.address;
    letter.subject = subject_line(part, desk.exercise ? "EXERCISE: " : "", "");
    letter.body = recipient.brief ? brief_review(own, words) : compose_review(own, desk);
    letter.kind = "weekly";
    letter.decided = desk.now;
    letter.valid_until = desk.now + weekly_holds;
    letter.still = unglued("It covers " + period(review, words) + ".");
    letters.push_back(std::move(letter));
  }
  return letters;
}

}  // namespace antherd::letters
