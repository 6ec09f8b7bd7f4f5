// antherd check --sample FILE; see sample.hpp.
#include <algorithm>
#include <fstream>
#include <iostream>
#include <string_view>

#include "core/letters/words.hpp"
#include "edge/station/readings.hpp"
#include "edge/station/text.hpp"
#include "run/commands/common.hpp"
#include "run/commands/sample.hpp"
#include "run/commands/sample_columns.hpp"

namespace antherd::commands {
namespace {

/// What is guessed from: a year of readings every minute. The reading itself takes the whole file.
constexpr std::size_t bytes_looked_at = 64 * 1024 * 1024;

std::string block_of(const SampleGuess& guess, const std::string& interval) {
  std::string block =
      "[[station]]\nname = \"station\"\nlatitude = 0.0            # yours, degrees north\n"
      "longitude = 0.0           # yours, degrees east: west of Greenwich is negative\n"
      "elevation = \"0 m\"         # yours\ninterval = \"" +
      interval + "\"\n\n[station.drop]\nfolder = \"drop\"           # where the files arrive\n";
  for (const std::string& line : guess.lines) block += line + "\n";
  return block;
}

/// The same block in the shortest settings around it, so that the real reader judges it.
std::string settings_of(const std::string& block) {
  return "[farm]\nname = \"sample\"\ntime_zone = \"UTC\"\n[store]\nfolder = \"store\"\n" + block +
         "[[field]]\nname = \"field\"\nstation = \"station\"\nsown = 2026-04-20\n"
         "crop_type = \"coastal\"\nirrigation = \"none\"\n";
}

std::string interval_of(const std::vector<weather::Sample>& samples) {
  std::vector<long> steps;
  for (std::size_t i = 1; i < samples.size(); ++i) {
    const auto step = (samples[i].time - samples[i - 1].time).count();
    if (step > 0) steps.push_back(step);
  }
  if (steps.empty()) return "5 min";
  std::nth_element(steps.begin(), steps.begin() + static_cast<long>(steps.size() / 2), steps.end());
  const long step = steps[steps.size() / 2];
  if (step < 60) return std::to_string(step) + " s";
  return std::to_string(std::min(step / 60, 60L)) + " min";
}

/// How many rows were refused; past a bound they are counted in one last entry.
std::size_t refused_rows(const std::vector<station::Refused>& refused) {
  if (refused.empty() || refused.back().line > 0) return refused.size();
  return refused.size() - 1 + static_cast<std::size_t>(std::atoll(refused.back().reason.c_str()));
}

void print_first_refused(const std::vector<station::Refused>& refused) {
  if (refused.empty()) return;
  const station::Refused& first = refused.front();
  std::cout << "# The first refused row is line " << first.line << ": " << first.reason << ".\n";
}

void print_what_it_reads(const std::vector<weather::Sample>& samples, std::size_t refused) {
  std::cout << "# Read with it: " << letters::plain_count(samples.size(), "reading") << ", "
            << refused << (refused == 1 ? " row" : " rows") << " refused; from "
            << utc_text(samples.front().time) << " to " << utc_text(samples.back().time) << "\n";
  std::vector<double> temperatures;
  for (const auto& sample : samples) {
    if (sample.temperature) temperatures.push_back(sample.temperature->value);
  }
  if (temperatures.empty()) return;
  std::sort(temperatures.begin(), temperatures.end());
  const auto at = [&](double share) { return rounded(at_share(temperatures, share), 1); };
  std::cout << "# Temperature " << at(0) << " to " << at(1) << " °C, half of it " << at(0.25)
            << " to " << at(0.75) << ". If that is not your weather, the unit is wrong.\n";
}

void print_not_found(const SampleGuess& guess, const SampleText& sample) {
  if (guess.missing.empty()) return;
  std::cout << "# Not found: ";
  for (const std::string& key : guess.missing) std::cout << key << " ";
  std::cout << "\n# The columns are: ";
  std::string names;
  for (std::size_t i = 0; i < sample.header.size() && names.size() < 400; ++i) {
    names += station::visible(sample.header[i], 60) + " | ";
  }
  std::cout << names << "\n";
}

}  // namespace

Exit check_sample(const Invocation& call) {
  std::ifstream file(call.sample, std::ios::binary);
  std::string text;
  for (char piece[65536]; file && text.size() < bytes_looked_at;) {
    file.read(piece, sizeof piece);
    text.append(piece, static_cast<std::size_t>(file.gcount()));
  }
  if (text.empty()) {
    return say(Failure{"look at a station's file", call.sample, "it cannot be read or is empty",
                       "nothing was written"});
  }
  const std::string_view header = std::string_view(text).substr(0, text.find('\n'));
  if (std::any_of(header.begin(), header.end(),
                  [](unsigned char c) { return c < ' ' && c != '\t' && c != '\r'; })) {
    return say(Failure{"look at a station's file", call.sample,
                       "its first line is no text: " + station::visible(header, 60),
                       "nothing was written"});
  }
  const bool cut = text.size() >= bytes_looked_at;
  const bool unended = !cut && text.back() != '\n';
  if (cut) text.resize(text.rfind('\n') + 1);
  const SampleText sample = split_sample(text);
  const SampleGuess guess = guess_form(sample);
  std::string block = block_of(guess, "5 min");
  const auto reading = settings::read_text(settings_of(block), "sample.toml", false);
  std::vector<weather::Sample> samples;
  std::vector<station::Refused> refused;
  if (reading.settings) {
    const auto& drop = *reading.settings->stations.front().drop;
    if (auto read = station::read_csv_file(call.sample, drop.record, std::nullopt)) {
      samples = std::move(read->samples);
      refused = std::move(read->refused);
      block = block_of(guess, interval_of(samples));
    }
  }
  std::cout << "# A settings block for " << call.sample
            << ". Every line is a guess: look at each.\n"
            << block;
  for (const std::string& doubt : guess.doubts) {
    std::cout << "# Look at " << doubt << (doubt.ends_with('?') ? "\n" : ".\n");
  }
  if (unended) {
    std::cout << "# Look at the end of the file: its last line has no line end, and the service "
                 "reads a line\n# once it ends.\n";
  }
  print_not_found(guess, sample);
  if (samples.empty()) {
    print_first_refused(refused);
    std::cout << "# No row could be read with it: mend the lines above, then run antherd check.\n";
    return Exit::attention;
  }
  print_what_it_reads(samples, refused_rows(refused));
  print_first_refused(refused);
  return guess.missing.empty() ? Exit::done : Exit::attention;
}

}  // namespace antherd::commands
