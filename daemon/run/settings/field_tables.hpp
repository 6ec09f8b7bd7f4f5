// A field's own numbers: the tables offset, heat and humid.
#pragma once

#include "core/field/field.hpp"
#include "core/risk/rules.hpp"
#include "run/settings/table.hpp"

namespace antherd::settings {

void read_offset(const Table& table, field::Field& field);
void read_heat(const Table& table, risk::HeatRules& heat);
void read_humid(const Table& table, risk::HumidRules& humid);

}  // namespace antherd::settings
