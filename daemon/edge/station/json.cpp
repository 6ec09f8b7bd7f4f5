// One JSON answer (RFC 8259) by RFC 6901 pointers; see readings.hpp.
#include <charconv>
#include <cmath>
#include <cstdint>
#include <nlohmann/json.hpp>
#include <optional>
#include <utility>

#include "edge/station/readings.hpp"
#include "edge/station/recipe.hpp"
#include "edge/station/text.hpp"
#include "edge/station/time_reader.hpp"

namespace antherd::station {
namespace {

using Json = nlohmann::json;

Failure no_answer(const std::string& url, const std::string& why, const std::string& next) {
  return Failure{"read the station's answer", url, why, next};
}

/// The deepest nesting of brackets outside strings.
int depth_of(std::string_view text) {
  int depth = 0;
  int deepest = 0;
  bool in_string = false;
  for (std::size_t i = 0; i < text.size(); ++i) {
    const char c = text[i];
    if (in_string) {
      if (c == '\\') ++i;
      in_string = c != '"';
    } else if (c == '"') {
      in_string = true;
    } else if (c == '[' || c == '{') {
      deepest = std::max(deepest, ++depth);
    } else if (c == ']' || c == '}') {
      --depth;
    }
  }
  return deepest;
}

/// One reference token with ~1 and ~0 undone (RFC 6901 §4); nothing where a ~ stands before
/// anything else.
std::optional<std::string> unescaped(std::string_view token) {
  std::string plain;
  for (std::size_t i = 0; i < token.size(); ++i) {
    if (token[i] != '~') {
      plain += token[i];
    } else if (i + 1 < token.size() && (token[i + 1] == '0' || token[i + 1] == '1')) {
      plain += token[++i] == '1' ? '/' : '~';
    } else {
      return std::nullopt;
    }
  }
  return plain;
}

std::optional<std::size_t> index_of(std::string_view token) {
  if (token.empty() || (token.size() > 1 && token[0] == '0')) return std::nullopt;
  std::size_t index = 0;
  const auto [end, error] = std::from_chars(token.data(), token.data() + token.size(), index);
  if (error != std::errc{} || end != token.data() + token.size()) return std::nullopt;
  return index;
}

/// What a pointer points to, or nullptr.
const Json* at_pointer(const Json& document, std::string_view pointer) {
  const Json* node = &document;
  while (!pointer.empty()) {
    pointer.remove_prefix(1);
    const std::size_t end = std::min(pointer.find('/'), pointer.size());
    const std::optional<std::string> token = unescaped(pointer.substr(0, end));
    pointer.remove_prefix(end);
    if (!token) return nullptr;
    if (node->is_object()) {
      const auto member = node->find(*token);
      if (member == node->end()) return nullptr;
      node = &*member;
    } else if (node->is_array()) {
      const auto index = index_of(*token);
      if (!index || *index >= node->size()) return nullptr;
      node = &(*node)[*index];
    } else {
      return nullptr;
    }
  }
  return node;
}

/// Why a text is no pointer that can name one value, or nothing.
std::optional<std::string> pointer_fault(std::string_view pointer) {
  if (pointer.empty() || pointer[0] != '/') return "a pointer begins with '/'";
  if (pointer.size() >= 2 && pointer.substr(pointer.size() - 2) == "/-") {
    return "'-' points behind the last value of an array: there is nothing to read";
  }
  if (!unescaped(pointer)) return "'~' stands only before 0 or 1";
  return std::nullopt;
}

std::string shown(const Json& node) {
  return visible(node.dump(-1, ' ', false, Json::error_handler_t::replace));
}

class Answered {
 public:
  Answered(const std::string& url, const RecordForm& form, const Recipe& recipe)
      : url_(url), form_(form), recipe_(recipe) {}

  std::optional<Failure> pointers_fault() const {
    const auto check = [&](const std::string& pointer) -> std::optional<Failure> {
      const auto fault = pointer_fault(pointer);
      if (!fault) return std::nullopt;
      return no_answer(url_, quoted(pointer, 60) + ": " + *fault,
                       "write pointers like \"/obs/t\" (RFC 6901)");
    };
    if (!form_.time.arrival) {
      if (form_.time.at.empty()) return no_answer(url_, "its form names no time", "");
      for (const std::string& pointer : form_.time.at) {
        if (auto fault = check(pointer)) return fault;
      }
    }
    for (const Measure& measure : recipe_.measures()) {
      if (auto fault = check(measure.at)) return fault;
    }
    return std::nullopt;
  }

