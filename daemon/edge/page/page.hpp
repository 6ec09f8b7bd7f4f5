// The local page: what `antherd now` and the weekly review say, for a browser on this computer. It
// shows ready values and never writes; nothing that a visitor sends changes anything. This file
// must not know where the values come from.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "core/failures/result.hpp"
#include "core/units/time.hpp"

namespace antherd::page {

struct Chart {
  std::string title;  // for those who do not see it
  std::string svg;    // a whole SVG document
};

/// What the page shows; UTF-8, escaped by the page.
struct PageContent {
  std::string farm;
  std::string made;         // when, as a reader says it: "Tue 14 Jul 3:05 pm"
  std::string now_text;     // the one screen of `antherd now`
  std::string review_text;  // the last weekly review
  std::string caution;      // the standing caution
  std::string json;         // one JSON value for other programs, served as it is
  std::vector<Chart> charts;
};

struct PageOptions {
  std::string address = "127.0.0.1";
  std::uint16_t port = 0;          // 0: any free one, see Page::port()
  bool beyond_loopback = false;    // an address that others can reach is refused without it
  std::vector<std::string> names;  // host names of this computer that visitors may use
  Seconds stale_after{15 * 60};    // without show() for so long the page says that it is old
};

/// Serves `/`, `/style.css`, `/now.json` and `/chart-0.svg` and so on, on a thread of its own, with
/// at most 16 visitors at a time, 8 KiB of request, 10 s for each step. GET only; requests that
/// name another host are refused (a foreign web page must not read the farm through the browser).
class Page {
 public:
  static Result<std::unique_ptr<Page>> listen(const PageOptions& options);
  ~Page();
  Page(const Page&) = delete;
  Page& operator=(const Page&) = delete;

  /// Replaces all that is shown; from any thread. Until the first call, and when the last one is
  /// older than stale_after, answers bear status 503 and say so.
  void show(PageContent content);
  int port() const;
  /// Ends the thread; at once, also with visitors connected. The destructor does the same.
  void stop();

 private:
  struct Inside;
  explicit Page(std::unique_ptr<Inside> inside);
  std::unique_ptr<Inside> inside_;
};

/// The page as HTML; `stale` puts the warning on top.
std::string html_of(const PageContent& content, bool stale);
/// Its style sheet.
const std::string& style_sheet();

}  // namespace antherd::page
