// Which drawing a review shows; see charts.hpp.
#include "core/letters/charts.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdlib>
#include <map>

#include "core/letters/chart_words.hpp"

namespace antherd::letters {

namespace {

constexpr double width = 720, height = 470;
constexpr double left = 46, right = 578, beside = 586;  // of both panels; words stand beside them
constexpr double heat_top = 74, heat_bottom = 250;
constexpr double humid_top = 296, humid_bottom = 368;
constexpr double days_line = 384, first_row = 418, row_height = 19;
constexpr double narrow = 40;  // columns below it lose their words

struct Day {
  const season::HeatDay* heat = nullptr;
  const season::HumidDay* humid = nullptr;
};

// A number with at most one decimal, "95" or "100.4", whatever the place's habits.
std::string plain(double number) {
  const long tenths = std::lround(number * 10.0);
  std::string text = std::to_string(std::labs(tenths) / 10);
  if (tenths % 10 != 0) text += "." + std::to_string(std::labs(tenths) % 10);
  return tenths < 0 ? "-" + text : text;
}

// Everything that places a mark.
class Sheet {
 public:
  Sheet(const ChartReader& reader, std::span<const season::HeatDay> days,
        std::span<const season::HumidDay> humid_days)
      : reader_(reader),
        words_(reader.language == Language::spanish ? chart_spanish : chart_english) {
    for (const season::HeatDay& day : days) days_[day.date].heat = &day;
    for (const season::HumidDay& day : humid_days) days_[day.date].humid = &day;
    drawing_.width = width;
    drawing_.height = height;
    if (days_.empty()) return;
    first_ = days_.begin()->first;
    count_ = static_cast<int>((days_.rbegin()->first - first_).count()) + 1;
    column_ = (right - left) / count_;
    choose_scale();
  }

  Drawing draw() {
    heading();
    if (days_.empty()) {
      label({width / 2, height / 2}, words_.nothing, Role::faint_ink, 14, Anchor::middle);
      return std::move(drawing_);
    }
    window();
    temperature_grid();
    thresholds();
    temperatures();
    infections();
    calendar();
    rows();
    return std::move(drawing_);
  }

 private:
  double shown(double celsius) const {
    return reader_.units == Units::us ? celsius * 1.8 + 32.0 : celsius;
  }
  const char* unit() const { return reader_.units == Units::us ? "°F" : "°C"; }
  // Rounded as a reader expects it, but never across a threshold that was not reached.
  std::string figure(Celsius t) const {
    const double exact = shown(t.value);
    const double rounded = reader_.units == Units::us ? std::round(exact) : exact;
    const risk::HeatRules& rules = reader_.thresholds;
    for (const Celsius threshold : {rules.sustained, rules.severe, rules.extreme}) {
      const bool carried = std::round(rounded * 10) >= std::round(shown(threshold.value) * 10);
      if (t < threshold && carried) return plain(std::floor(exact * 10) / 10);
    }
    return plain(rounded);
  }
  static std::string infection_figure(double infection) {
    const bool carried = infection < 1 && infection >= 0.95;
    return plain(carried ? 0.9 : infection);
  }
  double x_of(CivilDay day) const {
    return left + (static_cast<double>((day - first_).count()) + 0.5) * column_;
  }
  double y_of(double celsius) const {
    return heat_bottom - (celsius - low_) / (high_ - low_) * (heat_bottom - heat_top);
  }
  double y_of_infection(double value) const {
    return humid_bottom - std::min(value / most_, 1.0) * (humid_bottom - humid_top);
  }
  bool roomy() const { return column_ >= narrow; }

  void choose_scale() {
    low_ = reader_.thresholds.sustained.value - 8;
    high_ = reader_.thresholds.extreme.value + 2;
    for (const auto& [date, day] : days_) {
      if (day.heat && day.heat->t_max) {
        low_ = std::min(low_, day.heat->t_max->value - 2);
        high_ = std::max(high_, day.heat->t_max->value + 3);
      }
      if (day.humid && day.humid->infection) most_ = std::max(most_, *day.humid->infection * 1.15);
    }
  }

  void label(Point at, std::string text, Role role, double size, Anchor anchor, bool bold = false,
             bool halo = false) {
    drawing_.marks.push_back(Label{at, std::move(text), role, size, anchor, bold, halo});
  }
  void line(std::vector<Point> points, Role role, double thick, bool dashed = false) {
    drawing_.marks.push_back(Line{std::move(points), role, thick, dashed});
  }
  void box(double x0, double y0, double x1, double y1, Role role, double opacity = 1) {
    drawing_.marks.push_back(Area{{{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}}, role, opacity});
  }

  std::string date_words(CivilDay day) const {
    const std::chrono::year_month_day date(day);
    return std::to_string(static_cast<unsigned>(date.day())) + " " +
           words_.months[static_cast<unsigned>(date.month()) - 1];
  }

