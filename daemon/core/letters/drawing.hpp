// Drawings as data: a list of marks, painted in order, later over earlier. What a mark means is
// said by its role; which colour that is, and how it becomes SVG or PNG, is for edge/drawing.
#pragma once

#include <string>
#include <variant>
#include <vector>

namespace antherd::letters {

/// What a mark stands for.
enum class Role {
  ground,     // the paper
  ink,        // main words and lines
  faint_ink,  // lesser words
  grid,
  temperature,
  moderate,  // levels
  severe,
  extreme,
  flower,   // the flowering window
  water,    // rain or irrigation on leaves
  dew,      // dew or fog
  missing,  // nothing was measured
};

/// Logical units (one CSS pixel) from the top left corner, x to the right, y down.
struct Point {
  double x = 0, y = 0;
};

struct Line {
  std::vector<Point> points;
  Role role = Role::ink;
  double width = 1;
  bool dashed = false;
};

/// A filled outline; closed by itself.
struct Area {
  std::vector<Point> outline;
  Role role = Role::grid;
  double opacity = 1;  // 0…1
};

struct Dot {
  Point at;
  double radius = 3;
  Role role = Role::ink;
};

enum class Anchor { start, middle, end };  // which part of the words stands at `at`

struct Label {
  Point at;          // on the base line
  std::string text;  // UTF-8, one line
  Role role = Role::ink;
  double size = 12;
  Anchor anchor = Anchor::start;
  bool bold = false;
  bool halo = false;  // a rim of the ground's colour, for words over lines
};

using Mark = std::variant<Area, Line, Dot, Label>;

struct Drawing {
  double width = 0, height = 0;  // logical units, 1…4000
  std::string title;             // for those who do not see it: what it is …
  std::string description;       // … and what it shows, in sentences
  std::vector<Mark> marks;
};

}  // namespace antherd::letters
