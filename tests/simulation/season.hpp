// One season of one farm under a virtual clock: the service's own desk is turned as its loop would
// turn it, while the station, the mail server, the disk, the clock, the power and the grower do
// what the seed ordered. The checks look on.
#pragma once

#include <memory>
#include <optional>
#include <set>
#include <string>
#include <vector>

#include "complaints.hpp"
#include "edge/store/power_disk.hpp"
#include "judge.hpp"
#include "mail_server.hpp"
#include "run/service/desk_work.hpp"
#include "run/service/timekeeper.hpp"
#include "service/ground.hpp"
#include "station_life.hpp"
#include "witness.hpp"

namespace simulation {

/// What a season came to, for the line that is printed.
struct Tally {
  int turns = 0, kills = 0, cuts = 0, opens = 0, faults = 0;
  int letters = 0, sent = 0, parked = 0, merged = 0, repeats = 0, alerts = 0;
  long heaviest = 0;  // bytes that a desk gave back when it ended
  void add(const Tally& other);
};

class Season {
 public:
  Season(const Kind& kind, std::uint64_t seed);
  ~Season();
  void run();
  const Complaints& complaints() const { return complaints_; }
  const Tally& tally() const { return tally_; }

 private:
  enum class Death { kill, cut };
  /// A conversation with the mail server that is under way.
  struct Talk {
    std::int64_t item = 0;
    letters::Letter letter;
    Course course = Course::accepted;
    int phase = 0;  // 0 handed over, 1 the dot may go, 2 the answer is due
    Instant until;  // the server thinks until then
  };

  /// What the service's timekeeper makes of the computer's clock.
  Instant service_time() {
    return steady_.now(now_ + offset_, now_.time_since_epoch(), clock_set_);
  }
  /// The service knows what time it is, and what it decides is committed at once.
  bool plain() {
    return desk_->working(service_time()) == now_ && !store_bad_since_ &&
           now_ > store_bad_until_ + hours{1};
  }
  Seconds step();
  void moment();
  void begin(const Fault& fault);
  void end(const Fault& fault);
  void begin_clock(const Fault& fault);
  void begin_death(const Fault& fault);
  void open();
  void die(Death death, Seconds off);
  bool died();
  void end_desk();
  void turn();
  void converse();
  bool talk_on();
  bool dies_in_mail(int phase);
  void ended(mail::How how, mail::About about, int code, const std::string& sentence);
  void answer_polls();
  void water();
  void diary(const Fault& fault);
  void reload(bool broken);
  void finish();

  const Kind& kind_;
  std::uint64_t seed_;
  synthetic::Dice dice_;
  ground::Folder folder_;
  std::shared_ptr<const settings::Settings> settings_;
  ground::PowerDisk disk_;
  Complaints complaints_;
  std::vector<Fault> faults_;
  std::size_t next_fault_ = 0;
  std::vector<Fault> running_;
  std::vector<StationLife> stations_;
  MailServer server_;
  Judge judge_;
  std::unique_ptr<service::DeskWork> desk_;
  std::unique_ptr<Witness> witness_;
  std::optional<Talk> talk_;
  std::vector<std::pair<std::string, station::HttpForm>> asked_;
  std::vector<station::PollMemory> memories_;
  std::optional<std::pair<int, Death>> mail_death_;  // in which phase
  Death death_in_commit_ = Death::kill;
  Instant start_, end_, now_;
  Instant back_at_;  // the computer is off until then
  std::optional<Instant> store_bad_since_;
  Instant store_bad_until_;
  Instant last_shutdown_;  // by the service's own clock
  Seconds offset_{0};
  service::SteadyTime steady_;
  bool clock_set_ = true;
  CivilDay watered_{};
  Tally tally_;
};

}  // namespace simulation
