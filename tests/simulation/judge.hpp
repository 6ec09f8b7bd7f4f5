// The rules that no season may break. Each look compares what is newly committed with what a reader
// may expect; the last one counts the whole season. Nothing here asks the service what it thinks of
// itself, except for the episodes that a replay must find too.
#pragma once

#include <map>
#include <memory>
#include <set>
#include <string>
#include <vector>

#include "complaints.hpp"
#include "mail_server.hpp"
#include "run/service/desk_work.hpp"
#include "station_life.hpp"
#include "witness.hpp"

namespace simulation {

class Judge {
 public:
  Judge(const Kind& kind, std::shared_ptr<const settings::Settings> settings,
        Complaints& complaints)
      : kind_(kind), settings_(std::move(settings)), complaints_(complaints) {}
  void use(std::shared_ptr<const settings::Settings> settings) { settings_ = std::move(settings); }

  /// What was committed since the last look. `clock_right`: the service knows what time it is.
  void look(Witness& witness, Instant now, bool clock_right);
  /// The letter is handed to the mail server.
  void handed(Witness& witness, std::int64_t item, const letters::Letter& letter);
  /// The last dot goes.
  void dot(Witness& witness, std::int64_t item);
  /// A new process reads what the old one left: nothing that was seen is gone.
  void returned(Witness& witness);
  /// The end of a season that was left alone for some days.
  void finish(service::DeskWork& desk, Witness& witness, const std::vector<StationLife>& stations,
              const std::vector<Delivery>& taken, Instant now);

  int letters() const { return static_cast<int>(letters_.size()); }
  int alerts() const { return static_cast<int>(said_.size()); }
  int sent = 0, parked = 0, merged = 0, repeats = 0;

 private:
  struct Seen {
    LetterRow row;
    Instant at;  // true time
    bool clock_right = true;
  };
  struct Said {
    SaidRow row;
    Instant at;
    bool clock_right = true;
  };

  void judge_said(const Said& said);
  void judge_letter(const Seen& seen);
  void judge_limit(const Seen& seen);
  void judge_together(const std::vector<Said>& said, const std::vector<Seen>& letters);
  void judge_mail(Witness& witness, const std::vector<Delivery>& taken, Instant now);
  void judge_repeats();
  void judge_samples(Witness& witness, const StationLife& station, Instant now);
  void judge_hours(service::DeskWork& desk, Witness& witness, const std::string& station,
                   Instant now);
  void judge_gaps(service::DeskWork& desk, Witness& witness, const std::string& station,
                  Instant now);
  void judge_replay(service::DeskWork& desk, Instant now);
  void judge_lowering(service::DeskWork& desk);
  bool told(const letters::Recipient& recipient, const std::string& subject) const;
  const letters::Recipient* recipient(const std::string& address) const;

  const Kind& kind_;
  std::shared_ptr<const settings::Settings> settings_;
  Complaints& complaints_;
  std::vector<Said> said_;
  std::map<std::int64_t, Seen> letters_;
  std::map<std::string, std::string> identities_;  // identity → recipient and subject
};

}  // namespace simulation
