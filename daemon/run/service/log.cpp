// See log.hpp.
#include "run/service/log.hpp"

#include <spdlog/sinks/rotating_file_sink.h>
#include <spdlog/sinks/stdout_sinks.h>
#include <spdlog/spdlog.h>

#include <memory>
#include <mutex>
#include <utility>

namespace antherd::service {
namespace {

constexpr std::size_t file_size = 2 * 1024 * 1024, file_count = 5;

std::string clean(std::string_view text) {
  std::string result;
  for (const char c : text) {
    const auto code = static_cast<unsigned char>(c);
    result += code < 0x20 || code == 0x7f ? ' ' : c;
  }
  return result;
}

/// The log of now. The signals' thread may speak while the start or a reload changes it.
class Current {
 public:
  void set(std::shared_ptr<spdlog::logger> logger) {
    const std::lock_guard lock(mutex_);
    logger_ = std::move(logger);
  }
  std::shared_ptr<spdlog::logger> get() {
    const std::lock_guard lock(mutex_);
    return logger_;
  }

 private:
  std::mutex mutex_;
  std::shared_ptr<spdlog::logger> logger_ = spdlog::default_logger();
};

Current& current() {
  static Current log;
  return log;
}

void say(spdlog::level::level_enum level, std::string_view sentence) {
  current().get()->log(level, "{}", clean(sentence));
}

}  // namespace

Outcome open_log(const settings::Log& log) {
  try {
    std::shared_ptr<spdlog::logger> logger;
    if (log.file.empty()) {
      logger = std::make_shared<spdlog::logger>("antherd",
                                                std::make_shared<spdlog::sinks::stderr_sink_mt>());
      // The journal stamps its lines itself.
      logger->set_pattern("%l: %v");
    } else {
      logger = std::make_shared<spdlog::logger>(
          "antherd", std::make_shared<spdlog::sinks::rotating_file_sink_mt>(log.file, file_size,
                                                                            file_count - 1));
      logger->set_pattern("%Y-%m-%dT%H:%M:%S%z %l: %v");
    }
    logger->set_level(spdlog::level::from_str(log.level));
    logger->flush_on(spdlog::level::info);
    current().set(std::move(logger));
  } catch (const spdlog::spdlog_ex& error) {
    return Failure{
        "open the log", log.file, error.what(),
        "the log goes on where it went before; give [log] a file in a folder that can be written"};
  }
  return Done{};
}

void log_info(std::string_view sentence) { say(spdlog::level::info, sentence); }
void log_warning(std::string_view sentence) { say(spdlog::level::warn, sentence); }
void log_error(std::string_view sentence) { say(spdlog::level::err, sentence); }
void log_debug(std::string_view sentence) { say(spdlog::level::debug, sentence); }

}  // namespace antherd::service
