// See loop.hpp.
#include "run/service/loop.hpp"

#include <signal.h>

#include <boost/asio.hpp>
#include <utility>

#include "run/service/desk_work.hpp"
#include "run/service/log.hpp"
#include "run/service/mail_worker.hpp"
#include "run/service/manager.hpp"
#include "run/service/poll_worker.hpp"
#include "run/service/standstill.hpp"
#include "run/service/watch_folders.hpp"

namespace antherd::service {
namespace {

namespace asio = boost::asio;

class Loop {
 public:
  Loop(std::unique_ptr<DeskWork> work, const RunOptions& options, Signals& signals)
      : work_(std::move(work)),
        options_(options),
        signals_(signals),
        timer_(io_),
        end_(io_),
        notifier_(io_),
        mail_([this](auto item, auto permission) { ask_before_dot(item, permission); },
              [this](auto item, auto spoken) { report_mail(item, std::move(spoken)); }),
        polls_([this](auto name, auto answer) { report_poll(std::move(name), std::move(answer)); },
               [this](auto outcome) { report_life(std::move(outcome)); },
               [this](const station::HttpForm& form) { return arrival_time(form); }) {
    work_->on_send([this](mail::Server server, std::int64_t item, letters::Letter letter) {
      mail_.send(std::move(server), item, std::move(letter));
    });
    work_->on_poll([this](const std::string& name, const station::HttpForm& form,
                          const station::PollMemory& memory) { polls_.ask(name, form, memory); });
    work_->on_beat([this](const std::string& url) { polls_.give_sign_of_life(url); });
  }

  Outcome run() {
    const auto up = asio::make_work_guard(io_);
    signals_.heed([this](int number) { asio::post(io_, [this, number] { take_signal(number); }); });
    watch_folders();
    if (options_.stop_after) {
      end_.expires_after(*options_.stop_after);
      end_.async_wait([this](const boost::system::error_code& error) {
        if (!error) stop("the exercise is over");
      });
    }
    turn();
    tell_ready();
    io_.run();
    finish();
    if (const auto& broken = work_->broken()) return *broken;
    return Done{};
  }

 private:
  Instant now() const { return options_.time.now(); }

  /// In a worker's thread. A clock that is not set calls no reading of a station too early.
  Instant arrival_time(const station::HttpForm& form) const {
    if (!form.record.time.arrival && !options_.time.set()) return Instant{};
    return work_->working(options_.time.now());
  }

  void turn() {
    if (stopping_) return;
    const Instant wake = work_->turn(now(), options_.time.set());
    if (work_->broken()) return stop("the store is damaged");
    tell_alive();
    tell_status(work_->status_line(now()));
    timer_.expires_after(options_.time.wait_until(wake));
    timer_.async_wait([this](const boost::system::error_code& error) {
      if (!error) turn();
    });
  }

  /// Something happened: look now instead of at the next due moment.
  void hurry() {
    if (stopping_) return;
    timer_.cancel();
    asio::post(io_, [this] { turn(); });
  }

  void take_signal(int number) {
    if (number != SIGHUP) {
      stop(number == SIGTERM ? "told to stop" : "interrupted");
    } else if (!stopping_) {
      reload();
    }
  }

  void reload() {
    tell_reloading();
    work_->reload(now());
    watch_folders();
    tell_ready();
    hurry();
  }

  void watch_folders() {
    if (notifier_.is_open()) notifier_.release();
    if (!folders_.watch(work_->folders())) return;  // no inotify: the scan every 60 s remains
    notifier_.assign(folders_.descriptor());
    await_folder();
  }

  void await_folder() {
    notifier_.async_wait(asio::posix::stream_descriptor::wait_read,
                         [this](const boost::system::error_code& error) {
                           if (error || stopping_) return;
                           folders_.drain();
                           work_->look_soon();
                           hurry();
                           await_folder();
                         });
  }

  // Called in the workers' threads: they only post.
  void ask_before_dot(std::int64_t item, std::shared_ptr<Permission> permission) {
    asio::post(io_, [this, item, permission] { permission->give(work_->before_dot(item, now())); });
  }
  void report_mail(std::int64_t item, mail::Spoken spoken) {
    asio::post(io_, [this, item, spoken = std::move(spoken)] {
      mail_.rest();
      const bool new_settings_waited = work_->reload_waits();
      work_->mail_spoken(item, spoken, now());
      if (new_settings_waited && !stopping_) watch_folders();
      hurry();
    });
  }
  void report_poll(std::string name, station::Answer answer) {
    asio::post(io_, [this, name = std::move(name), answer = std::move(answer)] {
      work_->poll_answered(name, answer, now());
      hurry();
    });
  }

  void report_life(Outcome outcome) {
    asio::post(io_, [this, outcome = std::move(outcome)] { work_->life_answered(outcome, now()); });
  }

  void stop(const std::string& why) {
    if (stopping_) return;
    stopping_ = true;
    tell_stopping();
    log_info("stopping: " + why);
    io_.stop();
  }

  /// Workers end within 0.2 s; what they still report is written down before the store closes.
  void finish() {
    signals_.rest();
    mail_.stop();
    polls_.stop();
    timer_.cancel();
    end_.cancel();
    if (notifier_.is_open()) notifier_.release();
    io_.restart();
    io_.poll();
    work_->finish(now());
  }

  std::unique_ptr<DeskWork> work_;
  RunOptions options_;
  asio::io_context io_;
  Signals& signals_;
  asio::steady_timer timer_, end_;
  FolderWatch folders_;
  asio::posix::stream_descriptor notifier_;
  bool stopping_ = false;
  MailWorker mail_;
  PollWorker polls_;
};

}  // namespace

Outcome run(std::shared_ptr<const settings::Settings> settings, RunOptions options,
            Signals& signals) {
  auto work = open_desk(std::move(settings), options, signals);
  if (!work) return work.failure();
  if (!*work) return Done{};
  return Loop(std::move(*work), options, signals).run();
}

}  // namespace antherd::service
