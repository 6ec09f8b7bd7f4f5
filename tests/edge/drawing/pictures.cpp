// Pictures in memory: their sizes, that they are not blank, and what is refused.
#include <cairo.h>

#include <limits>
#include <map>

#include "edge/drawing/drawing.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::letters;

namespace {

struct Pixels {
  int width = 0, height = 0;
  std::map<unsigned, int> colours;
};

// Read back by the library's own PNG reader.
Pixels pixels_of(const std::string& png) {
  struct Reading {
    const std::string& text;
    std::size_t at = 0;
  } reading{png};
  const auto read = [](void* closure, unsigned char* data, unsigned length) {
    auto& from = *static_cast<Reading*>(closure);
    if (from.at + length > from.text.size()) return CAIRO_STATUS_READ_ERROR;
    from.text.copy(reinterpret_cast<char*>(data), length, from.at);
    from.at += length;
    return CAIRO_STATUS_SUCCESS;
  };
  cairo_surface_t* surface = cairo_image_surface_create_from_png_stream(read, &reading);
  REQUIRE(cairo_surface_status(surface) == CAIRO_STATUS_SUCCESS);
  Pixels pixels;
  pixels.width = cairo_image_surface_get_width(surface);
  pixels.height = cairo_image_surface_get_height(surface);
  const unsigned char* data = cairo_image_surface_get_data(surface);
  const int stride = cairo_image_surface_get_stride(surface);
  for (int y = 0; y < pixels.height; ++y) {
    const auto* row = reinterpret_cast<const unsigned*>(data + y * stride);
    for (int x = 0; x < pixels.width; ++x) ++pixels.colours[row[x] & 0xffffffU];
  }
  cairo_surface_destroy(surface);
  return pixels;
}

Drawing sketch() {
  Drawing drawing;
  drawing.width = 40;
  drawing.height = 20;
  drawing.title = "north <bench> & \"flat\"";
  drawing.description = "nothing\x01 hot";
  return drawing;
}

Area square() { return Area{{{0, 0}, {10, 0}, {10, 10}, {0, 10}}, Role::ink, 1}; }

}  // namespace

TEST_CASE("a PNG has the drawing's size times the scale, and the ground's colour") {
  const auto png = drawing::to_png(sketch(), 2);
  REQUIRE(png);
  CHECK(png->substr(1, 3) == "PNG");
  const Pixels pixels = pixels_of(*png);
  CHECK(pixels.width == 80);
  CHECK(pixels.height == 40);
  CHECK(pixels.colours == std::map<unsigned, int>{{0xffffffU, 80 * 40}});
}

TEST_CASE("areas fill what they outline and later marks cover earlier ones") {
  Drawing drawing = sketch();
  drawing.marks.push_back(square());
  const Pixels one = pixels_of(*drawing::to_png(drawing, 1));
  REQUIRE(one.colours.size() == 2);
  CHECK(one.colours.at(0xffffffU) == 40 * 20 - 100);
  Area cover = square();
  cover.role = Role::ground;
  drawing.marks.push_back(cover);
  CHECK(pixels_of(*drawing::to_png(drawing, 1)).colours.size() == 1);
}

TEST_CASE("lines, dots and words leave marks; a dashed line leaves fewer") {
  const auto inked = [](const Mark& mark) {
    Drawing drawing = sketch();
    drawing.marks.push_back(mark);
    const Pixels pixels = pixels_of(*drawing::to_png(drawing, 1));
    return 800 - pixels.colours.at(0xffffffU);
  };
  const Line line{{{0, 10}, {40, 10}}, Role::severe, 2, false};
  Line dashed = line;
  dashed.dashed = true;
  CHECK(inked(line) >= 80);
  CHECK(inked(dashed) < inked(line));
  CHECK(inked(dashed) > 30);
  CHECK(inked(Dot{{20, 10}, 4, Role::extreme}) >= 49);  // π 4² = 50.3
  Label label{{2, 15}, "95 °F", Role::ink, 12, Anchor::start, false, false};
  CHECK(inked(label) > 30);
  label.anchor = Anchor::end;  // its end stands at x = 2: all but the last column is outside
  CHECK(inked(label) < 30);
}

TEST_CASE("an SVG names its size, and says its title and description, escaped") {
  const auto svg = drawing::to_svg(sketch());
  REQUIRE(svg);
  CHECK(svg->find("width=\"40px\" height=\"20px\"") != std::string::npos);
  CHECK(svg->find("role=\"img\"") != std::string::npos);
  CHECK(svg->find("<title>north &lt;bench&gt; &amp; \"flat\"</title>") != std::string::npos);
  CHECK(svg->find("<desc>nothing hot</desc>") != std::string::npos);
  CHECK(svg->find("<script") == std::string::npos);
  CHECK(svg->rfind("</svg>") != std::string::npos);
}

TEST_CASE("what cannot be drawn is refused by name, never drawn wrong") {
  const double nan = std::numeric_limits<double>::quiet_NaN();
  for (const double side : {0.0, -5.0, 4001.0, nan, std::numeric_limits<double>::infinity()}) {
    Drawing drawing = sketch();
    drawing.width = side;
    CHECK_FALSE(drawing::to_png(drawing));
    CHECK_FALSE(drawing::to_svg(drawing));
    CHECK(drawing::to_svg(drawing).failure().why == "its sides must lie between 1 and 4000");
  }
  for (const double scale : {0.0, 0.4, 4.1, nan}) CHECK_FALSE(drawing::to_png(sketch(), scale));
  Drawing large = sketch();
  large.width = large.height = 4000;
  CHECK(drawing::to_png(large, 1));
  CHECK_FALSE(drawing::to_png(large, 1.1));
  for (const Mark& mark : {Mark{Dot{{nan, 1}, 1, Role::ink}}, Mark{Line{{{0, 0}, {1, nan}}}},
                           Mark{Label{{1, 1}, "x", Role::ink, nan}}, Mark{Area{{{1e9, 0}}}}}) {
    Drawing drawing = sketch();
    drawing.marks.push_back(mark);
    CHECK_FALSE(drawing::to_png(drawing));
  }
}
