// What `antherd letters --seen` marks beside the running service. See keeper.hpp.
#include "run/service/keeper.hpp"

namespace antherd::service {

/// The first look after a start always reads: a mark may have come since the ledger was loaded.
Outcome Keeper::refresh_seen(Instant now) {
  const auto version = store_.seen_version();
  if (!version) return version.failure();
  if (*version == seen_version_) return Done{};
  const auto said = store_.said(now - ledger_reach);
  if (!said) return said.failure();
  lookout_.take_seen(*said);
  seen_version_ = *version;
  return Done{};
}

}  // namespace antherd::service
