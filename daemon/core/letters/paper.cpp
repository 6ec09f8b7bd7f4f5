// Parts put on paper: subject, body and the short form. No words of any one kind of letter here.
#include <algorithm>

#include "core/letters/parts.hpp"
#include "core/letters/wrap.hpp"

namespace antherd::letters {
namespace {

constexpr std::size_t in_short = 6;    // other fields told with their paragraphs
constexpr std::size_t in_lines = 100;  // further ones by their first line: a letter stays < 32 KiB
constexpr std::size_t least_name = 8;  // of a name in a subject

std::string lines_of(const std::vector<std::string>& lines) {
  std::string text;
  for (const std::string& line : lines) text += line + "\n";
  return text;
}

/// A command for a shell, broken before an option with a backslash where it is too long.
std::string command_text(const std::string& command) {
  std::string text;
  std::string line = "  ";
  for (std::size_t at = 0; at < command.size();) {
    const std::size_t next = std::min(command.find(" --", at + 1), command.size());
    const std::string piece = command.substr(at, next - at);
    if (columns(line) + columns(piece) > page_width - 2 && columns(line) > 4) {
      text += line + " \\\n";
      line = "    " + piece.substr(piece[0] == ' ' ? 1 : 0);
    } else {
      line += piece;
    }
    at = next;
  }
  text += line;
  std::string fitted;
  for (std::size_t at = 0; at <= text.size();) {
    const std::size_t end = std::min(text.find('\n', at), text.size());
    const std::string one = text.substr(at, end - at);
    fitted += (columns(one) <= page_width ? one + "\n" : lines_of(wrap(one, page_width, 2, 4)));
    at = end + 1;
  }
  return fitted;
}

/// Dates without their weekday: "9 Jul" for "Thu 9 Jul".
std::string without_weekdays(std::string text) {
  for (const char* weekday : {"Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun"}) {
    const std::string begins = std::string(weekday) + glue;
    for (std::size_t at = text.find(begins); at != std::string::npos; at = text.find(begins, at)) {
      text.erase(at, begins.size());
    }
  }
  return text;
}

/// Without its bracket: "no reading since 10 am." for "no reading since 10 am (25 h)."
std::string without_bracket(std::string text) {
  const std::size_t opens = text.rfind(" (");
  const std::size_t closes = text.rfind(')');
  if (opens != std::string::npos && closes != std::string::npos && closes > opens) {
    text.erase(opens, closes - opens + 1);
  }
  return text;
}

std::string first_sentence(std::string text) { return text.substr(0, text.find(". ")) + "."; }

/// The first line on one line. What the subject or a section below says too goes first: weekdays,
/// brackets, a second sentence; only then a long name is cut. The figure is not.
std::string first_line(const Part& part) {
  if (columns(part.first) <= page_width || !part.first.starts_with(part.name)) {
    return paragraph(part.first);
  }
  std::string rest = part.first.substr(part.name.size());
  const std::size_t name = columns(part.name);
  const auto fits = [&] { return name + columns(rest) <= page_width; };
  if (!fits()) rest = without_weekdays(rest);
  if (!fits()) rest = without_bracket(rest);
  if (!fits() && rest.find(". ") != std::string::npos) rest = first_sentence(rest);
  const std::size_t room = page_width - std::min(page_width, columns(rest));
  return paragraph(clip(part.name, std::max(least_name, room)) + rest);
}

std::string marks(const Desk& desk) {
  std::string text;
  if (desk.exercise)
    text += paragraph("This is an exercise: an invented season. Do not act on it.");
  if (!desk.clock_set) text += paragraph("Computer clock not set: times are the station's own.");
  return text;
}

/// Another field in short: what is its own, without what the worst field's part has told already.
std::string other_part(const Part& part, const Part& worst) {
  std::string text =
      "\n" + std::string(page_width, '-') + "\n" + first_line(part) + paragraph(part.tonight);
  const auto told = [&](const Section& section) {
    return std::any_of(worst.sections.begin(), worst.sections.end(), [&](const Section& other) {
      return other.heading == section.heading && other.text == section.text &&
             other.lines == section.lines;
    });
  };
  for (Section section : part.sections) {
    section.once.clear();
    if (section.own && !told(section)) text += section_text(section);
  }
  return text;
}

/// Signs outside plain ASCII that we use ourselves, spelt for phone gateways: one such sign makes
/// a gateway send three messages for one.
std::string spelt_out(std::string text) {
  const std::vector<std::pair<std::string, std::string>> spelling{
      {" °", ""}, {"°", ""}, {"±", "+-"}, {"≥", ">="}, {"–", "-"}, {"·", " "}, {"…", ".."}};
  for (const auto& [sign, spelt] : spelling) {
    for (std::size_t at = text.find(sign); at != std::string::npos; at = text.find(sign, at)) {
      text.replace(at, sign.size(), spelt);
      at += spelt.size();
    }
  }
  return text;
}

std::string more(std::size_t others) { return " +" + std::to_string(others) + " more"; }

}  // namespace

std::string paragraph(const std::string& text) { return lines_of(wrap(text, page_width)); }

std::string section_text(const Section& section) {
  const std::string said = join({section.text, section.once});
  if (said.empty() && section.lines.empty() && section.commands.empty()) return "";
  std::string text = "\n" + section.heading + "\n";
  for (const std::string& line : section.lines) text += lines_of(wrap(line, page_width, 2, 6));
  text += paragraph(said);
  for (const std::string& command : section.commands) text += command_text(command);
  return text;
}

std::string subject_line(const Part& part, const std::string& before, const std::string& after) {
  std::string rest = unglued(part.rest);
  std::string end = after;
  const std::string start = before + part.lead + ": ";
  const auto fits = [&](std::size_t name) {
    return columns(start) + std::min(columns(part.name), name) + 1 + columns(rest) + columns(end) <=
           subject_width;
  };
  const auto line = [&] {
    const std::size_t taken = columns(start) + 1 + columns(rest) + columns(end);
    const std::size_t room = taken < subject_width ? subject_width - taken : 0;
    return clip(unglued(start + clip(part.name, std::max(room, least_name)) + " " + rest + end),
                subject_width);
  };
  if (fits(columns(part.name))) return line();
  if (const std::size_t by = rest.find(" by "); by != std::string::npos) rest.erase(by, 3);
  if (end.ends_with(" more")) end.erase(end.size() - 5);
  while (!fits(least_name)) {
    const std::size_t comma = rest.rfind(", ");
    if (comma == std::string::npos) break;
    rest.erase(comma);
  }
  return line();
}

std::string body_of(const Part& worst, const std::vector<Part>& others, const std::string& next,
                    const Desk& desk) {
  std::string text = first_line(worst) + paragraph(worst.tonight) + marks(desk);
  for (const Section& section : worst.sections) text += section_text(section);
  for (std::size_t i = 0; i < others.size() && i < in_short; ++i)
    text += other_part(others[i], worst);
  if (others.size() > in_short) {
    text += "\n" + std::string(page_width, '-') + "\n";
    const std::size_t end = std::min(others.size(), in_short + in_lines);
    for (std::size_t i = in_short; i < end; ++i) text += first_line(others[i]);
    if (others.size() > end) {
      text += paragraph("And " + std::to_string(others.size() - end) + " more: antherd now");
    }
  }
  if (!others.empty()) text += "\n" + std::string(page_width, '-') + "\n";
  std::string next_text = section_text({"NEXT", join({worst.next, next}), {}, true, {}});
  if (!others.empty()) next_text.erase(0, 1);
  return text + next_text + "\n" + paragraph(standing_caution(Language::english));
}

std::string brief_of(const Part& worst, std::size_t others, const Desk& desk) {
  const std::string before = desk.exercise ? "EXERCISE: " : "";
  const std::string after = (others > 0 ? more(others) : "") + ".";
  constexpr std::size_t name_room = 28;
  std::string head =
      before + worst.lead + ": " + clip(worst.name, name_room) + " " + worst.rest + after;
  head = spelt_out(unglued(head));
  std::string tail = spelt_out(unglued(worst.brief));
  while (columns(head) + 1 + columns(tail) > brief_width && !tail.empty()) {
    const std::size_t stop = tail.rfind(". ");
    tail = stop == std::string::npos ? "" : tail.substr(0, stop + 1);
  }
  if (!tail.empty()) head += " " + tail;
  return spelt_out(clip(head, brief_width - 1));
}

std::string standing_caution(Language) {
  return "Advice from estimates: scout before acting. For any treatment the label and local rules "
         "decide; ask the extension service or a licensed adviser. Not a safety device for people: "
         "in such heat follow the worker heat rules of your place.";
}

}  // namespace antherd::letters
