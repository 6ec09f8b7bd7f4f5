// Which episodes and which entries of the ledger are about the same thing; see story.hpp.
#include <algorithm>
#include <map>
#include <numeric>
#include <tuple>

#include "core/alerts/story.hpp"

namespace antherd::alerts {

namespace {

using Topic = std::pair<Kind, std::string>;

// Half-open stretches of time: one may begin where another ends.
struct Stretch {
  Instant from, to;
};

bool overlap(const Stretch& a, const Stretch& b) {
  return a.from == b.from || std::max(a.from, b.from) < std::min(a.to, b.to);
}

// Entries of the ledger that bear one identity.
struct Group {
  std::string identity;
  Stretch stretch;
  std::vector<const Said*> said;
};

struct Matter {
  std::vector<const Episode*> episodes;
  std::map<std::string, Group> groups;
};

Stretch stretch_of(const Episode& episode) {
  return {episode.start, episode.closed.value_or(Instant::max())};
}

Stretch stretch_of(const Said& said) {
  return {said.start, std::max(said.start, said.until.value_or(said.start))};
}

std::map<Topic, Matter> matters_of(std::span<const Episode> episodes, std::span<const Said> said) {
  std::map<Topic, Matter> matters;
  for (const Episode& episode : episodes) {
    matters[{episode.kind, episode.subject}].episodes.push_back(&episode);
  }
  for (const Said& entry : said) {
    if (is_notice(entry.kind)) continue;
    Group& group = matters[{entry.kind, entry.subject}].groups[entry.episode];
    const Stretch stretch = stretch_of(entry);
    if (group.said.empty()) {
      group.identity = entry.episode;
      group.stretch = stretch;
    }
    group.stretch.from = std::min(group.stretch.from, stretch.from);
    group.stretch.to = std::max(group.stretch.to, stretch.to);
    group.said.push_back(&entry);
  }
  return matters;
}

// Joins what overlaps: `root[i]` is the first of the things that belong together with thing i.
class Joining {
 public:
  explicit Joining(std::size_t things) : root_(things) {
    std::iota(root_.begin(), root_.end(), std::size_t{0});
  }
  std::size_t root(std::size_t i) const {
    while (root_[i] != i) i = root_[i];
    return i;
  }
  void join(std::size_t a, std::size_t b) {
    a = root(a);
    b = root(b);
    root_[std::max(a, b)] = std::min(a, b);
  }

 private:
  std::vector<std::size_t> root_;
};

void add_episode(Story& story, const Episode& episode, Instant now) {
  story.gone = false;
  story.start = story.changes.empty() ? episode.start : std::min(story.start, episode.start);
  for (const Change& change : episode.changes) {
    if (change.at <= now) story.changes.push_back(change);
  }
}

void add_group(Story& story, const Group& group) {
  if (story.identity.empty()) story.identity = group.identity;
  story.said.insert(story.said.end(), group.said.begin(), group.said.end());
}

void finish(Story& story) {
  std::stable_sort(story.changes.begin(), story.changes.end(),
                   [](const Change& a, const Change& b) { return a.at < b.at; });
  std::sort(story.said.begin(), story.said.end(), [](const Said* a, const Said* b) {
    return std::tie(a->place, a->at, a->about, a->saying, a->level, a->episode) <
           std::tie(b->place, b->at, b->about, b->saying, b->level, b->episode);
  });
  for (const Change& change : story.changes) story.peak = std::max(story.peak, change.level);
  if (story.changes.empty()) {
    if (!story.said.empty()) story.start = story.said.front()->start;
    return;
  }
  story.level = story.changes.back().level;
  story.open = story.changes.back().phase != Phase::closed;
  if (story.identity.empty()) story.identity = identity(story.kind, story.subject, story.start);
}

void add_stories(std::vector<Story>& stories, const Topic& topic, const Matter& matter,
                 Instant now) {
  std::vector<const Episode*> episodes = matter.episodes;
  std::sort(episodes.begin(), episodes.end(),
            [](const Episode* a, const Episode* b) { return a->start < b->start; });
  std::vector<const Group*> groups;
  for (const auto& [name, group] : matter.groups) groups.push_back(&group);
  std::stable_sort(groups.begin(), groups.end(), [](const Group* a, const Group* b) {
    return a->stretch.from < b->stretch.from;
  });
  Joining joining(episodes.size() + groups.size());
  for (std::size_t e = 0; e < episodes.size(); ++e) {
    for (std::size_t g = 0; g < groups.size(); ++g) {
      if (overlap(stretch_of(*episodes[e]), groups[g]->stretch))
        joining.join(e, episodes.size() + g);
    }
  }
  std::map<std::size_t, Story> joined;
  for (std::size_t i = 0; i < episodes.size() + groups.size(); ++i) {
    Story& story = joined[joining.root(i)];
    story.kind = topic.first;
    story.subject = topic.second;
    if (i < episodes.size()) {
      add_episode(story, *episodes[i], now);
    } else {
      add_group(story, *groups[i - episodes.size()]);
    }
  }
  for (auto& [root, story] : joined) {
    finish(story);
    stories.push_back(std::move(story));
  }
}

}  // namespace

bool is_notice(Kind kind) {
  return kind == Kind::stage || kind == Kind::sprinkler_streak || kind == Kind::diary_gap ||
         kind == Kind::season;
}

std::vector<Story> stories_of(std::span<const Episode> episodes, std::span<const Said> said,
                              Instant now) {
  std::vector<Story> stories;
  for (const auto& [topic, matter] : matters_of(episodes, said)) {
    add_stories(stories, topic, matter, now);
  }
  return stories;
}

}  // namespace antherd::alerts
