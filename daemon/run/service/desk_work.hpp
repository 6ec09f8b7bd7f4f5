// The owner's work of one turn, without sockets, threads or a clock of its own: look at the
// sources, keep what came, decide, carry. Tests drive it with any time they like.
#pragma once

#include <atomic>
#include <functional>
#include <map>
#include <memory>
#include <string>
#include <vector>

#include "edge/station/poll.hpp"
#include "edge/store/store.hpp"
#include "run/service/carrier.hpp"
#include "run/service/distress.hpp"
#include "run/service/front_page.hpp"
#include "run/service/heartbeat.hpp"
#include "run/service/intake.hpp"
#include "run/service/keeper.hpp"
#include "run/service/patient_look.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

class DeskWork {
 public:
  using Ask = std::function<void(const std::string& station, const station::HttpForm&,
                                 const station::PollMemory&)>;

  /// Opens the store as the one service of its folder and reads everything back.
  ///
  /// Here and below `now` is the computer's time. While its clock is not set the desk works by a
  /// time of its own, see working().
  /// @param stopping  while true no lock of the store is waited for long; outlives the desk
  static Result<std::unique_ptr<DeskWork>> open(std::shared_ptr<const settings::Settings> settings,
                                                Instant now, bool clock_set = true,
                                                const std::atomic<bool>* stopping = nullptr);

  void on_send(Carrier::Send send) { send_ = std::move(send); }
  void on_poll(Ask ask) { ask_ = std::move(ask); }
  void on_beat(std::function<void(const std::string& url)> beat) { beat_ = std::move(beat); }

  /// Another way to look into a drop folder, and how long a look is waited for: for tests.
  void look_with(Looker looker, std::chrono::milliseconds patience) {
    looker_ = std::move(looker);
    look_patience_ = patience;
  }

  /// One turn. @return when to turn again, at most 60 s later
  Instant turn(Instant now, bool clock_set);
  /// The drop folders are looked into at the next turn, not only every 60 s.
  void look_soon() { look_due_ = true; }

  void poll_answered(const std::string& station, const station::Answer& answer, Instant now);
  void life_answered(const Outcome& outcome, Instant now);
  bool before_dot(std::int64_t item, Instant now) {
    return Distress::mine(item) ? distress_.busy() : carrier_->before_dot(item, working(now));
  }
  void mail_spoken(std::int64_t item, const mail::Spoken& spoken, Instant now);

  /// Reads the settings file again: whole or not at all; complaints go to the log.
  void reload(Instant now);
  /// New settings wait for the end of the letter under way.
  bool reload_waits() const { return reload_wanted_; }
  /// Stores what is in memory.
  void finish(Instant now);

  /// The time that the desk works by. A clock that is not set is taken as it is only where it is
  /// not behind what the store and the stations know, nor years ahead of it; else time goes on from
  /// there. May be called from another thread.
  Instant working(Instant now) const { return now + Seconds{ahead_.load()}; }

  /// The store is damaged, beyond doubt: the desk rests, and only a start heals it, for that sets
  /// the damaged file aside.
  const std::optional<Failure>& broken() const { return broken_; }

  std::vector<std::string> folders() const;
  std::string status_line(Instant now) const;
  const Keeper& keeper() const { return *keeper_; }
  Keeper& keeper() { return *keeper_; }
  store::Store& store() { return store_; }

 private:
  struct Source {
    std::vector<station::Bookmark> bookmarks;  // of a drop folder
    PatientLook look;
    station::PollMemory memory;  // of a polled station
    Instant next_poll;
    bool asked = false, answered = false;
    std::optional<Instant> looked;    // read, or told in full why it cannot be
    std::map<CivilDay, int> refused;  // rows by day
    std::string last_trouble;
    bool waits = false;  // its files are not read on: the store takes nothing and memory is full
    weather::Arrivals arrivals;
    std::optional<Instant> newest;  // reading
    Instant heard;                  // by the computer's time: newer than it came, or waited since
    std::map<std::string, Instant> seen;  // by a bookmark's path: when its file was there last
    std::optional<CivilDay> swept;        // when bookmarks without a file were last dropped
  };
  /// What is made of settings and the store: taken up as a whole or not at all.
  struct Works {
    std::unique_ptr<Keeper> keeper;
    std::unique_ptr<Carrier> carrier;
    std::map<std::string, Source> sources;
  };

