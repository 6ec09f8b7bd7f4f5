// The one letter that says that the watch began anew without its store.
#pragma once

#include <optional>
#include <span>
#include <string>
#include <vector>

#include "core/letters/compose.hpp"

namespace antherd::letters {

/// What a service found that began with a new store where one had been.
struct Anew {
  std::string aside;              // the file that the damaged store was put aside as; empty: it was
                                  // missing
  std::optional<Instant> copied;  // when the copy was made that the diary was taken back from
  int irrigations = 0, notes = 0;  // so many were taken back
};

/// One letter to every recipient: only people know what they wrote down since the copy.
std::vector<Letter> compose_anew(const Anew& anew, std::span<const Recipient> recipients,
                                 const Desk& desk);

}  // namespace antherd::letters
