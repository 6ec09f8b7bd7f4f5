// One SQLite connection with its cached prepared statements, and the only place where SQLite's
// functions for them are called. Trouble travels inside this room as an exception that never
// leaves it: the store's functions turn it into a Failure. It must not know what the tables mean.
#pragma once

#include <sqlite3.h>

#include <algorithm>
#include <atomic>
#include <chrono>
#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <unordered_map>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"

namespace antherd::store {

/// What SQLite (or the system) answered. `code` is SQLite's, extended.
struct Trouble {
  int code = 0;
  std::string why;
  std::string what_next;  // empty: the usual words for this code

  int primary() const { return code & 0xff; }
  bool damaged() const { return primary() == SQLITE_CORRUPT || primary() == SQLITE_NOTADB; }
};

/// A cached statement in use. It goes back, reset, at the end of its scope.
class Statement {
 public:
  explicit Statement(sqlite3_stmt* handle) : handle_(handle) {}
  Statement(const Statement&) = delete;
  Statement& operator=(const Statement&) = delete;
  ~Statement();

  /// Binds values to the parameters in order. Texts must outlive the run. A double must be finite.
  template <class... Values>
  Statement& bind(const Values&... values) {
    next_ = 0;
    (put(values), ...);
    return *this;
  }
  /// Binds some more parameters after those already bound.
  template <class... Values>
  Statement& bind_more(const Values&... values) {
    (put(values), ...);
    return *this;
  }
  /// To the next row; false when there is none.
  bool step();
  /// Runs a statement that returns no rows, and makes it ready to be bound again.
  void run();
  void reset();

  // Columns of the row, from left to right.
  bool is_null() const;
  std::int64_t integer();
  int small();
  double real();
  std::string text();
  Instant instant() { return Instant(Seconds(integer())); }
  HourStart hour() { return hour_of(instant()); }
  template <class Value>
  std::optional<Value> maybe() {
    if (is_null()) return ++column_, std::nullopt;
    return get(static_cast<Value*>(nullptr));
  }
  sqlite3_stmt* raw() const { return handle_; }

 private:
  void check(int code);
  void put_integer(std::int64_t value);
  void put(std::int64_t value) { put_integer(value); }
  void put(int value) { put_integer(value); }
  void put(bool value) { put_integer(value ? 1 : 0); }
  void put(double value);
  void put(std::string_view text);
  void put(const std::string& text) { put(std::string_view(text)); }
  void put(const char* text) { put(std::string_view(text)); }
  void put(std::nullopt_t);
  void put(Instant at) { put_integer(at.time_since_epoch().count()); }
  /// HourStart::min() and max() stand for "from ever" and "for ever": as seconds they would
  /// overflow, so they are cut to what the file's whole numbers hold.
  void put(HourStart hour) {
    constexpr HourStart first = std::chrono::ceil<std::chrono::hours>(Instant::min());
    constexpr HourStart last = std::chrono::floor<std::chrono::hours>(Instant::max());
    put(Instant(std::clamp(hour, first, last)));
  }
  void put(Celsius point) { put(point.value); }
  template <class Unit>
  void put(Quantity<Unit> quantity) {
    put(quantity.value);
  }
  template <class Value>
  void put(const std::optional<Value>& value) {
    if (value) {
      put(*value);
    } else {
      put(std::nullopt);
    }
  }
  int get(int*) { return small(); }
  bool get(bool*) { return integer() != 0; }
  double get(double*) { return real(); }
  Instant get(Instant*) { return instant(); }
  Celsius get(Celsius*) { return Celsius(real()); }
  template <class Unit>
  Quantity<Unit> get(Quantity<Unit>*) {
    return Quantity<Unit>(real());
  }

  sqlite3_stmt* handle_;
  int next_ = 0;    // parameters bound so far
  int column_ = 0;  // columns read so far
};

class Database {
 public:
  enum class Mode {
    write,   // made when missing
    beside,  // read beside a writer, or what one left: -wal and -shm are there
    still,   // read a file that nobody has open: no -wal is there
  };

  /// Opens and sets a connection up. Throws Trouble.
  /// @param haste  while true no lock is waited for longer than 50 ms; may be null
  Database(const std::string& path, Mode mode, std::chrono::milliseconds patience,
           const std::atomic<bool>* haste = nullptr);
  Database(const Database&) = delete;
  Database& operator=(const Database&) = delete;
  ~Database();

  /// The cached statement of a text with static life. One text is in use once at a time.
  Statement use(const char* sql);
  /// Runs several statements without parameters.
  void script(const char* sql);
  /// The first column of the first row, as a number; 0 when there is none.
  std::int64_t number(const char* sql);
  std::string text(const char* sql);
  std::int64_t changes() const;
  std::int64_t last_id() const;
  /// Undoes an open transaction, if there is one.
  void rollback() noexcept;
  /// Leaves the -wal as it is when closing: evidence of a damage is not touched.
  void leave_log();

 private:
  struct Finalize {
    void operator()(sqlite3_stmt* statement) const { sqlite3_finalize(statement); }
  };
  struct Close {
    void operator()(sqlite3* connection) const { sqlite3_close_v2(connection); }
  };
  struct Patience {
    std::chrono::milliseconds usual;
    const std::atomic<bool>* haste;
  };
  [[noreturn]] void fail(int code);
  static int wait_for_lock(void* database, int times);

  Patience patience_;
  std::unique_ptr<sqlite3, Close> connection_;
  std::unordered_map<std::string_view, std::unique_ptr<sqlite3_stmt, Finalize>> statements_;
};

/// The URI by which a reader opens a file; for `attach` as well.
std::string reading_uri(const std::string& path, Database::Mode mode);

/// A transaction that writes: begun at once, undone unless it is committed.
class Transaction {
 public:
  explicit Transaction(Database& database) : database_(database) {
    database_.use("BEGIN IMMEDIATE").run();
  }
  Transaction(const Transaction&) = delete;
  Transaction& operator=(const Transaction&) = delete;
  ~Transaction() {
    if (!committed_) database_.rollback();
  }
  void commit() {
    database_.use("COMMIT").run();
    committed_ = true;
  }

 private:
  Database& database_;
  bool committed_ = false;
};

}  // namespace antherd::store
