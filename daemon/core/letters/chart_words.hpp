// The words of charts in both languages. Inside this room only.
#pragma once

#include <array>

namespace antherd::letters {

struct ChartWords {
  const char *heat_heading, *humid_heading, *window, *no_data, *counts, *favourable, *water, *dew,
      *heat_row, *humid_row, *night_row, *none, *moderate, *severe, *extreme, *nothing;
  std::array<const char*, 12> months;
  std::array<const char*, 7> weekdays;  // from Sunday
};

inline const ChartWords chart_english{
    "Warmest hour of the day, hourly mean at the field, ",
    "Mornings for downy mildew: 1 or more is favourable",
    "flowering window",
    "no data",
    "hours count",
    "favourable",
    "water on leaves",
    "dew or fog",
    "heat",
    "humid spell",
    "watered at night",
    "–",
    "Moderate",
    "Severe",
    "Extreme",
    "Nothing was measured in this time.",
    {"Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"},
    {"Sun", "Mon", "Tue", "Wed", "Thu", "Fri", "Sat"}};
inline const ChartWords chart_spanish{
    "Hora más cálida del día, media horaria en el campo, ",
    "Mañanas para el mildiu: desde 1 son favorables",
    "ventana de floración",
    "sin datos",
    "cuenta",
    "favorable",
    "agua en la hoja",
    "rocío o niebla",
    "calor",
    "racha húmeda",
    "riego de noche",
    "–",
    "Moderado",
    "Severo",
    "Extremo",
    "No se midió nada en este tiempo.",
    {"ene", "feb", "mar", "abr", "may", "jun", "jul", "ago", "sep", "oct", "nov", "dic"},
    {"dom", "lun", "mar", "mié", "jue", "vie", "sáb"}};

}  // namespace antherd::letters
