// See database.hpp.
#include "edge/store/database.hpp"

#include <cerrno>
#include <cmath>
#include <filesystem>
#include <limits>
#include <system_error>

#include "core/failures/result.hpp"

namespace antherd::store {
namespace {

/// What SQLite says, and what the system said to it: "disk I/O error" alone names no cause. SQLite
/// passes the system's number on from some of its calls only; errno is as its last call left it.
std::string words_of(sqlite3* connection) {
  const int left = errno;
  std::string words = sqlite3_errmsg(connection);
  const int primary = sqlite3_extended_errcode(connection) & 0xff;
  if (primary != SQLITE_IOERR && primary != SQLITE_CANTOPEN) return words;
  const int told = sqlite3_system_errno(connection);
  const int of_system = told != 0 ? told : left;
  if (of_system == 0) return words;
  return words + " (" + std::generic_category().message(of_system) + ")";
}

}  // namespace

Statement::~Statement() { sqlite3_reset(handle_); }

void Statement::check(int code) {
  if (code == SQLITE_OK) return;
  sqlite3* connection = sqlite3_db_handle(handle_);
  throw Trouble{sqlite3_extended_errcode(connection), words_of(connection), {}};
}

void Statement::put_integer(std::int64_t value) {
  check(sqlite3_bind_int64(handle_, ++next_, value));
}

void Statement::put(double value) {
  // SQLite would make a NaN NULL: it must not pass for a missing value.
  ANTHERD_CHECK(std::isfinite(value));
  check(sqlite3_bind_double(handle_, ++next_, value));
}

void Statement::put(std::string_view text) {
  // A null pointer would bind NULL; an empty text is a text.
  const char* bytes = text.data() == nullptr ? "" : text.data();
  check(sqlite3_bind_text64(handle_, ++next_, bytes, text.size(), SQLITE_STATIC, SQLITE_UTF8));
}

void Statement::put(std::nullopt_t) { check(sqlite3_bind_null(handle_, ++next_)); }

bool Statement::step() {
  column_ = 0;
  errno = 0;  // see words_of
  const int code = sqlite3_step(handle_);
  if (code == SQLITE_ROW) return true;
  if (code != SQLITE_DONE) check(code);
  return false;
}

void Statement::run() {
  while (step()) {
  }
  reset();
}

void Statement::reset() {
  sqlite3_reset(handle_);
  next_ = 0;
}

bool Statement::is_null() const { return sqlite3_column_type(handle_, column_) == SQLITE_NULL; }

std::int64_t Statement::integer() { return sqlite3_column_int64(handle_, column_++); }

int Statement::small() {
  const std::int64_t value = integer();
  if (value < std::numeric_limits<int>::min() || value > std::numeric_limits<int>::max()) {
    throw Trouble{SQLITE_CORRUPT, "a number in the file is out of range", {}};
  }
  return static_cast<int>(value);
}

double Statement::real() { return sqlite3_column_double(handle_, column_++); }

std::string Statement::text() {
  const int column = column_++;
  const unsigned char* bytes = sqlite3_column_text(handle_, column);
  const int size = sqlite3_column_bytes(handle_, column);
  if (bytes == nullptr || size <= 0) return {};
  return std::string(reinterpret_cast<const char*>(bytes), static_cast<std::size_t>(size));
}

std::string reading_uri(const std::string& path, Database::Mode mode) {
  constexpr char digits[] = "0123456789ABCDEF";
  std::string uri = "file://";
  for (const char letter : std::filesystem::absolute(path).string()) {
    if (letter == '%' || letter == '?' || letter == '#') {
      const auto byte = static_cast<unsigned char>(letter);
      uri += '%';
      uri += digits[byte >> 4];
      uri += digits[byte & 15];
    } else {
      uri += letter;
    }
  }
  // readonly_shm: a reader must not make the -shm, for then it would belong to the reader, and the
  // service could not open it.
  uri += mode == Database::Mode::still ? "?mode=ro&immutable=1" : "?mode=ro&readonly_shm=1";
  return uri;
}

int Database::wait_for_lock(void* database, int times) {
  constexpr std::chrono::milliseconds once{10}, in_haste{50};
  const auto& [patience, haste] = static_cast<Database*>(database)->patience_;
  if (times * once >= (haste != nullptr && *haste ? std::min(in_haste, patience) : patience)) {
    return 0;
  }
  sqlite3_sleep(static_cast<int>(once.count()));
  return 1;
}

Database::Database(const std::string& path, Mode mode, std::chrono::milliseconds patience,
                   const std::atomic<bool>* haste)
    : patience_{patience, haste} {
  sqlite3* connection = nullptr;
  const bool writes = mode == Mode::write;
  // Absolute, so that no folder's name is taken for a URI.
  const std::string name =
      writes ? std::filesystem::absolute(path).string() : reading_uri(path, mode);
  const int access = writes ? SQLITE_OPEN_READWRITE | SQLITE_OPEN_CREATE : SQLITE_OPEN_READONLY;
  const int flags = access | SQLITE_OPEN_URI | SQLITE_OPEN_NOMUTEX;
  const int code = sqlite3_open_v2(name.c_str(), &connection, flags, nullptr);
  connection_.reset(connection);
  if (connection == nullptr) throw Trouble{SQLITE_NOMEM, "out of memory", {}};
  sqlite3_extended_result_codes(connection, 1);
  if (code != SQLITE_OK) fail(code);
  sqlite3_busy_handler(connection, wait_for_lock, this);
  sqlite3_db_config(connection, SQLITE_DBCONFIG_DEFENSIVE, 1, nullptr);
  sqlite3_db_config(connection, SQLITE_DBCONFIG_TRUSTED_SCHEMA, 0, nullptr);
  script("PRAGMA temp_store = MEMORY; PRAGMA cell_size_check = ON; PRAGMA foreign_keys = ON");
  if (writes) {
    // FULL: what was committed stays through a power cut. The limit keeps a big intake's log from
    // lying on the disk for ever.
    script("PRAGMA synchronous = FULL; PRAGMA journal_size_limit = 4194304");
  }
}

Database::~Database() { statements_.clear(); }

void Database::fail(int code) { throw Trouble{code, words_of(connection_.get()), {}}; }

Statement Database::use(const char* sql) {
  auto& cached = statements_[sql];
  if (!cached) {
    sqlite3_stmt* statement = nullptr;
    const int code = sqlite3_prepare_v3(connection_.get(), sql, -1, SQLITE_PREPARE_PERSISTENT,
                                        &statement, nullptr);
    if (code != SQLITE_OK) {
      statements_.erase(sql);
      fail(code);
    }
    cached.reset(statement);
  }
  ANTHERD_CHECK(!sqlite3_stmt_busy(cached.get()));
  return Statement(cached.get());
}

void Database::script(const char* sql) {
  const int code = sqlite3_exec(connection_.get(), sql, nullptr, nullptr, nullptr);
  if (code != SQLITE_OK) fail(code);
}

std::int64_t Database::number(const char* sql) {
  Statement statement = use(sql);
  return statement.step() ? statement.integer() : 0;
}

std::string Database::text(const char* sql) {
  Statement statement = use(sql);
  return statement.step() ? statement.text() : std::string();
}

std::int64_t Database::changes() const { return sqlite3_changes64(connection_.get()); }

std::int64_t Database::last_id() const { return sqlite3_last_insert_rowid(connection_.get()); }

void Database::rollback() noexcept {
  if (sqlite3_get_autocommit(connection_.get()) != 0) return;  // SQLite undid it itself
  sqlite3_exec(connection_.get(), "ROLLBACK", nullptr, nullptr, nullptr);
}

void Database::leave_log() {
  sqlite3_db_config(connection_.get(), SQLITE_DBCONFIG_NO_CKPT_ON_CLOSE, 1, nullptr);
}

}  // namespace antherd::store
