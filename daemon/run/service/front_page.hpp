// The local page's content, made from the lookout: what `now` says, the last week, a chart a field.
// It must not know sockets; edge/page serves what it is given.
#pragma once

#include <memory>

#include "edge/page/page.hpp"
#include "edge/store/store.hpp"
#include "run/service/lookout.hpp"

namespace antherd::service {

/// What the page shows of the present state; the same attention lines as `antherd now`.
page::PageContent page_content(const Lookout& lookout, const store::Store& store, Instant now);

class FrontPage {
 public:
  /// Listens when the settings ask for a page; a Failure names what stood in the way. Its address
  /// may only come up later (a network that is slower than we are): refresh() tries again.
  Outcome open(const settings::Settings& settings);
  /// Shows the present state: when an hour was folded since, and every ten minutes.
  void refresh(const Lookout& lookout, const store::Store& store, Instant now);

 private:
  void try_again(const settings::Settings& settings, Instant now);

  std::unique_ptr<page::Page> page_;
  std::optional<Instant> shown_, tried_;
};

}  // namespace antherd::service
