// See farm.hpp.
#include "farm.hpp"

#include "support/catch.hpp"

namespace antherd::test {

std::string farm_with(std::string_view passage, std::string_view other) {
  std::string text = farm_text;
  const std::size_t at = text.find(passage);
  REQUIRE(at != std::string::npos);
  return text.replace(at, passage.size(), other);
}

std::vector<std::string> complaints_of(const std::string& text) {
  const settings::Reading reading = settings::read_text(text, "farm.toml", false);
  CHECK(reading.settings.has_value() == reading.complaints.empty());
  std::vector<std::string> sentences;
  for (const settings::Complaint& complaint : reading.complaints) {
    sentences.push_back(complaint.sentence());
  }
  return sentences;
}

settings::Settings settings_of(const std::string& text) {
  const settings::Reading reading = settings::read_text(text, "/etc/antherd/farm.toml", false);
  for (const settings::Complaint& complaint : reading.complaints) {
    UNSCOPED_INFO(complaint.sentence());
  }
  REQUIRE(reading.settings);
  return *reading.settings;
}

}  // namespace antherd::test
