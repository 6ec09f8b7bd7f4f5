#include "house/tree.hpp"

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "support/paths.hpp"

namespace house {

namespace fs = std::filesystem;

namespace {

bool is_text(const std::string& text) {
  return std::find(text.begin(), text.end(), '\0') == text.end();
}

void read_folder(const fs::path& top, const fs::path& folder, std::vector<File>& files) {
  for (const auto& entry : fs::directory_iterator(folder)) {
    const std::string name = entry.path().filename().string();
    if (entry.is_directory() && !entry.is_symlink()) {
      if (!name.starts_with(".") || name == ".ci") read_folder(top, entry.path(), files);
    } else if (name == ".git") {
      // of a second work tree a file: git's, not the project's
    } else if (entry.is_regular_file() && entry.file_size() <= (1u << 20)) {
      std::ifstream file(entry.path(), std::ios::binary);
      std::ostringstream text;
      text << file.rdbuf();
      if (is_text(text.str()))
        files.push_back({fs::relative(entry.path(), top).generic_string(), text.str()});
    }
  }
}

}  // namespace

const std::vector<File>& tree() {
  static const std::vector<File> files = [] {
    std::vector<File> found;
    read_folder(paths::source(), paths::source(), found);
    std::sort(found.begin(), found.end(),
              [](const File& a, const File& b) { return a.path < b.path; });
    return found;
  }();
  return files;
}

std::vector<std::string> top_level() {
  std::vector<std::string> names;
  for (const auto& entry : fs::directory_iterator(paths::source()))
    names.push_back(entry.path().filename().string());
  std::sort(names.begin(), names.end());
  return names;
}

std::string text_of(const std::string& path) {
  for (const File& file : tree())
    if (file.path == path) return file.text;
  return {};
}

std::string complaints_about(const std::function<bool(const File&)>& wanted,
                             const std::function<Complaints(const File&)>& rule) {
  std::string all;
  for (const File& file : tree())
    if (wanted(file))
      for (const std::string& complaint : rule(file)) all += complaint + "\n";
  return all;
}

bool is_code(const std::string& path) { return path.ends_with(".cpp") || path.ends_with(".hpp"); }

}  // namespace house
