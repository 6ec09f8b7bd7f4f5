// The lookout: hours, diary and ledger in memory, one fold a field, and one turn that says what is
// to be told now. The service and `replay` turn the same lookout; it must not know the store, the
// network, files or what time it is. Everything here may be lost: it is made anew from facts.
#pragma once

#include <map>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "core/alerts/decide.hpp"
#include "core/alerts/stations.hpp"
#include "core/letters/compose.hpp"
#include "core/season/fold.hpp"
#include "core/weather/suspicion.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// By station: hours before this are closed.
using Closed = std::map<std::string, HourStart>;

/// What a source said of itself lately; for letters about stations.
struct SourceNews {
  int refused_rows_24 = 0;
  std::string last_trouble;
};

/// One turn's outcome: what to save together.
struct Turn {
  std::vector<alerts::Telling> tellings;
  std::vector<alerts::Said> said;
  std::vector<letters::Letter> letters;
};

class Lookout {
 public:
  explicit Lookout(std::shared_ptr<const settings::Settings> settings);

  // Facts. Hours are in time order, one an hour; replacing a past hour folds again from sowing.
  void replace_hours(const std::string& station, HourStart from, HourStart to,
                     std::vector<weather::Hour> fresh);
  void set_diary(const std::string& field, field::Diary diary);
  /// Times of accepted samples that hold a temperature, any order, repeats allowed; the last 10
  /// days are kept, counted from the newest that can be believed: a stray stamp makes nothing
  /// forgotten. Without a temperature no heat is watched, so only these break a silence.
  void add_sample_times(const std::string& station, const std::vector<Instant>& times);
  /// Likewise of samples without one.
  void add_bare_times(const std::string& station, const std::vector<Instant>& times);
  /// The times of samples, each to its kind.
  void add_samples(const std::string& station, const std::vector<weather::Sample>& samples);
  void set_ledger(std::vector<alerts::Said> said);
  /// What a person marked as seen meanwhile is seen here too. All else stays as it is: the store
  /// may not hold yet what was said last.
  void take_seen(const std::vector<alerts::Said>& stored);
  void set_first_start(std::optional<Instant> at) { policy_.first_start = at; }
  /// How old the station's readings were when they came; live arrivals alone.
  void set_arrivals(const std::string& station, weather::Arrivals arrivals);
  void set_source_news(const std::string& station, SourceNews news);
  /// While the computer's clock was never set: from when on the station is waited for, so that its
  /// silence is no longer than this desk has heard it. Nothing: the stamps alone say it.
  void set_waited_from(const std::string& station, std::optional<Instant> from);
  /// Episodes of the mail as the outbox tells them.
  void set_mail_troubles(std::vector<alerts::Episode> troubles) {
    mail_troubles_ = std::move(troubles);
  }

  /// Folds every field up to its closed hours and decides what to say.
  Turn turn(Instant now, const Closed& closed, bool clock_set = true);

  // For screens and reviews.
  letters::Desk desk(Instant now) const;
  const settings::Settings& settings() const { return *settings_; }
  const season::State& state(const std::string& field) const;
  const season::Plan& plan(const std::string& field) const;
  const season::DiaryView& diary(const std::string& field) const;
  season::StationHours hours_of(const std::string& field) const;
  /// As gathered: what is stored.
  const std::vector<weather::Hour>& station_hours(const std::string& station) const;
  /// The same with what shows only over days (weather/suspicion.hpp): what is folded and shown.
  const std::vector<weather::Hour>& judged_hours(const std::string& station) const;
  /// The newest with a temperature.
  std::optional<Instant> last_sample(const std::string& station,
                                     Instant until = Instant::max()) const;
  /// The newest, whatever it holds.
  std::optional<Instant> last_of_any(const std::string& station,
                                     Instant until = Instant::max()) const;
  /// Whether the station still sends readings, but for long none with a temperature.
  bool lacks_temperature(const std::string& station, Instant now) const;
  /// The newest sample that follows another within two intervals, of any station: by these a
  /// computer whose clock is not set may tell the time. A stray stamp moves no clock.
  std::optional<Instant> time_of_stations() const;
  const std::vector<alerts::Said>& ledger() const { return said_; }
  /// Episodes of fields and stations as they stood at the last turn.
  const std::vector<alerts::Episode>& episodes() const { return episodes_; }
  void set_clock(bool set) { clock_set_ = set; }

 private:
  struct FieldMemory {
    season::Plan plan;
    season::DiaryView diary;
    season::State state;
    HourStart folded_until{};  // hours before it are folded
    bool stale = true;         // a fact of the past changed: fold again from sowing
  };
  struct StationMemory {
    weather::Station station;
    std::vector<weather::Hour> hours;              // as gathered
    std::vector<weather::Hour> judged;             // with suspicions
    std::optional<weather::Suspector> checkpoint;  // has seen the first `checkpoint_at` hours
    std::size_t checkpoint_at = 0;
    std::vector<Instant> times;       // of samples with a temperature
    std::vector<Instant> bare_times;  // of those without
    SourceNews news;
    weather::Arrivals arrivals;
    std::optional<Instant> waited_from;
  };

  void judge_anew(const std::string& name, StationMemory& station, std::size_t unchanged);
  void fold_field(FieldMemory& field, const Closed& closed);
  void gather_station_episodes(const StationMemory& station, Instant now);
  std::optional<Instant> silence_told(const std::string& station) const;
  void heed_arrivals(const StationMemory& station, Seconds patience, Instant now,
                     std::vector<alerts::Silence>& gaps) const;
  letters::StationStory story_of(const StationMemory& station, Instant now) const;

  std::shared_ptr<const settings::Settings> settings_;
  alerts::Policy policy_;
  std::map<std::string, FieldMemory> fields_;
  std::map<std::string, StationMemory> stations_;
  std::vector<alerts::Said> said_;
  std::int64_t last_place_ = 0;  // in the ledger
  std::vector<alerts::Episode> episodes_, mail_troubles_;
  bool clock_set_ = true;
};

/// The next time the daily or weekly letter is due after `now`.
Instant next_daily(const settings::Settings& settings, Instant now);
Instant next_weekly(const settings::Settings& settings, Instant now);

}  // namespace antherd::service
