// See front_page.hpp.
#include "run/service/front_page.hpp"

#include <nlohmann/json.hpp>

#include "core/letters/charts.hpp"
#include "edge/drawing/drawing.hpp"
#include "run/service/attention.hpp"
#include "run/service/farm.hpp"
#include "run/service/log.hpp"
#include "run/service/review.hpp"

namespace antherd::service {
namespace {

constexpr auto fresh_for = std::chrono::minutes{10};
constexpr auto tried_again_after = std::chrono::minutes{10};

std::string json_of(const letters::Desk& desk, const std::vector<std::string>& attention) {
  nlohmann::ordered_json fields = nlohmann::ordered_json::array();
  for (const auto& [name, status] : desk.fields) {
    nlohmann::ordered_json field;
    field["field"] = name;
    field["as_of"] = status.as_of.time_since_epoch().count();
    field["flower_known"] = status.flower.known;
    field["stage"] = status.flower.known ? nlohmann::ordered_json(status.flower.stage)
                                         : nlohmann::ordered_json(nullptr);
    field["heat_level"] = static_cast<int>(status.heat.today.level);
    field["humid_level"] = status.humid.last ? static_cast<int>(status.humid.last->level) : 0;
    fields.push_back(std::move(field));
  }
  nlohmann::ordered_json all;
  all["farm"] = desk.farm;
  all["fields"] = std::move(fields);
  all["attention"] = attention;
  return all.dump(-1, ' ', false, nlohmann::ordered_json::error_handler_t::replace);
}

}  // namespace

Outcome FrontPage::open(const settings::Settings& settings) {
  page_.reset();
  shown_.reset();
  tried_.reset();
  if (!settings.page) return Done{};
  page::PageOptions options;
  options.address = settings.page->address;
  options.port = static_cast<std::uint16_t>(settings.page->port);
  options.beyond_loopback = true;  // whoever writes another address means it
  options.names = settings.page->names;
  auto page = page::Page::listen(options);
  if (!page) return page.failure();
  page_ = std::move(*page);
  return Done{};
}

/// That it could not be opened was said; that it is open now is said once.
void FrontPage::try_again(const settings::Settings& settings, Instant now) {
  if (!settings.page) return;
  const bool due = tried_ && (now - *tried_ >= tried_again_after || now < *tried_);
  if (!tried_) tried_ = now;
  if (!due) return;
  const Outcome opened = open(settings);
  tried_ = now;
  if (!opened) return;
  log_info("the page is open now: http://" + settings.page->address + ":" +
           std::to_string(settings.page->port) + "/");
}

void FrontPage::refresh(const Lookout& lookout, const store::Store& store, Instant now) {
  if (!page_) try_again(lookout.settings(), now);
  if (!page_) return;
  const bool same_hour = shown_ && hour_of(*shown_) == hour_of(now) && now >= *shown_;
  if (same_hour && now - *shown_ < fresh_for) return;
  shown_ = now;
  page_->show(page_content(lookout, store, now));
}

page::PageContent page_content(const Lookout& lookout, const store::Store& store, Instant now) {
  const settings::Settings& settings = lookout.settings();
  const letters::Desk desk = lookout.desk(now);
  const Period week = week_before(settings.calendar, now);
  const letters::Review review = make_review(lookout, store, week, now);

  page::PageContent content;
  content.farm = settings.farm;
  content.made = farm_text(settings.calendar, now);
  const auto unclosed = unclosed_of(lookout);
  const auto attention = attention_of(lookout, store, now);
  content.now_text = letters::compose_now(desk, unclosed, attention);
  content.review_text = letters::compose_review(review, desk);
  content.caution = letters::standing_caution(letters::Language::english);
  content.json = json_of(desk, attention);
  for (const letters::FieldReview& field : review.fields) {
    letters::ChartReader reader;
    reader.field = field.status.field;
    reader.units = settings.units;
    reader.thresholds = desk.heat_rules.at(reader.field);
    const auto svg = drawing::to_svg(letters::week_chart(reader, field.days, field.humid_days));
    if (svg) content.charts.push_back({"Seven days of " + reader.field, *svg});
  }
  return content;
}

}  // namespace antherd::service
