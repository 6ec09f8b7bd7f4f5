// Parts of the review that stand in files of their own. Inside this room only.
#pragma once

#include <string>

#include "core/letters/parts.hpp"

namespace antherd::letters {

/// Everything about one field: day table, flowers, water, told, decided (review_field.cpp).
std::string field_chapter(const FieldReview& field, const Words& words);
/// The day table (review_table.cpp): one row a day, or only the days that matter in a long period.
std::string day_table(const FieldReview& field, const Words& words);
/// "Tue 14 Jul 4 pm: north bench, heat opened, Severe".
std::string said_line(const alerts::Said& said, const Words& words);

}  // namespace antherd::letters
