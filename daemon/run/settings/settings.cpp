// The settings put together from their parts; see settings.hpp.
#include "run/settings/settings.hpp"

#include <sys/stat.h>

#include <algorithm>
#include <cerrno>
#include <cstring>
#include <filesystem>
#include <fstream>
#include <variant>

#include "run/settings/parts.hpp"

namespace antherd::settings {
namespace {

constexpr const char* system_file = "/etc/antherd/antherd.toml";
constexpr std::size_t longest_sentence = 4000;     // none of ours comes near it
constexpr std::size_t largest_file = 1024 * 1024;  // read_document() refuses far smaller ones

/// A TOML library's reason with what usually stands behind it.
std::string understood(const std::string& why) {
  const auto has = [&](const char* words) { return why.find(words) != std::string::npos; };
  if (has("could not determine value type") || has("expected value")) {
    return why + " (texts and quantities stand in quotes: name = \"bench\")";
  }
  if (has("escape sequence")) return why + " (in a path write / instead of \\)";
  if (has("parsing time")) return why + " (clock times stand in quotes: daily = \"19:00\")";
  if (has("utf-8")) return why + " (save the file as UTF-8)";
  if (has("existing array")) return why + " (repeated tables have double brackets: [[station]])";
  if (has("control characters")) return why + " (a closing quote may be missing)";
  if (has("cannot redefine")) return why + " (it stands there twice)";
  return why;
}

Reading refused(const std::string& path, int line, std::string advice) {
  Reading reading;
  reading.complaints.push_back({path, line, "", "", "", "", std::move(advice)});
  return reading;
}

Reading read_tree(const Node& root, const std::string& path, bool ask_disk) {
  Faults faults{path, {}, {}};
  Settings settings;
  const auto absolute = std::filesystem::absolute(path).lexically_normal();
  settings.path = absolute.string();
  Work work{root, faults, settings, absolute.parent_path().string(), ask_disk};
  const Table unknown_tables(root, "the file", "", "", faults);
  read_farm(work);
  read_store_and_log(work);
  read_alerts(work);
  read_diary(work);
  read_page(work);
  read_watch(work);
  read_stations(work);
  read_fields(work);
  read_mail(work);
  read_recipients(work);
  Reading reading;
  if (faults.complaints.empty()) {
    remark_on(work);
    reading.settings = std::move(settings);
  }
  std::stable_sort(faults.complaints.begin(), faults.complaints.end(),
                   [](const Complaint& a, const Complaint& b) { return a.line < b.line; });
  reading.complaints = std::move(faults.complaints);
  reading.remarks = std::move(faults.remarks);
  return reading;
}

}  // namespace

Reading read_text(std::string_view text, const std::string& path, bool ask_disk) {
  const auto document = read_document(text);
  if (const auto* trouble = std::get_if<Unreadable>(&document)) {
    return refused(path, trouble->line, "from here on it is no TOML: " + understood(trouble->why));
  }
  return read_tree(std::get<Node>(document), path, ask_disk);
}

Reading read_file(const std::string& path, bool ask_disk) {
  struct stat status {};
  const std::string next = "; name another file with --settings";
  if (stat(path.c_str(), &status) != 0) {
    return refused(path, 0, std::string("it cannot be read: ") + std::strerror(errno) + next);
  }
  if (!S_ISREG(status.st_mode)) return refused(path, 0, "it is not a plain file" + next);
  std::ifstream file(path, std::ios::binary);
  std::string text(largest_file, '\0');
  file.read(text.data(), static_cast<std::streamsize>(text.size()));
  if (!file && !file.eof()) {
    return refused(path, 0, std::string("it cannot be read: ") + std::strerror(errno) + next);
  }
  text.resize(static_cast<std::size_t>(file.gcount()));
  return read_text(text, path, ask_disk);
}

std::string Complaint::sentence() const {
  std::string text = file + (line > 0 ? ":" + std::to_string(line) : "") + ": ";
  if (!where.empty()) text += where + ": ";
  if (!advice.empty()) {
    text += (got.empty() ? "" : "got " + got + "; ") + advice;
  } else if (got.empty()) {
    text += "missing: " + allowed;
  } else {
    text += "got " + got + "; allowed: " + allowed;
  }
  if (!example.empty()) text += "; for example: " + example;
  return visible(text, longest_sentence);
}

std::string choose_file(const std::string& option) {
  if (!option.empty()) return option;
  std::error_code trouble;
  return std::filesystem::exists(system_file, trouble) ? system_file : "./antherd.toml";
}

const Station* Settings::station(std::string_view name) const {
  for (const Station& known : stations) {
    if (known.station.name == name) return &known;
  }
  return nullptr;
}

const FieldPlan* Settings::field(std::string_view name) const {
  for (const FieldPlan& known : fields) {
    if (known.field.name == name) return &known;
  }
  return nullptr;
}

Result<const FieldPlan*> Settings::field_by_beginning(std::string_view beginning) const {
  std::vector<const FieldPlan*> begun;
  std::string all, some;
  for (const FieldPlan& known : fields) {
    const std::string& name = known.field.name;
    if (same_word(name, beginning)) return &known;
    all += (all.empty() ? "" : ", ") + in_quotes(name);
    if (!same_word(name.substr(0, beginning.size()), beginning)) continue;
    begun.push_back(&known);
    some += (some.empty() ? "" : ", ") + in_quotes(name);
  }
  if (begun.size() == 1) return begun.front();
  Failure failure{"find the field", in_quotes(beginning), "", ""};
  failure.why = begun.empty() ? "no field's name begins so" : "several fields' names begin so";
  failure.what_next = "there are: " + (begun.empty() ? all : some);
  return failure;
}

}  // namespace antherd::settings
