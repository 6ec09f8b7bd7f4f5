// How the world's failures travel: as values that cannot be overlooked. Our own mistakes abort.
// This file must not know who shows a failure, or where.
#pragma once

#include <string>
#include <utility>
#include <variant>

namespace antherd {

/// What was tried, on what, why it did not work, and what happens next: the four things a person
/// needs who reads it a week later.
struct Failure {
  std::string what;       // "read the settings"
  std::string on_what;    // "/etc/antherd/antherd.toml"
  std::string why;        // "no such file"
  std::string what_next;  // "nothing was changed; name the file with --settings"
  bool passes = false;    // trouble of the machine, not of what was asked: it may end by itself

  /// One sentence: "could not WHAT (ON WHAT): WHY; WHAT NEXT".
  std::string sentence() const;
};

/// A value or a Failure.
template <class T>
class [[nodiscard]] Result {
 public:
  Result(T value) : content_(std::in_place_index<0>, std::move(value)) {}  // NOLINT: by design
  Result(Failure failure) : content_(std::in_place_index<1>, std::move(failure)) {}  // NOLINT

  explicit operator bool() const { return content_.index() == 0; }
  T& operator*() & { return std::get<0>(content_); }
  const T& operator*() const& { return std::get<0>(content_); }
  T&& operator*() && { return std::get<0>(std::move(content_)); }
  T* operator->() { return &std::get<0>(content_); }
  const T* operator->() const { return &std::get<0>(content_); }
  const Failure& failure() const { return std::get<1>(content_); }

 private:
  std::variant<T, Failure> content_;
};

/// Success without a value, or a Failure.
struct Done {};
using Outcome = Result<Done>;

/// Aborts with file and line when a promise of our own code is broken (a bug, never bad data).
#define ANTHERD_CHECK(condition) \
  ((condition) ? static_cast<void>(0) : ::antherd::broken(#condition, __FILE__, __LINE__))
[[noreturn]] void broken(const char* condition, const char* file, int line);

}  // namespace antherd
