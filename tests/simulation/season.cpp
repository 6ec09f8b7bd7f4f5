// The course of a season; see season.hpp. What the faults do stands in season_faults.cpp.
#include "season.hpp"

#include <malloc.h>

#include <algorithm>

#include "run/service/log.hpp"
#include "support/catch.hpp"

namespace simulation {
namespace {

constexpr const char* file = "antherd.toml";
// SQLite keeps 2 MB of pages; the rest is the season's hours and what was said.
constexpr long most_memory = 6L * 1024 * 1024;

std::shared_ptr<const settings::Settings> settings_at(const ground::Folder& folder,
                                                      const std::string& text) {
  folder.write(file, text);
  folder.write("drop/.begun", "");
  folder.write("diary/.begun", "");
  settings::Reading reading = settings::read_file(folder / file);
  for (const auto& complaint : reading.complaints) UNSCOPED_INFO(complaint.sentence());
  REQUIRE(reading.settings);
  return std::make_shared<const settings::Settings>(std::move(*reading.settings));
}

CivilDay day_from(const std::string& date) {
  int year = 0;
  unsigned month = 0, day = 0;
  REQUIRE(std::sscanf(date.c_str(), "%d-%u-%u", &year, &month, &day) == 3);
  return CivilDay{
      CivilDate{std::chrono::year(year), std::chrono::month(month), std::chrono::day(day)}};
}

}  // namespace

void Tally::add(const Tally& other) {
  turns += other.turns;
  kills += other.kills;
  cuts += other.cuts;
  opens += other.opens;
  faults += other.faults;
  letters += other.letters;
  sent += other.sent;
  parked += other.parked;
  merged += other.merged;
  repeats += other.repeats;
  alerts += other.alerts;
  heaviest = std::max(heaviest, other.heaviest);
}

Season::Season(const Kind& kind, std::uint64_t seed)
    : kind_(kind),
      seed_(seed),
      dice_(seed * 2654435761U + static_cast<std::uint64_t>(kind.days)),
      settings_(settings_at(folder_, settings_of(kind, 0))),
      disk_(static_cast<std::uint32_t>(seed)),
      complaints_(kind.name + ", seed " + std::to_string(seed), &settings_->calendar),
      server_(kind, seed),
      judge_(kind, settings_, complaints_) {
  REQUIRE(service::open_log(settings_->log));
  // The store lies on a disk of the test's own; who looks into the folder must not find it missing.
  folder_.write("store/antherd.db", "kept elsewhere");
  start_ = now_ = settings_->calendar.start_of(day_from(kind.sown));
  end_ = start_ + days{kind.days};
  faults_ = order(kind, seed, start_, end_);
  if (std::getenv("ANTHERD_ALOUD") != nullptr) {
    for (const Fault& fault : faults_) {
      std::printf("%s: %s until %s\n", ground::farm_clock(fault.from).c_str(), name_of(fault.what),
                  ground::farm_clock(fault.to).c_str());
    }
  }
  stations_.reserve(2);
  for (int number = 0; number < (kind.second_station ? 2 : 1); ++number) {
    stations_.emplace_back(kind, seed, number, folder_ / (number == 0 ? "drop" : "river"),
                           settings_->calendar);
    memories_.emplace_back();
  }
}

Season::~Season() {
  witness_.reset();
  disk_.stop();  // nobody waits for the last write
  desk_.reset();
  disk_.wake();
}

void Season::run() {
  tally_.faults = static_cast<int>(faults_.size());
  open();
  for (; now_ < end_; now_ += step()) moment();
  now_ = end_;
  moment();
  finish();
}

/// The service's own loop turns at least once a minute. Here it turns as often as something can
/// happen, and more often while letters wait.
Seconds Season::step() {
  const double u = dice_.uniform();
  const bool near = talk_ || running_.size() > 2;
  const Seconds usual = minutes{kind_.interval} - Seconds{static_cast<std::int64_t>(u * 200)};
  Seconds step = near && u < 0.3 ? Seconds{60 + static_cast<std::int64_t>(u * 1500)} : usual;
  if (talk_ && talk_->until > now_) step = std::min(step, talk_->until - now_);
  if (next_fault_ < faults_.size()) {
    step = std::min(step, std::max(Seconds{1}, faults_[next_fault_].from - now_));
  }
  return std::max(step, Seconds{1});
}

void Season::moment() {
  complaints_.at(now_);
  std::vector<Fault> over;
  std::copy_if(running_.begin(), running_.end(), std::back_inserter(over),
               [&](const Fault& fault) { return fault.to <= now_; });
  std::erase_if(running_, [&](const Fault& fault) { return fault.to <= now_; });
  for (const Fault& fault : over) end(fault);
  for (; next_fault_ < faults_.size() && faults_[next_fault_].from <= now_; ++next_fault_) {
    const Fault& fault = faults_[next_fault_];
    if (fault.to > fault.from) running_.push_back(fault);
    begin(fault);
  }
  for (StationLife& station : stations_) station.live(now_);
  if (!desk_) {
    if (now_ < back_at_) return;
    open();
    if (!desk_) return;
  }
  water();
  turn();
}

void Season::open() {
  steady_ = {};
  auto opened = service::DeskWork::open(settings_, service_time(), clock_set_);
  ++tally_.opens;
  if (died()) return;
  if (!opened) {
    if (!store_bad_since_) complaints_.add("the service starts", opened.failure().sentence());
    back_at_ = now_ + minutes{5};
    return;
  }
  desk_ = std::move(*opened);
  if (desk_->store().set_aside()) complaints_.add("the store is never damaged", "it was set aside");
  witness_ = std::make_unique<Witness>(folder_ / "store/antherd.db");
  judge_.returned(*witness_);
  desk_->on_send([this](mail::Server, std::int64_t item, letters::Letter letter) {
    judge_.handed(*witness_, item, letter);
    if (talk_) complaints_.add("one letter at a time", letter.subject);
    talk_ = Talk{item, letter, server_.course_of(letter), 0, now_};
  });
  desk_->on_poll([this](const std::string& name, const station::HttpForm& form,
                        const station::PollMemory& memory) {
    asked_.emplace_back(name, form);
    memories_.back() = memory;
  });
}

/// What the service held in memory, weighed as it is given back.
void Season::end_desk() {
  witness_.reset();
  disk_.stop();
  const auto before = mallinfo2().uordblks;
  desk_.reset();
  const auto weight = static_cast<long>(before - mallinfo2().uordblks);
  tally_.heaviest = std::max(tally_.heaviest, weight);
  if (weight > most_memory) {
    complaints_.add("memory is bounded", std::to_string(weight / 1024) + " KiB");
  }
}

/// The process ends at once, or the power with it.
void Season::die(Death death, Seconds off) {
  end_desk();
  talk_.reset();
  asked_.clear();
  if (death == Death::cut) {
    disk_.revive();
    ++tally_.cuts;
  } else {
    disk_.wake();
    ++tally_.kills;
  }
  last_shutdown_ = service_time();
  back_at_ = now_ + off;
  const Instant unstored = now_ - std::max<Seconds>(minutes{2 * kind_.interval}, minutes{20});
  for (StationLife& station : stations_) {
    if (!station.over_http()) continue;
    station.doubt_since(store_bad_since_ ? std::min(*store_bad_since_, unstored) : unstored);
  }
}

/// The disk stopped in the middle of a write, as was ordered.
bool Season::died() {
  if (!disk_.dead()) return false;
  die(death_in_commit_, Seconds{static_cast<std::int64_t>(20 + dice_.uniform() * 900)});
  return true;
}

void Season::turn() {
  for (int i = 0; i < 300 && desk_; ++i) {
    const Instant time = service_time();
    desk_->look_soon();
    const Instant wake = desk_->turn(time, clock_set_);
    ++tally_.turns;
    if (died()) return;
    judge_.look(*witness_, now_, plain());
    answer_polls();
    if (!desk_) return;
    converse();
    if (!desk_ || (wake > time && (!talk_ || talk_->until > now_))) return;
  }
  if (desk_) complaints_.add("a turn comes to rest", "300 turns at one moment");
}

void Season::answer_polls() {
  const auto asked = std::move(asked_);
  asked_.clear();
  for (const auto& [name, form] : asked) {
    for (StationLife& station : stations_) {
      if (station_name(station.number()) != name || !desk_) continue;
      desk_->poll_answered(name, station.answer(form, memories_.back(), now_, service_time()),
                           service_time());
      if (died()) return;
    }
  }
  if (asked.empty()) return;
  desk_->turn(service_time(), clock_set_);
  ++tally_.turns;
  if (!died()) judge_.look(*witness_, now_, plain());
}

bool Season::dies_in_mail(int phase) {
  if (!mail_death_ || mail_death_->first != phase) return false;
  const Death death = mail_death_->second;
  mail_death_.reset();
  die(death, Seconds{static_cast<std::int64_t>(20 + dice_.uniform() * 1500)});
  return true;
}

void Season::ended(mail::How how, mail::About about, int code, const std::string& sentence) {
  const auto item = talk_->item;
  talk_.reset();
  desk_->mail_spoken(item, {how, about, code, sentence, ""}, service_time());
}

/// As far as the conversation can go now; the loop turns at once after each end.
void Season::converse() {
  for (int i = 0; i < 200 && talk_ && desk_; ++i) {
    if (talk_->until > now_ || !talk_on()) return;
    if (died()) return;
    if (!talk_ && desk_) {
      desk_->turn(service_time(), clock_set_);
      ++tally_.turns;
      if (died()) return;
      judge_.look(*witness_, now_, plain());
    }
  }
}

/// One step of the conversation. False: nothing more for now.
bool Season::talk_on() {
  using mail::About;
  using mail::How;
  Talk& talk = *talk_;
  if (talk.phase == 0) {
    if (dies_in_mail(0)) return false;
    const std::string to = talk.letter.recipient;
    switch (talk.course) {
      case Course::no_line:
        ended(How::wait, About::server, 0, "no line");
        return true;
      case Course::put_off:
        ended(How::wait, About::server, 421, "421 later");
        return true;
      case Course::login:
        ended(How::settings_trouble, About::server, 535, "535 no");
        return true;
      case Course::refused:
        ended(How::refused, About::recipient, 550, "550 " + to);
        return true;
      case Course::lost_in_body:
        ended(How::wait, About::server, 0, "line lost");
        return true;
      default:
        break;
    }
    talk.phase = 1;
    talk.until = now_ + server_.thinks();
    return true;
  }
  if (talk.phase == 1) {
    const bool allowed = desk_->before_dot(talk.item, service_time());
    if (disk_.dead()) return true;
    if (!allowed) {
      ended(How::wait, About::server, 0, "broken off before the dot");
      return true;
    }
    judge_.dot(*witness_, talk.item);
    if (dies_in_mail(1)) return false;
    if (talk.course == Course::accepted || talk.course == Course::silent_taken) {
      server_.take(now_, talk.item, talk.letter);
    }
    talk.phase = 2;
    talk.until = now_ + server_.thinks();
    return true;
  }
  if (dies_in_mail(2)) return false;
  if (talk.course == Course::accepted) {
    ended(How::accepted, About::server, 250, "250 taken");
  } else if (talk.course == Course::put_off_letter) {
    ended(How::wait, About::letter, 451, "451 later");
  } else {
    ended(How::in_doubt, About::server, 0, "no answer after the dot");
  }
  return true;
}

void Season::finish() {
  complaints_.at(now_);
  if (!desk_) {
    complaints_.add("the service is up at the end", "it is not");
    return;
  }
  judge_.finish(*desk_, *witness_, stations_, server_.taken(), now_);
  tally_.letters = judge_.letters();
  tally_.alerts = judge_.alerts();
  tally_.sent = judge_.sent;
  tally_.parked = judge_.parked;
  tally_.merged = judge_.merged;
  tally_.repeats = judge_.repeats;
  end_desk();
  disk_.wake();
}

}  // namespace simulation