  Result<Instant> time(const Json& document, Instant now) const {
    if (form_.time.arrival) {
      if (now >= limits::first_instant) return now;
      return no_answer(url_, "the station sends no time and this computer's clock is not set",
                       "its answers are used once the clock is set");
    }
    Result<TimeReader> reader = TimeReader::make(form_.time, now);
    if (!reader) return reader.failure();
    reader->prefer_near(now);
    std::string text;
    for (const std::string& pointer : form_.time.at) {
      const Json* node = at_pointer(document, pointer);
      const bool usable = node && (node->is_string() || node->is_number());
      if (!usable) {
        return no_answer(url_,
                         std::string("time: ") + (node ? "no text or number" : "nothing") + " at " +
                             visible(pointer, 60),
                         "the answer was not used");
      }
      if (!text.empty()) text += ' ';
      text += text_of(*node);
    }
    std::string reason;
    const auto at = reader->read(trim(text), reason);
    if (!at) return no_answer(url_, "time: " + reason, "the answer was not used");
    return *at;
  }

  /// One value into the sample. False where the answer cannot be used because of it.
  bool value(const Json& document, const Measure& measure, weather::Sample& sample) {
    const Json* node = at_pointer(document, measure.at);
    const std::string word = std::string(measure.word) + ": ";
    if (!node) {
      refuse(document,
             word + "nothing at " + visible(measure.at, 60) + "; the rest of the answer is used");
      return true;
    }
    if (node->is_null()) return true;
    double number = 0;
    if (node->is_number()) {
      number = node->get<double>();
      if (recipe_.missing(number)) return true;
      if (!std::isfinite(number) || std::fabs(number) > limits::largest_value) {
        refuse(*node, word + say(NumberFault::too_large, shown(*node)));
        return false;
      }
    } else if (node->is_string()) {
      const std::string_view text = trim(node->get_ref<const std::string&>());
      if (recipe_.missing(text)) return true;
      if (const NumberFault fault = read_number(text, false, number); fault != NumberFault::none) {
        refuse(*node, word + say(fault, text));
        return false;
      }
      if (recipe_.missing(number)) return true;
    } else {
      refuse(*node, word + "at " + visible(measure.at, 60) + " stands " +
                        (node->is_array()    ? "an array"
                         : node->is_object() ? "an object"
                                             : "true or false") +
                        ", not a number");
      return false;
    }
    std::string reason;
    if (!recipe_.put(measure, number, sample, reason)) refuse(*node, reason);
    return true;
  }

  /// Whether the answer speaks of the station that is asked for.
  bool wanted(const Json& document) const {
    if (!form_.where) return true;
    const Json* node = at_pointer(document, form_.where->first);
    return node && (node->is_string() || node->is_number()) &&
           text_of(*node) == form_.where->second;
  }

  std::vector<Refused> take_refused() { return std::move(refused_); }

 private:
  static std::string text_of(const Json& node) {
    if (node.is_string()) return node.get<std::string>();
    if (node.is_number_float()) {
      // A Unix time written as 1.7e9 or with a fraction: whole numbers are written out.
      const double whole = std::floor(node.get<double>());
      if (std::fabs(whole) < 1e15) return std::to_string(static_cast<std::int64_t>(whole));
    }
    return node.dump();
  }

  void refuse(const Json& node, std::string reason) {
    refused_.push_back(Refused{url_, 0, std::move(reason), shown(node)});
  }

  const std::string& url_;
  const RecordForm& form_;
  const Recipe& recipe_;
  std::vector<Refused> refused_;
};

Result<Json> parsed(std::string_view text, const std::string& url) {
  if (text.size() > limits::http_bytes) {
    return no_answer(url, "it is longer than 1 MiB", "the answer was not used");
  }
  if (depth_of(text) > limits::json_depth) {
    return no_answer(url, "it is nested deeper than 64 levels", "the answer was not used");
  }
  try {
    return Json::parse(text.begin(), text.end());
  } catch (const Json::parse_error& error) {
    return no_answer(url,
                     "it is no JSON (from byte " + std::to_string(error.byte) + " on; it begins '" +
                         visible(text, 40) + "')",
                     "the answer was not used");
  } catch (const Json::out_of_range&) {
    return no_answer(url, "it holds a number beyond what can be measured or held",
                     "the answer was not used");
  }
}

}  // namespace

Result<Readings> read_json(std::string_view text, const std::string& url, const RecordForm& form,
                           Instant now) {
  const Result<Recipe> recipe = Recipe::make(form);
  if (!recipe) return recipe.failure();
  const std::string shown_url = visible(url, 400);
  Answered answered(shown_url, form, *recipe);
  if (auto fault = answered.pointers_fault()) return *fault;
  const Result<Json> document = parsed(text, shown_url);
  if (!document) return document.failure();
  Readings readings;
  if (!answered.wanted(*document)) return readings;
  const Result<Instant> time = answered.time(*document, now);
  if (!time) return time.failure();

  weather::Sample sample;
  sample.time = *time;
  bool usable = true;
  for (const Measure& measure : recipe->measures()) {
    usable = answered.value(*document, measure, sample) && usable;
  }
  readings.refused = answered.take_refused();
  if (usable && !sample.empty()) readings.samples.push_back(sample);
  if (usable && sample.empty()) {
    const std::string why =
        readings.refused.empty() ? "every value is missing" : readings.refused.front().reason;
    return no_answer(shown_url, "it holds no usable value: " + why, "it is asked again");
  }
  return readings;
}

}  // namespace antherd::station
