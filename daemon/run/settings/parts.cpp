// What the readers of all parts share; see parts.hpp.
#include "run/settings/parts.hpp"

#include <algorithm>
#include <filesystem>

namespace antherd::settings {

namespace {
constexpr std::size_t longest_path = 1000;  // well inside PATH_MAX with a file name behind it
}

std::optional<Table> section(Work& work, const std::string& name) {
  const Node* const node = work.root.find(name);
  if (node == nullptr) return {};
  const std::string header = "[" + name + "]";
  if (node->kind == Node::Kind::table) return Table(*node, header, header, "", work.faults);
  work.faults.complaints.push_back({work.faults.file, node->line, header, shown(*node),
                                    "one table, its name in single brackets on a line of its own",
                                    header, ""});
  return {};
}

std::vector<const Node*> sections(Work& work, const std::string& name) {
  const Node* const node = work.root.find(name);
  if (node == nullptr) return {};
  const std::string header = "[[" + name + "]]";
  std::vector<const Node*> tables;
  const Node* wrong = node->kind == Node::Kind::list ? nullptr : node;
  if (wrong == nullptr) {
    for (const Node& item : node->items) {
      if (item.kind == Node::Kind::table) {
        tables.push_back(&item);
      } else {
        wrong = &item;
      }
    }
  }
  if (wrong != nullptr) {
    work.faults.complaints.push_back(
        {work.faults.file, wrong->line, header, shown(*wrong),
         "one table for each " + name + ", its name in double brackets on a line of its own",
         header, ""});
  }
  return tables;
}

std::string label_of(const Node& node, const std::string& table, const std::string& key,
                     std::size_t index) {
  const Node* const name = node.find(key);
  const bool usable =
      name != nullptr && name->kind == Node::Kind::text && !fault_of_name(name->text, 80);
  return table + " " + (usable ? name->text : std::to_string(index + 1));
}

std::vector<std::string> names_of(const Work& work, const std::string& table) {
  std::vector<std::string> names;
  const Node* const list = work.root.find(table);
  if (list == nullptr || list->kind != Node::Kind::list) return names;
  for (const Node& item : list->items) {
    const Node* const name = item.find("name");
    if (name == nullptr || name->kind != Node::Kind::text) continue;
    if (std::find(names.begin(), names.end(), name->text) == names.end()) {
      names.push_back(name->text);
    }
  }
  return names;
}

void refuse_repeats(Work& work, const std::string& table, const std::string& key) {
  const Node* const list = work.root.find(table);
  if (list == nullptr || list->kind != Node::Kind::list) return;
  std::vector<const Node*> seen;
  for (const Node& item : list->items) {
    const Node* const name = item.find(key);
    if (name == nullptr || name->kind != Node::Kind::text) continue;
    const auto earlier = std::find_if(seen.begin(), seen.end(), [&](const Node* other) {
      return same_word(other->text, name->text);
    });
    if (earlier == seen.end()) {
      seen.push_back(name);
      continue;
    }
    work.faults.complaints.push_back(
        {work.faults.file, name->line, "[[" + table + "]], " + key, shown(*name), "", "",
         "line " + std::to_string((*earlier)->line) + " has it already; each needs its own"});
  }
}

std::string hung(const Work& work, const std::string& path) {
  const std::filesystem::path given(path);
  const auto whole = given.is_absolute() ? given : std::filesystem::path(work.base) / given;
  return whole.lexically_normal().string();
}

std::optional<std::string> path_of(const Work& work, const Table& table, const std::string& key,
                                   bool required) {
  const bool file = key != "folder";
  const Wanted wanted{std::string("the path of a ") + (file ? "file" : "folder") +
                          "; a relative one hangs from the settings file",
                      key + (file ? " = \"mail-password\"" : " = \"readings\"")};
  const auto path = table.name(key, longest_path, wanted, required);
  if (!path) return {};
  return hung(work, *path);
}

}  // namespace antherd::settings
