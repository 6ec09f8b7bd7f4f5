// Notices: each is said once a season; and the names that the ledger keeps. See decide.hpp.
#include <algorithm>
#include <array>
#include <cstdio>
#include <tuple>

#include "core/alerts/story.hpp"

namespace antherd::alerts {

namespace {

// Two seasons of one field lie further apart, and no re-fold moves a notice as far.
constexpr Seconds one_season{90 * 24 * 3600};
// A stage that moves by less is not told again (science §5).
constexpr std::chrono::days small_move{3};

std::chrono::sys_days day_of(const Notice& notice) {
  if (notice.day) return std::chrono::sys_days(notice.day->time_since_epoch());
  return std::chrono::floor<std::chrono::days>(notice.at);
}

// "stage/north bench/window-near/" — the date follows.
std::string stem_of(const Notice& notice) {
  return std::string(name_of(notice.kind)) + "/" + notice.subject + "/" + notice.key + "/";
}

bool same_matter(const Notice& notice, const Said& said) {
  if (said.kind != notice.kind || said.subject != notice.subject) return false;
  const std::string stem = stem_of(notice);
  constexpr std::size_t date_length = 10;
  return said.episode.size() == stem.size() + date_length && said.episode.starts_with(stem) &&
         std::chrono::abs(said.about - notice.at) < one_season;
}

bool was_said(const Notice& notice, std::span<const Said> said, bool late) {
  return std::any_of(said.begin(), said.end(), [&](const Said& entry) {
    if (!same_matter(notice, entry)) return false;
    if (notice.kind != Kind::stage || !notice.day || !entry.until) return true;
    const auto move = std::chrono::abs(*entry.until - Instant(day_of(notice)));
    if (notice.key.starts_with("note-held"))
      return move == Seconds{0};       // each note is its own matter
    return late || move < small_move;  // a move that is learned late is no longer news
  });
}

// "The window is near" says nothing once it is open.
bool overtaken(const Notice& notice, std::span<const Notice> notices, Instant now) {
  if (notice.kind != Kind::stage || notice.key != "window-near") return false;
  if (notice.day && now >= Instant(day_of(notice)) + std::chrono::days{1}) return true;
  return std::any_of(notices.begin(), notices.end(), [&](const Notice& other) {
    return other.kind == Kind::stage && other.subject == notice.subject &&
           other.key == "window-opens" && other.at >= notice.at &&
           other.at - notice.at < one_season && other.at <= now;
  });
}

Telling telling_of(const Notice& notice, bool late) {
  Telling telling;
  telling.saying = Saying::notice;
  telling.kind = notice.kind;
  telling.subject = notice.subject;
  telling.episode = stem_of(notice) + date_text(day_of(notice));
  telling.start = notice.at;
  telling.certainty = notice.kind == Kind::stage ? Certainty::possible : Certainty::observed;
  telling.figure = notice.figure;
  telling.about = notice.at;
  telling.late = late;
  telling.day = notice.day;
  telling.key = notice.key;
  return telling;
}

}  // namespace

std::vector<Telling> tellings_of(std::span<const Notice> notices, std::span<const Said> said,
                                 const Policy& policy, Instant now) {
  std::vector<const Notice*> ordered;
  for (const Notice& notice : notices) ordered.push_back(&notice);
  std::sort(ordered.begin(), ordered.end(), [](const Notice* a, const Notice* b) {
    return std::tie(a->at, a->kind, a->subject, a->key, a->day, a->figure) <
           std::tie(b->at, b->kind, b->subject, b->key, b->day, b->figure);
  });
  std::vector<Telling> tellings;
  std::vector<Said> known(said.begin(), said.end());  // with what is said here: twins say it once
  std::erase_if(known, [](const Said& entry) { return !is_notice(entry.kind); });
  for (const Notice* notice : ordered) {
    if (notice->at > now || now - notice->at > policy.forget_after) continue;
    if (policy.first_start && notice->at < *policy.first_start) continue;
    const bool late = now - notice->at > policy.late_after;
    if (overtaken(*notice, notices, now) || was_said(*notice, known, late)) continue;
    tellings.push_back(telling_of(*notice, late));
    known.push_back(record_of(tellings.back(), now));
  }
  return tellings;
}

std::string date_text(std::chrono::sys_days day) {
  const std::chrono::year_month_day date(day);
  std::array<char, 48> text{};
  std::snprintf(text.data(), text.size(), "%04d-%02u-%02u", static_cast<int>(date.year()),
                static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()));
  return text.data();
}

std::string time_text(Instant at) {
  const auto day = std::chrono::floor<std::chrono::days>(at);
  const std::chrono::hh_mm_ss clock(at - day);
  std::array<char, 48> text{};
  std::snprintf(text.data(), text.size(), "T%02d:%02d:%02dZ",
                static_cast<int>(clock.hours().count()), static_cast<int>(clock.minutes().count()),
                static_cast<int>(clock.seconds().count()));
  return date_text(day) + text.data();
}

std::string identity(Kind kind, const std::string& subject, Instant start) {
  return std::string(name_of(kind)) + "/" + subject + "/" + time_text(start);
}

}  // namespace antherd::alerts