  void heading() {
    std::string period;
    if (!days_.empty()) {
      const CivilDay last = days_.rbegin()->first;
      const int year = static_cast<int>(std::chrono::year_month_day(last).year());
      period = ", " + (count_ > 1 ? date_words(first_) + " – " : "") + date_words(last) + " " +
               std::to_string(year);
    }
    drawing_.title = reader_.field + period;
    drawing_.description = days_.empty() ? words_.nothing : described();
    label({left, 26}, drawing_.title, Role::ink, 17, Anchor::start, true);
    if (days_.empty()) return;
    label({left, 50}, words_.heat_heading + std::string(unit()), Role::faint_ink, 12.5,
          Anchor::start);
    label({left, humid_top - 12}, words_.humid_heading, Role::faint_ink, 12.5, Anchor::start);
  }

  // The days as sentences, for those who do not see the drawing.
  std::string described() const {
    std::string text = words_.heat_heading + std::string(unit()) + ": ";
    std::string mildew = std::string(words_.humid_heading) + ": ";
    for (const auto& [date, day] : days_) {
      const bool warm = day.heat && day.heat->t_max;
      text += date_words(date) + " " + (warm ? figure(*day.heat->t_max) : words_.no_data) +
              (warm && day.heat->level != risk::Level::none
                   ? std::string(" (") + level_word(day.heat->level) + ")"
                   : "") +
              "; ";
      const bool judged = day.humid && day.humid->infection;
      mildew += date_words(date) + " " +
                (judged ? infection_figure(*day.humid->infection) : words_.no_data) + "; ";
    }
    return text + mildew;
  }

  // Days in the window stand on a band; neighbours share one.
  void window() {
    const auto in_window = [this](CivilDay date) {
      const auto found = days_.find(date);
      return found != days_.end() && found->second.heat && found->second.heat->in_window;
    };
    const CivilDay end = first_ + std::chrono::days{count_};
    for (CivilDay from = first_; from < end;) {
      CivilDay to = from;
      while (to < end && in_window(to)) to += std::chrono::days{1};
      if (to > from) {
        const double x0 = x_of(from) - column_ / 2, x1 = x_of(to) - column_ / 2;
        box(x0, heat_top, x1, heat_bottom, Role::flower, 0.55);
        if (x1 - x0 > 120) {
          label({x0 + 6, heat_top + 14}, words_.window, Role::faint_ink, 11.5, Anchor::start, true);
        }
      }
      from = to + std::chrono::days{1};
    }
  }

  void temperature_grid() {
    const double step = reader_.units == Units::us ? 10 : 5;
    for (double value = std::ceil(shown(low_) / step) * step; value < shown(high_); value += step) {
      const double celsius = reader_.units == Units::us ? (value - 32.0) / 1.8 : value;
      line({{left, y_of(celsius)}, {right, y_of(celsius)}}, Role::grid, 1);
      label({left - 7, y_of(celsius) + 4}, plain(value), Role::faint_ink, 11, Anchor::end);
    }
    line({{left, heat_bottom}, {right, heat_bottom}}, Role::faint_ink, 1);
  }

  void thresholds() {
    struct Threshold {
      double celsius;
      Role role;
      const char* word;
    };
    const risk::HeatRules& rules = reader_.thresholds;
    double lowest_words = heat_bottom + 20;
    for (const Threshold& threshold :
         {Threshold{rules.sustained.value, Role::moderate, words_.counts},
          Threshold{rules.severe.value, Role::severe, words_.severe},
          Threshold{rules.extreme.value, Role::extreme, words_.extreme}}) {
      const double y = y_of(threshold.celsius);
      line({{left, y}, {right, y}}, threshold.role, 1.3, true);
      lowest_words = std::min(y + 4, lowest_words - 14);  // close thresholds: words do not overlap
      label({beside, lowest_words},
            plain(shown(threshold.celsius)) + " " + unit() + "  " + threshold.word, threshold.role,
            11.5, Anchor::start, true);
    }
  }

  static Role role_of(risk::Level level, Role otherwise) {
    switch (level) {
      case risk::Level::none:
        return otherwise;
      case risk::Level::moderate:
        return Role::moderate;
      case risk::Level::severe:
        return Role::severe;
      case risk::Level::extreme:
        return Role::extreme;
    }
    return otherwise;
  }
  const char* level_word(risk::Level level) const {
    switch (level) {
      case risk::Level::none:
        return words_.none;
      case risk::Level::moderate:
        return words_.moderate;
      case risk::Level::severe:
        return words_.severe;
      case risk::Level::extreme:
        return words_.extreme;
    }
    return words_.none;
  }

  void gap(CivilDay date, double top, double bottom) {
    const double x = x_of(date);
    box(x - column_ / 2 + 1, top, x + column_ / 2 - 1, bottom, Role::missing);
    if (roomy()) {
      label({x, (top + bottom) / 2 + 4}, words_.no_data, Role::faint_ink, 11, Anchor::middle);
    }
  }

