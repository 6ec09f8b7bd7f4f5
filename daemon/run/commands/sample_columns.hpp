// Which column of a station's file holds what, and in which unit, guessed from names and values.
// It must not know how a guess is shown.
#pragma once

#include <initializer_list>
#include <optional>
#include <string>
#include <vector>

#include "run/commands/sample.hpp"

namespace antherd::commands {

/// Whether a text holds one of the words. Text and words in small letters.
bool has_word(const std::string& text, std::initializer_list<const char*> words);
std::string small_letters(std::string text);
/// The letters and digits of a column's name and its unit, cut at all else: "Air Temp (F)" is
/// air, temp, f.
std::vector<std::string> parts_of(const SampleText& sample, std::size_t column);

/// Numbers of one column in their order of size, without marks for what is missing; a decimal
/// comma is read where the separator leaves room for it.
std::vector<double> numbers_of(const SampleText& sample, std::size_t column);
/// Marks for a missing value in a column: -9999, M, "---".
std::vector<std::string> marks_of(const SampleText& sample, std::size_t column);
double at_share(const std::vector<double>& sorted, double share);

/// Columns that look like the element; of several an outdoor one. Never one from indoors.
std::optional<std::size_t> temperature_column(const SampleText& sample);
std::optional<std::size_t> humidity_column(const SampleText& sample);
std::optional<std::size_t> dew_point_column(const SampleText& sample);
std::optional<std::size_t> column_with(const SampleText& sample,
                                       std::initializer_list<const char*> words,
                                       std::initializer_list<const char*> but);

/// degC or degF where the name or the units' row says so.
std::optional<std::string> named_temperature_unit(const SampleText& sample, std::size_t column);

}  // namespace antherd::commands
