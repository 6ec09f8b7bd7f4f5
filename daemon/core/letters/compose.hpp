// From what is to be said to finished letters. Every word a grower reads is made in this room.
#pragma once

#include <map>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "core/alerts/decide.hpp"
#include "core/field/diary.hpp"
#include "core/letters/letter.hpp"
#include "core/risk/rules.hpp"
#include "core/season/exposure.hpp"
#include "core/season/status.hpp"
#include "core/units/time.hpp"
#include "core/weather/arrivals.hpp"
#include "core/weather/suspicion.hpp"
#include "core/weather/verdict_count.hpp"

namespace antherd::letters {

/// What is known of a station that is silent or doubtful.
struct StationStory {
  std::string station;
  std::optional<Instant> last_reading;  // with a temperature
  bool no_temperature = false;          // readings still come, for long without a temperature
  std::vector<std::string> fields;      // that it watches
  std::vector<std::string> fields_in_window;
  std::map<std::string, std::string> stand_in;  // field → its other station that has fresh readings
  std::string source;        // "drop folder drop/", "http://192.168.1.20/now.json"
  int refused_rows = 0;      // in the last 24 h
  std::string last_trouble;  // of the source, e.g. "connection refused"
  std::vector<weather::Flag> flags_24;
  std::optional<weather::ClockDoubt> clock;      // what its readings' ages on arrival say of it
  std::optional<weather::Arrival> last_arrival;  // of a newest reading that was believed
};

/// Everything the letters of one tick may speak of.
struct Desk {
  std::string farm;
  const Calendar* calendar = nullptr;  // farm time
  Instant now;
  Units units = Units::us;
  bool clock_set = true;  // false: "computer clock not set"
  std::map<std::string, season::FieldStatus> fields;
  std::map<std::string, StationStory> stations;
  std::optional<Instant> next_daily;  // when the next daily line is due
  std::optional<Instant> next_weekly;
  Seconds remind_after{24 * 3600};
  bool exercise = false;                              // the demo
  std::map<std::string, risk::HeatRules> heat_rules;  // of fields with their own; else the usual
};

/// Letters of one tick: tellings of one kind merge per recipient, worst field first; those that
/// were learned late merge into one letter per recipient.
std::vector<Letter> compose(std::span<const alerts::Telling> tellings,
                            std::span<const Recipient> recipients, const Desk& desk);

/// What a letter was made of: the entries of one moment that give it its very identity, as tellings
/// with no more than the ledger keeps. Nothing when no moment of the ledger does: what cannot be
/// traced surely is not guessed at.
/// @param recipient  of the letter
/// @param said       the ledger around the letter's decision, in its own order
/// @param desk       the farm's name and the fields of its stations are enough
std::vector<alerts::Telling> trace(const Letter& letter, const Recipient& recipient,
                                   std::span<const alerts::Said> said, const Desk& desk);

/// The daily line: one line a field that is in its flowering window. Nothing when none is.
std::vector<Letter> compose_daily(std::span<const Recipient> recipients, const Desk& desk);

/// The store has taken nothing for a while, or could not even be opened.
struct StoreTrouble {
  Instant since;
  std::string why;          // what was tried, on what, why not
  bool begun = true;        // false: it could not be opened, so nothing is read or judged
  bool letters_go = false;  // only readings are refused, so that decisions and letters find room
};
/// The day that a letter of it speaks of: from 06:00 to 06:00.
CivilDay store_trouble_day(const Calendar& calendar, Instant at);
/// One letter a recipient about a computer that can keep nothing: how each watched field stands,
/// and what to look at. Its identity is that of the day (from 06:00 on) and of the worst level of
/// the recipient's fields, which is its severity. The only letter that goes without standing in the
/// store. Of a watch that could not begin it says that nothing is watched; the desk has no fields.
/// Where letters go, it is one a day, of severity minor, about a disk that is nearly full.
std::vector<Letter> compose_store_trouble(const StoreTrouble& trouble,
                                          std::span<const Recipient> recipients, const Desk& desk);

/// One count of seeds and the heat that went before it.
struct SeedCount {
  CivilDay date{};
  int held = 0, looked = 0;       // clusters with a swelling seed, of so many
  std::optional<double> exposed;  // 0…1 of that season's flowers, to that day; this season only
  std::optional<int> hot_days;    // with an hour at the severe threshold in the 30 days before,
                                  // where the weather is kept
};

/// One field's week (or season) as the review tells it: seen, not seen, decided, told.
struct FieldReview {
  season::FieldStatus status;                     // at the end
  std::vector<season::HeatDay> days;              // of the period, oldest first
  std::vector<season::HumidDay> humid_days;       // likewise
  std::map<CivilDay, Celsius> coolest;            // lowest hourly mean of a day, where measured
  std::vector<alerts::Episode> episodes;          // that touch the period
  std::vector<alerts::Said> said;                 // in the period
  std::vector<season::Watered> irrigations;       // and what each did
  std::vector<SeedCount> seed_counts;             // of the period; of a season all that are kept
  std::vector<season::DayExposure> exposed_days;  // of the period, severe ones, by what is believed
  std::vector<field::Scouting> notes;
  int hours_expected = 0, hours_valid = 0;
  int warm_nights = 0;
  double affected_low = 0, affected_high = 0;  // 0…1, indicative
};
/// What a station's own hours were worth in the period.
struct StationReview {
  std::string station;
  weather::VerdictCount verdicts;
};
/// Two stations that no longer differ as they did.
struct DriftReview {
  std::string one, other;
  weather::Drift drift;  // one less the other
};
struct Review {
  std::string title;         // "Week 2026-W28" or "Season 2026"
  CivilDay first{}, last{};  // both included
  std::vector<FieldReview> fields;
  std::vector<alerts::Said> said_of_stations;
  std::vector<StationReview> stations;
  std::vector<DriftReview> drifts;  // only the large ones
  int letters_sent = 0, letters_waiting = 0, letters_parked = 0;
  std::vector<std::string> parked;             // one line each: who, what, why
  std::vector<alerts::Episode> mail_troubles;  // that touch the period
  std::vector<std::string> troubles;           // service troubles of the period, one line each
};
/// What an irrigation did, without its time and depth: "root zone 1.90 in short before, 1.40 in
/// after; leaves wet until sunrise"; empty where nothing is known of it.
std::string effect_words(const season::Watered& watered, const Desk& desk);

std::string compose_review(const Review& review, const Desk& desk);
std::vector<Letter> compose_weekly(const Review& review, std::span<const Recipient> recipients,
                                   const Desk& desk);

/// One letter that names all that waited past the limits of an address, worst first; the worst
/// stands in it whole. Its identity hangs on the oldest of them alone.
/// @param waited  one or more letters to this recipient, any order
Letter compose_digest(std::span<const Letter> waited, const Recipient& recipient, const Desk& desk);

/// The one screen of `antherd now`.
std::string compose_now(const Desk& desk, std::span<const alerts::Said> unclosed,
                        std::span<const std::string> attention);

/// What is doubtful at a station: "temperature looks like °F read as °C"; empty for nothing.
std::string doubts_of(const StationStory& station);

/// "bench and creek have drifted apart: bench is 2.1 °C warmer against creek than …".
std::string drift_sentence(const DriftReview& drift, const Desk& desk);

/// The standing caution of every letter and page.
std::string standing_caution(Language language);

}  // namespace antherd::letters