  void temperatures() {
    std::vector<Point> stretch;
    const auto finish = [&] {
      if (stretch.size() > 1) line(stretch, Role::temperature, 1.8);
      stretch.clear();
    };
    std::vector<std::pair<Point, const season::HeatDay*>> dots;
    for (int i = 0; i < count_; ++i) {
      const CivilDay date = first_ + std::chrono::days{i};
      const auto found = days_.find(date);
      if (found == days_.end() || !found->second.heat || !found->second.heat->t_max) {
        finish();
        gap(date, heat_top, heat_bottom);
        continue;
      }
      const season::HeatDay* day = found->second.heat;
      stretch.push_back({x_of(date), y_of(day->t_max->value)});
      dots.emplace_back(stretch.back(), day);
    }
    finish();
    for (const auto& [at, day] : dots) {
      const bool told = day->level != risk::Level::none;
      drawing_.marks.push_back(Dot{at, roomy() ? 5.5 : 3.0, Role::ground});
      drawing_.marks.push_back(
          Dot{at, roomy() ? 4.2 : 2.2, role_of(day->level, Role::temperature)});
      if (!roomy()) continue;
      label({at.x, at.y - 10}, figure(*day->t_max) + "°", role_of(day->level, Role::ink), 12.5,
            Anchor::middle, told, true);
    }
  }

  void infections() {
    const double threshold = y_of_infection(1.0);
    line({{left, threshold}, {right, threshold}}, Role::faint_ink, 1.3, true);
    label({left - 7, threshold + 4}, "1", Role::faint_ink, 11, Anchor::end);
    label({left - 7, humid_bottom + 4}, "0", Role::faint_ink, 11, Anchor::end);
    label({beside, threshold + 4}, words_.favourable, Role::faint_ink, 11.5, Anchor::start, true);
    for (int i = 0; i < count_; ++i) {
      const CivilDay date = first_ + std::chrono::days{i};
      const auto found = days_.find(date);
      const season::HumidDay* day = found == days_.end() ? nullptr : found->second.humid;
      if (!day || !day->infection) {
        gap(date, humid_top, humid_bottom);
        continue;
      }
      infection_bar(x_of(date), *day->infection, day->water.value_or(false));
    }
    line({{left, humid_bottom}, {right, humid_bottom}}, Role::faint_ink, 1);
    double y = humid_top - 12;
    for (const auto& [role, word] :
         {std::pair{Role::water, words_.water}, {Role::dew, words_.dew}}) {
      box(beside, y - 9, beside + 10, y + 1, role);
      label({beside + 16, y}, word, Role::faint_ink, 11.5, Anchor::start);
      y += 17;
    }
  }

  void infection_bar(double x, double infection, bool water) {
    const double half = std::min(column_ * 0.24, 18.0);
    const double top = y_of_infection(infection);
    box(x - half, top, x + half, humid_bottom, water ? Role::water : Role::dew);
    if (!roomy()) return;
    label({x, top - 5}, infection_figure(infection), Role::ink, 11.5, Anchor::middle,
          infection >= 1, true);
  }

  void calendar() {
    const int every = roomy() ? 1 : static_cast<int>(std::ceil(narrow / column_));
    for (int i = 0; i < count_; i += every) {
      const CivilDay date = first_ + std::chrono::days{i};
      const double x = x_of(date);
      if (roomy()) {
        const std::chrono::weekday weekday(date);
        label({x, days_line}, words_.weekdays[weekday.c_encoding()], Role::ink, 12, Anchor::middle,
              true);
        label({x, days_line + 14}, date_words(date), Role::faint_ink, 11, Anchor::middle);
      } else {
        label({x, days_line}, date_words(date), Role::faint_ink, 10.5, Anchor::middle);
      }
    }
  }

  void level_mark(Point at, risk::Level level) {
    const Role role = role_of(level, Role::faint_ink);
    if (column_ >= 56) {
      label(at, level_word(level), role, 11.5, Anchor::middle, level != risk::Level::none);
    } else if (level != risk::Level::none) {
      drawing_.marks.push_back(Dot{{at.x, at.y - 4}, std::min(column_ * 0.42, 5.0), role});
    }
  }

  void rows() {
    const std::array<const char*, 3> names{words_.heat_row, words_.humid_row, words_.night_row};
    for (std::size_t row = 0; row < names.size(); ++row) {
      const double y = first_row + static_cast<double>(row) * row_height;
      line({{left, y - 14}, {width - 14, y - 14}}, Role::grid, 1);
      label({beside, y}, names[row], Role::ink, 11.5, Anchor::start);
    }
    for (const auto& [date, day] : days_) {
      const double x = x_of(date);
      if (day.heat && day.heat->t_max) level_mark({x, first_row}, day.heat->level);
      if (!day.humid) continue;
      level_mark({x, first_row + row_height}, day.humid->level);
      if (day.humid->night_set) {
        drawing_.marks.push_back(
            Dot{{x, first_row + 2 * row_height - 4}, std::min(column_ * 0.42, 4.5), Role::water});
      }
    }
  }

  const ChartReader& reader_;
  const ChartWords& words_;
  std::map<CivilDay, Day> days_;
  CivilDay first_{};
  int count_ = 0;
  double column_ = 0, low_ = 0, high_ = 1, most_ = 1.6;
  Drawing drawing_;
};

}  // namespace

Drawing week_chart(const ChartReader& reader, std::span<const season::HeatDay> days,
                   std::span<const season::HumidDay> humid_days) {
  return Sheet(reader, days, humid_days).draw();
}

}  // namespace antherd::letters
