// Opening a store: for the service, for a command that writes, for a command that reads.
#include <filesystem>

#include "edge/store/inside.hpp"

namespace antherd::store {
namespace {

/// Opens and checks; a Failure leaves the files as they are.
template <class Inside>
Outcome open_files(Inside& inside) {
  return inside.attempt("open the store", [&] {
    inside.connect();
    inside.settle_schema();
    return Done{};
  });
}

/// The same for the service, which sets a damaged file aside and begins anew.
template <class Inside>
Outcome open_as_service(Inside& inside) {
  const auto there = file_state(inside.path);
  const bool nothing = !there || there->size == 0;
  // A ballast is made after the store: without one, a file of no bytes is what a first start left.
  const std::string& folder = inside.options.folder;
  const bool had_one =
      file_state(folder + "/ballast") || !copies_in(folder, inside.options.now).empty();
  bool damaged = there && nothing && had_one;  // cut down to nothing: SQLite would call it new
  inside.anew = inside.anew || (nothing && had_one);
  if (!damaged) {
    const Outcome opened = inside.attempt("open the store", [&] {
      try {
        inside.connect();
        inside.check_all();
        inside.settle_schema();
      } catch (const Trouble& trouble) {
        if (!trouble.damaged()) throw;
        damaged = true;
      }
      return Done{};
    });
    if (!damaged) return opened;
  }
  if (inside.database) {
    inside.database->rollback();
    inside.database->leave_log();
    inside.database.reset();
  }
  Result<std::string> aside = put_aside(inside.options.folder, inside.options.now);
  if (!aside) return aside.failure();
  inside.aside = *aside;
  inside.anew = true;
  return open_files(inside);
}

}  // namespace

Result<Store> Store::open(const Options& options) {
  auto inside = std::make_unique<Inside>();
  inside->options = options;
  inside->path = options.folder + "/antherd.db";
  if (options.read_only) {
    std::error_code error;
    const bool there = std::filesystem::exists(inside->path, error);
    if (error) {
      return Failure{"open the store", inside->path, error.message(),
                     "the service keeps it for itself: run the command as root (sudo), or as the "
                     "user that the service runs as"};
    }
    if (!there) {
      return Failure{"open the store", inside->path, "there is none yet",
                     "start the service first, or name another [store] folder"};
    }
    if (Outcome opened = open_files(*inside); !opened) return opened.failure();
    return Store(std::move(inside));
  }
  if (Outcome made = make_folder(options.folder); !made) return made.failure();
  if (!options.service) {
    if (Outcome opened = open_files(*inside); !opened) return opened.failure();
    return Store(std::move(inside));
  }
  if (Outcome local = refuse_network(options.folder); !local) return local.failure();
  Result<int> lock = take_service_lock(options.folder);
  if (!lock) return lock.failure();
  inside->lock = *lock;
  const auto begin = [&]() -> Outcome {
    if (Outcome opened = open_as_service(*inside); !opened) return opened;
    return inside->begin_anew();
  };
  Outcome begun = begin();
  if (!begun && begun.failure().passes && has_no_room(options.folder) && inside->give_reserve()) {
    begun = begin();
  }
  if (!begun) return begun.failure();
  inside->damaged = false;  // of a copy, perhaps: the file itself was checked
  // Without room there is no ballast for now; keep_ballast is asked again by the service.
  static_cast<void>(make_ballast(options.folder));
  return Store(std::move(inside));
}

Store::Store(std::unique_ptr<Inside> inside) : inside_(std::move(inside)) {}
Store::Store(Store&&) noexcept = default;
Store& Store::operator=(Store&&) noexcept = default;
Store::~Store() = default;

std::optional<std::string> Store::set_aside() const { return inside_->aside; }

bool Store::reserve_given() const { return inside_->reserve_given; }

bool Store::samples_wait() const { return inside_->samples_wait; }

bool Store::met_damage() const { return inside_->damaged; }

Result<std::optional<std::string>> Store::check() {
  inside_->damaged = false;
  return inside_->attempt("check the whole store", [&]() -> std::optional<std::string> {
    try {
      // What the next opening will see: not the pages that this connection keeps in memory.
      Database fresh(inside_->path, Database::Mode::beside, inside_->options.patience,
                     inside_->options.haste);
      const std::string answer = fresh.text("PRAGMA quick_check(1)");
      if (answer == "ok") return std::nullopt;
      return answer.substr(answer.rfind('\n') + 1);  // the line before names the database
    } catch (const Trouble& trouble) {
      if (!trouble.damaged()) throw;
      return trouble.why;
    }
  });
}

bool Store::out_of_space() const { return inside_->full; }

Result<bool> Store::release_ballast() { return remove_ballast(inside_->options.folder); }

Outcome Store::keep_ballast() {
  Outcome made = make_ballast(inside_->options.folder);
  if (made) inside_->reserve_given = false;
  return made;
}

}  // namespace antherd::store
