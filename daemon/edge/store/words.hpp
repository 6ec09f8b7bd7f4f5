// The words that stand in the file for enumerators. They belong to the schema and change only with
// its number, whatever other rooms come to call these things.
#pragma once

#include <array>
#include <optional>
#include <string_view>
#include <utility>

#include "core/alerts/decide.hpp"
#include "core/failures/result.hpp"
#include "core/field/field.hpp"
#include "core/outbox/outbox.hpp"
#include "core/weather/hour.hpp"

namespace antherd::store {

template <class Value, std::size_t size>
using Words = std::array<std::pair<Value, std::string_view>, size>;

inline constexpr Words<alerts::Kind, 10> kind_words{
    {{alerts::Kind::heat, "heat"},
     {alerts::Kind::heat_ahead, "heat_ahead"},
     {alerts::Kind::humid_spell, "humid_spell"},
     {alerts::Kind::no_data, "no_data"},
     {alerts::Kind::doubtful_sensor, "doubtful_sensor"},
     {alerts::Kind::mail_trouble, "mail_trouble"},
     {alerts::Kind::stage, "stage"},
     {alerts::Kind::sprinkler_streak, "sprinkler_streak"},
     {alerts::Kind::diary_gap, "diary_gap"},
     {alerts::Kind::season, "season"}}};
inline constexpr Words<alerts::Saying, 7> saying_words{
    {{alerts::Saying::opened, "opened"},
     {alerts::Saying::raised, "raised"},
     {alerts::Saying::reminder, "reminder"},
     {alerts::Saying::eased, "eased"},
     {alerts::Saying::ended, "ended"},
     {alerts::Saying::notice, "notice"},
     {alerts::Saying::learned_late, "learned_late"}}};
inline constexpr Words<alerts::Level, 4> level_words{{{alerts::Level::none, "none"},
                                                      {alerts::Level::moderate, "moderate"},
                                                      {alerts::Level::severe, "severe"},
                                                      {alerts::Level::extreme, "extreme"}}};
inline constexpr Words<alerts::Severity, 4> severity_words{
    {{alerts::Severity::minor, "minor"},
     {alerts::Severity::moderate, "moderate"},
     {alerts::Severity::severe, "severe"},
     {alerts::Severity::extreme, "extreme"}}};
inline constexpr Words<outbox::State, 7> state_words{{{outbox::State::waiting, "waiting"},
                                                      {outbox::State::sending, "sending"},
                                                      {outbox::State::in_doubt, "in_doubt"},
                                                      {outbox::State::sent, "sent"},
                                                      {outbox::State::parked, "parked"},
                                                      {outbox::State::held, "held"},
                                                      {outbox::State::merged, "merged"}}};
inline constexpr Words<field::Method, 4> method_words{{{field::Method::none, "none"},
                                                       {field::Method::overhead, "overhead"},
                                                       {field::Method::drip, "drip"},
                                                       {field::Method::furrow, "furrow"}}};
inline constexpr Words<weather::Element, 7> element_words{
    {{weather::Element::temperature, "temperature"},
     {weather::Element::humidity, "humidity"},
     {weather::Element::dew_point, "dew_point"},
     {weather::Element::rain, "rain"},
     {weather::Element::wind, "wind"},
     {weather::Element::solar, "solar"},
     {weather::Element::wetness, "wetness"}}};
inline constexpr Words<weather::Verdict, 3> verdict_words{{{weather::Verdict::good, "good"},
                                                           {weather::Verdict::suspect, "suspect"},
                                                           {weather::Verdict::wrong, "wrong"}}};
inline constexpr Words<weather::Reason, 8> reason_words{
    {{weather::Reason::none, "none"},
     {weather::Reason::out_of_range, "out_of_range"},
     {weather::Reason::above_saturation, "above_saturation"},
     {weather::Reason::spike, "spike"},
     {weather::Reason::unconfirmed, "unconfirmed"},
     {weather::Reason::stuck, "stuck"},
     {weather::Reason::dew_above_temperature, "dew_above_temperature"},
     {weather::Reason::rain_in_dry_air, "rain_in_dry_air"}}};

/// The word of a value. Aborts when the table lacks it: then the schema has to grow.
template <class Value, std::size_t size>
std::string_view word_of(const Words<Value, size>& words, Value value) {
  for (const auto& [candidate, word] : words) {
    if (candidate == value) return word;
  }
  ANTHERD_CHECK(false && "a value without a word in the schema");
  return {};
}

/// The value of a word; nothing for a word that this schema does not have.
template <class Value, std::size_t size>
std::optional<Value> value_of(const Words<Value, size>& words, std::string_view word) {
  for (const auto& [value, candidate] : words) {
    if (candidate == word) return value;
  }
  return std::nullopt;
}

}  // namespace antherd::store