  DeskWork(std::shared_ptr<const settings::Settings> settings, store::Store store);
  Result<Works> prepare(const std::shared_ptr<const settings::Settings>& settings,
                        std::int64_t number, Instant now);
  void take_up(Works works, Instant now);
  Outcome keep_all(Instant now);
  std::optional<Instant> known_time() const;
  void mind_clock(Instant now, bool clock_set, std::optional<Instant> known);
  void mind_waiting();
  static bool poll_due(const settings::Station& station, const Source& source, Instant now);
  Instant turn_at(Instant now);
  void look(Instant now);
  bool look_into_drop(const settings::Station& station, Source& source, Instant now);
  void forget_gone_files(const std::string& station, Source& source,
                         const std::vector<std::string>& names, Instant now);
  void look_into_diary(Instant now);
  void ask_stations(Instant now);
  bool settled(Instant now);
  bool has_another_form(const settings::Station& station, store::Notes& forms) const;
  bool was_misread(const settings::Station& station, store::Notes& forms) const;
  void take_readings(const std::string& station, const station::Readings& readings,
                     const store::Notes& notes, Instant now);
  void remember_arrivals(const std::string& name, Source& source, Keeper& keeper,
                         Instant now) const;
  store::Notes note_arrivals(const std::string& station, const station::Readings& readings,
                             Instant now);
  void mind_step(Instant now, bool clock_set);
  void note_trouble(const std::string& station, const std::string& sentence);
  void tell_news(const std::string& station, Instant now);
  void log_strange_fields(Instant now);
  void log_beginning();
  void log_kept(const Kept& kept);
  bool comes_bare(const alerts::Telling& telling) const;
  void mind_reserve(Instant now);
  bool mind_damage(Instant now);
  void note_distress(const Kept& kept, Instant now);
  void carry(Instant now);
  bool line_busy() const { return carrier_->busy() || distress_.busy(); }
  void note_mail_trouble();
  void give_sign_of_life(bool kept_well, Instant now);
  void log_once(const std::string& what, const std::string& sentence);

  std::shared_ptr<const settings::Settings> settings_;
  store::Store store_;
  std::unique_ptr<Keeper> keeper_;
  std::unique_ptr<Carrier> carrier_;
  Distress distress_;
  FrontPage front_page_;
  Heartbeat heartbeat_;
  std::function<void(const std::string& url)> beat_;
  Carrier::Send send_;
  Ask ask_;
  Looker looker_ = station::look_into;
  std::chrono::milliseconds look_patience_{20'000};  // of the real clock; then it is left to itself
  const std::atomic<bool>* stopping_ = nullptr;
  std::map<std::string, Source> sources_;
  std::map<std::string, std::string> logged_;  // the last sentence of each kind of trouble
  std::atomic<std::int64_t> ahead_{0};         // s from the computer's clock to working()
  bool clock_set_ = true;
  bool never_set_ = false;            // in this life
  std::optional<Instant> last_turn_;  // by a clock that is set
  std::string diary_version_ = "unread";
  Instant next_look_{};
  bool look_due_ = true;
  std::optional<Instant> settling_since_;  // until every source was looked at once
  bool reload_wanted_ = false;             // put off until the letter under way has ended
  std::int64_t settings_number_ = 0;       // an answer that older settings asked for is not read
  bool reserve_told_ = false;              // that it was given up
  Instant reserve_tried_{};                // to be put back
  std::optional<Instant> checked_;         // the whole store, after a call had met damage
  std::optional<Failure> broken_;
};

}  // namespace antherd::service
