// Who may include whom, and what the core must not hold.
#include <regex>

#include "house/rules.hpp"

namespace house {

namespace {

std::string place(const File& file, std::size_t line) {
  return file.path + ":" + std::to_string(line) + ": ";
}

std::vector<std::string> words_of(const std::string& text) {
  static const std::regex word("[^\\s,]+");
  return {std::sregex_token_iterator(text.begin(), text.end(), word), {}};
}

/// The rooms that one word of the second column means.
std::set<std::string> meant_by(const std::string& word, const std::set<std::string>& rooms) {
  std::set<std::string> meant;
  for (const std::string& room : rooms) {
    const bool whole_floor = (word == "core" || word == "edge") && room.starts_with(word + "/");
    const bool by_name = room == word || room.ends_with("/" + word);
    if (whole_floor || by_name) meant.insert(room);
  }
  return meant;
}

bool starts_with_room(const std::string& path, const std::string& room) {
  return path.starts_with(room + "/");
}

}  // namespace

RoomTable read_room_table(std::string_view developers, Complaints& complaints) {
  static const std::regex row("\\|\\s*`((?:core|edge|run)/[a-z_]+|main\\.cpp)`\\s*\\|([^|]*)\\|.*");
  std::map<std::string, std::string> rows;
  std::set<std::string> rooms;
  for (const std::string& line : lines_of(developers)) {
    std::smatch parts;
    if (!std::regex_match(line, parts, row)) continue;
    if (!rooms.insert(parts[1]).second) complaints.push_back(parts[1].str() + ": two rows");
    rows[parts[1]] = parts[2];
  }
  RoomTable table;
  for (const auto& [room, may_include] : rows) {
    std::set<std::string>& allowed = table[room];
    for (const std::string& word : words_of(may_include)) {
      if (word == "–") continue;
      const std::set<std::string> meant = meant_by(word, rooms);
      if (meant.empty()) complaints.push_back(room + ": no room is called '" + word + "'");
      allowed.insert(meant.begin(), meant.end());
    }
  }
  return table;
}

std::string room_of(std::string_view path) {
  static const std::regex form("daemon/([a-z_]+/[a-z_]+)/.*");
  std::cmatch parts;
  if (std::regex_match(path.data(), path.data() + path.size(), parts, form)) return parts[1];
  return std::string(path.substr(path.rfind('/') + 1));
}

Complaints check_includes(const File& file, const RoomTable& table) {
  static const std::regex include("\\s*#\\s*include\\s*\"([^\"]+)\".*");
  Complaints complaints;
  const std::string room = room_of(file.path);
  const auto row = table.find(room);
  if (row == table.end()) return {file.path + ":1: the room " + room + " has no row"};
  const std::vector<std::string> lines = lines_of(file.text);
  for (std::size_t i = 0; i < lines.size(); ++i) {
    std::smatch parts;
    if (lines[i].find('#') == std::string::npos) continue;
    if (!std::regex_match(lines[i], parts, include)) continue;
    const std::string path = parts[1];
    bool allowed = starts_with_room(path, room);
    for (const std::string& other : row->second) allowed = allowed || starts_with_room(path, other);
    if (!allowed) complaints.push_back(place(file, i + 1) + room + " may not include " + path);
  }
  return complaints;
}

Complaints check_core_words(const File& file) {
  static const std::regex word(
      "\\b(now\\s*\\(|(getenv|secure_getenv|spdlog|curl|sqlite3?|asio|thread|jthread|rand|srand|"
      "random_device|system_clock|steady_clock|setlocale|locale|printf|puts|fopen|cout|cerr)\\b)");
  static const std::regex header(
      "\\s*#\\s*include\\s*<(thread|mutex|atomic|condition_variable|future|fstream|iostream|"
      "filesystem|random|locale|clocale|ctime|.*/.*|.*\\.h)>.*");
  Complaints complaints;
  const std::vector<std::string> lines = lines_of(without_comments_and_texts(file.text));
  for (std::size_t i = 0; i < lines.size(); ++i) {
    std::smatch parts;
    if (std::regex_match(lines[i], parts, header))
      complaints.push_back(place(file, i + 1) + "the core may not include <" + parts[1].str() +
                           ">");
    else if (lines[i].find("#include") == std::string::npos &&
             std::regex_search(lines[i], parts, word))
      complaints.push_back(place(file, i + 1) + "the core may not say '" + parts[1].str() + "'");
  }
  return complaints;
}

Complaints check_clock(const File& file) {
  Complaints complaints;
  if (file.path.starts_with("daemon/edge/clock/")) return complaints;
  const std::vector<std::string> lines = lines_of(without_comments_and_texts(file.text));
  for (std::size_t i = 0; i < lines.size(); ++i)
    // `Instant Timekeeper::now() const` tells of a time, it asks no clock
    if (lines[i].find("::now(") != std::string::npos &&
        lines[i].find("::now() const") == std::string::npos)
      complaints.push_back(place(file, i + 1) + "only edge/clock asks what time it is");
  return complaints;
}

Complaints check_commands(const File& file) {
  static const std::regex program(
      R"((^|[^\w.>])(system|popen|v?fork|posix_spawnp?|exec[lv]p?e?)\s*\()");
  static const std::regex statement(R"((\.|->|\b)(use|script)\((.*))");
  Complaints complaints;
  const std::vector<std::string> lines = lines_of(without_comments_and_texts(file.text));
  for (std::size_t i = 0; i < lines.size(); ++i) {
    if (std::regex_search(lines[i], program))
      complaints.push_back(place(file, i + 1) + "no shell, no other program");
    std::smatch call;
    if (!file.path.starts_with("daemon/edge/store/") ||
        !std::regex_search(lines[i], call, statement))
      continue;
    const std::string said = call[3];
    const bool made =
        said.find('+') != std::string::npos || said.find("c_str") != std::string::npos;
    if (made && said.find("std::to_string(options.page_limit)") == std::string::npos)
      complaints.push_back(place(file, i + 1) + "SQL is a fixed text with bound values");
  }
  return complaints;
}

}  // namespace house
