// Painting with Cairo; see drawing.hpp. The colours keep apart for readers who do not tell red from
// green (Okabe and Ito 2008, Color Universal Design, darkened for words (from memory)).
#include "edge/drawing/drawing.hpp"

#include <cairo-svg.h>
#include <cairo.h>

#include <array>
#include <cmath>
#include <memory>
#include <numbers>

namespace antherd::drawing {

namespace {

using letters::Role;

constexpr double most_pixels = 16e6;  // 64 MB while it is painted

struct Colour {
  double red, green, blue;
};

constexpr Colour hex(unsigned rgb) {
  return {((rgb >> 16U) & 255U) / 255.0, ((rgb >> 8U) & 255U) / 255.0, (rgb & 255U) / 255.0};
}

Colour colour_of(Role role) {
  switch (role) {
    case Role::ground:
      return hex(0xffffff);
    case Role::ink:
      return hex(0x1f2933);
    case Role::faint_ink:
      return hex(0x5b6770);
    case Role::grid:
      return hex(0xdfe3e6);
    case Role::temperature:
      return hex(0x3d4852);
    case Role::moderate:
      return hex(0xb37400);
    case Role::severe:
      return hex(0xc44a00);
    case Role::extreme:
      return hex(0x8a1752);
    case Role::flower:
      return hex(0xf6e9a8);
    case Role::water:
      return hex(0x0067a5);
    case Role::dew:
      return hex(0x7cc0ea);
    case Role::missing:
      return hex(0xeef0f2);
  }
  return hex(0x000000);
}

struct Destroy {
  void operator()(cairo_t* brush) const { cairo_destroy(brush); }
  void operator()(cairo_surface_t* surface) const { cairo_surface_destroy(surface); }
};
using Surface = std::unique_ptr<cairo_surface_t, Destroy>;
using Brush = std::unique_ptr<cairo_t, Destroy>;

void dip(cairo_t* brush, Role role, double opacity = 1.0) {
  const Colour colour = colour_of(role);
  cairo_set_source_rgba(brush, colour.red, colour.green, colour.blue, opacity);
}

void trace(cairo_t* brush, const std::vector<letters::Point>& points) {
  cairo_new_path(brush);
  for (const letters::Point& point : points) cairo_line_to(brush, point.x, point.y);
}

void paint(cairo_t* brush, const letters::Area& area) {
  trace(brush, area.outline);
  dip(brush, area.role, area.opacity);
  cairo_fill(brush);
}

void paint(cairo_t* brush, const letters::Line& line) {
  constexpr std::array<double, 2> dashes{5, 4};
  trace(brush, line.points);
  dip(brush, line.role);
  cairo_set_line_width(brush, line.width);
  cairo_set_line_join(brush, CAIRO_LINE_JOIN_ROUND);
  cairo_set_line_cap(brush, line.dashed ? CAIRO_LINE_CAP_BUTT : CAIRO_LINE_CAP_ROUND);
  cairo_set_dash(brush, dashes.data(), line.dashed ? 2 : 0, 0);
  cairo_stroke(brush);
}

void paint(cairo_t* brush, const letters::Dot& dot) {
  cairo_new_path(brush);
  cairo_arc(brush, dot.at.x, dot.at.y, dot.radius, 0, 2 * std::numbers::pi);
  dip(brush, dot.role);
  cairo_fill(brush);
}

void paint(cairo_t* brush, const letters::Label& label) {
  cairo_select_font_face(brush, "sans-serif", CAIRO_FONT_SLANT_NORMAL,
                         label.bold ? CAIRO_FONT_WEIGHT_BOLD : CAIRO_FONT_WEIGHT_NORMAL);
  cairo_set_font_size(brush, label.size);
  cairo_text_extents_t extents;
  cairo_text_extents(brush, label.text.c_str(), &extents);
  double x = label.at.x;
  if (label.anchor == letters::Anchor::middle) x -= extents.x_advance / 2;
  if (label.anchor == letters::Anchor::end) x -= extents.x_advance;
  if (label.halo) {
    cairo_new_path(brush);
    cairo_move_to(brush, x, label.at.y);
    cairo_text_path(brush, label.text.c_str());
    dip(brush, Role::ground, 0.85);
    cairo_set_line_width(brush, 3.5);
    cairo_set_dash(brush, nullptr, 0, 0);
    cairo_stroke(brush);
  }
  cairo_new_path(brush);
  cairo_move_to(brush, x, label.at.y);
  dip(brush, label.role);
  cairo_show_text(brush, label.text.c_str());
}

bool sound(double number) { return std::isfinite(number) && std::abs(number) <= 1e6; }
bool sound(const letters::Point& point) { return sound(point.x) && sound(point.y); }
bool sound(const std::vector<letters::Point>& points) {
  for (const letters::Point& point : points) {
    if (!sound(point)) return false;
  }
  return true;
}
bool sound(const letters::Area& area) { return sound(area.outline) && sound(area.opacity); }
bool sound(const letters::Line& line) { return sound(line.points) && sound(line.width); }
bool sound(const letters::Dot& dot) { return sound(dot.at) && sound(dot.radius); }
bool sound(const letters::Label& label) { return sound(label.at) && sound(label.size); }

Failure failed(const letters::Drawing& drawing, std::string why) {
  return Failure{"draw a picture", drawing.title, std::move(why), "the text stands without it"};
}

Outcome check(const letters::Drawing& drawing) {
  const auto fits = [](double side) { return side >= 1 && side <= largest_side; };  // NaN does not
  if (!fits(drawing.width) || !fits(drawing.height)) {
    return failed(drawing, "its sides must lie between 1 and 4000");
  }
  for (const letters::Mark& mark : drawing.marks) {
    if (!std::visit([](const auto& m) { return sound(m); }, mark)) {
      return failed(drawing, "a coordinate is not a number that can be drawn");
    }
  }
  return Done{};
}

cairo_status_t keep(void* closure, const unsigned char* data, unsigned int length) {
  static_cast<std::string*>(closure)->append(reinterpret_cast<const char*>(data), length);
  return CAIRO_STATUS_SUCCESS;
}

cairo_status_t paint_all(cairo_surface_t* surface, const letters::Drawing& drawing, double scale) {
  const Brush brush(cairo_create(surface));
  cairo_scale(brush.get(), scale, scale);
  dip(brush.get(), Role::ground);
  cairo_paint(brush.get());
  for (const letters::Mark& mark : drawing.marks) {
    std::visit([&](const auto& m) { paint(brush.get(), m); }, mark);
  }
  return cairo_status(brush.get());
}

std::string escaped(const std::string& text) {
  std::string safe;
  for (const char letter : text) {
    switch (letter) {
      case '&':
        safe += "&amp;";
        break;
      case '<':
        safe += "&lt;";
        break;
      case '>':
        safe += "&gt;";
        break;
      default:
        // XML 1.0 knows no control characters but these
        if (static_cast<unsigned char>(letter) >= 32 || letter == '\n' || letter == '\t') {
          safe += letter;
        }
    }
  }
  return safe;
}

}  // namespace

Result<std::string> to_svg(const letters::Drawing& drawing) {
  if (Outcome fit = check(drawing); !fit) return fit.failure();
  std::string svg;
  const Surface surface(
      cairo_svg_surface_create_for_stream(keep, &svg, drawing.width, drawing.height));
  cairo_svg_surface_set_document_unit(surface.get(), CAIRO_SVG_UNIT_PX);
  cairo_svg_surface_restrict_to_version(surface.get(), CAIRO_SVG_VERSION_1_1);
  const cairo_status_t status = paint_all(surface.get(), drawing, 1.0);
  cairo_surface_finish(surface.get());
  if (status != CAIRO_STATUS_SUCCESS) return failed(drawing, cairo_status_to_string(status));
  const std::size_t root = svg.find("<svg");
  const std::size_t end = root == std::string::npos ? root : svg.find('>', root);
  if (end == std::string::npos) return failed(drawing, "the painter wrote no picture");
  svg.insert(end + 1, "\n<title>" + escaped(drawing.title) + "</title>\n<desc>" +
                          escaped(drawing.description) + "</desc>");
  svg.insert(root + 4, " role=\"img\"");
  return svg;
}

Result<std::string> to_png(const letters::Drawing& drawing, double scale) {
  if (Outcome fit = check(drawing); !fit) return fit.failure();
  if (!(scale >= 0.5 && scale <= 4.0)) return failed(drawing, "the scale must lie in 0.5 to 4");
  if (drawing.width * drawing.height * scale * scale > most_pixels) {
    return failed(drawing, "it would hold more than 16 million pixels");
  }
  const Surface surface(cairo_image_surface_create(
      CAIRO_FORMAT_RGB24, static_cast<int>(std::lround(drawing.width * scale)),
      static_cast<int>(std::lround(drawing.height * scale))));
  cairo_status_t status = paint_all(surface.get(), drawing, scale);
  std::string png;
  if (status == CAIRO_STATUS_SUCCESS) {
    status = cairo_surface_write_to_png_stream(surface.get(), keep, &png);
  }
  if (status != CAIRO_STATUS_SUCCESS) return failed(drawing, cairo_status_to_string(status));
  return png;
}

}  // namespace antherd::drawing
