// See standstill.hpp.
#include "run/service/standstill.hpp"

#include <boost/asio.hpp>
#include <utility>

#include "edge/clock/clock.hpp"
#include "run/service/log.hpp"
#include "run/service/mail_worker.hpp"
#include "run/service/manager.hpp"

namespace antherd::service {
namespace {

namespace asio = boost::asio;
using Opened = Result<std::unique_ptr<DeskWork>>;

class Standstill {
 public:
  Standstill(std::shared_ptr<const settings::Settings> settings, RunOptions& options,
             Signals& signals)
      : settings_(std::move(settings)),
        options_(options),
        signals_(signals),
        timer_(io_),
        end_(io_),
        mail_([this](auto, auto permission) { answer_before_dot(permission); },
              [this](auto, auto spoken) { report_mail(std::move(spoken)); }) {}

  Opened wait(const Failure& first) {
    const auto began = clock::steady_now();
    signals_.heed_reload([this] { asio::post(io_, [this] { reload(); }); });
    if (options_.stop_after) {
      end_.expires_after(*options_.stop_after);
      end_.async_wait([this](const boost::system::error_code& error) {
        if (!error) end(std::unique_ptr<DeskWork>());
      });
    }
    trouble(first);
    tell_ready();  // up, though it watches nothing: the service manager must not kill it
    await_turn();
    const auto up = asio::make_work_guard(io_);
    io_.run();
    signals_.heed_reload({});
    mail_.stop();
    if (options_.stop_after) {
      *options_.stop_after -= std::chrono::floor<Seconds>(clock::steady_now() - began);
    }
    return std::move(*opened_);
  }

 private:
  void await_turn() {
    timer_.expires_after(options_.time.wait_until(options_.time.now() + opened_again_after));
    timer_.async_wait([this](const boost::system::error_code& error) {
      if (!error) turn();
    });
  }

  void turn() {
    tell_alive();
    // A letter at the line is waited for: it would be cut off, and perhaps come twice.
    if (!distress_.busy()) {
      auto desk =
          DeskWork::open(settings_, options_.time.now(), options_.time.set(), &signals_.stopping());
      if (desk) log_info("the store could be opened: the watch begins");
      if (desk || !desk.failure().passes) return end(std::move(desk));
      trouble(desk.failure());
    }
    await_turn();
  }

  /// In the log when it is another one; past the store by letter while it lasts.
  void trouble(const Failure& failure) {
    const std::string sentence = failure.sentence();
    if (sentence != std::exchange(logged_, sentence)) {
      log_error("nothing is watched: " + sentence + "; the store is tried again every 30 s");
    }
    tell_status("nothing is watched: " + sentence);
    if (!options_.time.set()) return;
    const Instant now = options_.time.now();
    distress_.note(failure, now);
    const auto desk = [&] {
      letters::Desk bare;
      bare.farm = settings_->farm;
      bare.calendar = &settings_->calendar;
      bare.now = now;
      bare.units = settings_->units;
      bare.exercise = settings_->exercise;
      return bare;
    };
    const auto send = [this](mail::Server server, std::int64_t item, letters::Letter letter) {
      mail_.send(std::move(server), item, std::move(letter));
    };
    for (const std::string& said : distress_.carry(*settings_, desk, send, now)) log_warning(said);
  }

  /// New settings may name another folder for the store.
  void reload() {
    tell_reloading();
    settings::Reading reading = settings::read_file(settings_->path);
    for (const auto& complaint : reading.complaints) log_error(complaint.sentence());
    if (reading.settings) {
      settings_ = std::make_shared<const settings::Settings>(std::move(*reading.settings));
      log_info("the settings were read again");
    } else {
      log_error("the settings were read again and have faults: the old ones stay in force");
    }
    tell_ready();
    timer_.cancel();
    asio::post(io_, [this] { turn(); });
  }

  // Called in the worker's thread: they only post.
  void answer_before_dot(std::shared_ptr<Permission> permission) {
    asio::post(io_, [this, permission] { permission->give(distress_.busy()); });
  }
  void report_mail(mail::Spoken spoken) {
    asio::post(io_, [this, spoken = std::move(spoken)] {
      mail_.rest();
      log_warning(distress_.received(spoken, options_.time.now()));
    });
  }

  void end(Opened opened) {
    opened_ = std::move(opened);
    io_.stop();
  }

  std::shared_ptr<const settings::Settings> settings_;
  RunOptions& options_;
  asio::io_context io_;
  Signals& signals_;
  asio::steady_timer timer_, end_;
  Distress distress_{false};
  std::string logged_;
  std::optional<Opened> opened_;
  MailWorker mail_;
};

}  // namespace

Opened open_desk(std::shared_ptr<const settings::Settings> settings, RunOptions& options,
                 Signals& signals) {
  Opened opened =
      DeskWork::open(settings, options.time.now(), options.time.set(), &signals.stopping());
  if (opened || !opened.failure().passes) return opened;
  return Standstill(std::move(settings), options, signals).wait(opened.failure());
}

}  // namespace antherd::service
