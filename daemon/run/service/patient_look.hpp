// A look into a drop folder that cannot hold the service up: a network share whose server is gone
// answers no call for minutes or for ever. The look is made in a thread of its own; while it gets
// no answer the folder is left to it and everything else goes on. It must not know what a look
// finds, nor what time it is.
#pragma once

#include <atomic>
#include <chrono>
#include <functional>
#include <memory>
#include <optional>

#include "edge/station/readings.hpp"

namespace antherd::service {

using Looker = std::function<station::Look(const station::DropForm&,
                                           const std::vector<station::Bookmark>&, Instant now)>;

/// For one folder. At most one look is under way. An answer that comes late is not used, for it was
/// judged by the time of its question: the next call looks again.
class PatientLook {
 public:
  /// Looks, and waits for the answer for as long as `patience`, or until `stopping`.
  /// @return nothing where none came
  std::optional<station::Look> look(const Looker& looker, const station::DropForm& form,
                                    const std::vector<station::Bookmark>& bookmarks, Instant now,
                                    std::chrono::milliseconds patience,
                                    const std::atomic<bool>* stopping);

 private:
  struct Answer;
  std::shared_ptr<Answer> awaited_;  // shared with the thread, which may outlive us
};

}  // namespace antherd::service
