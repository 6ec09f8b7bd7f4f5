// Failures travel as values; broken promises of our own code end the program.
#include "core/failures/result.hpp"

#include <sys/wait.h>
#include <unistd.h>

#include <csignal>
#include <cstdio>
#include <memory>
#include <string>

#include "support/catch.hpp"

using namespace antherd;

namespace {

Result<int> half_of(int number) {
  if (number % 2 != 0) return Failure{"halve a number", std::to_string(number), "it is odd", ""};
  return number / 2;
}

/// How a child ends that does `act`.
template <class Act>
int status_of(Act act) {
  const pid_t child = fork();
  if (child == 0) {
    std::signal(SIGABRT, SIG_DFL);
    if (std::freopen("/dev/null", "w", stderr) == nullptr) _exit(9);
    act();
    _exit(0);
  }
  int status = 0;
  waitpid(child, &status, 0);
  return status;
}

}  // namespace

TEST_CASE("a result holds its value or its failure") {
  const Result<int> good = half_of(8);
  REQUIRE(good);
  CHECK(*good == 4);
  const Result<int> bad = half_of(7);
  REQUIRE_FALSE(bad);
  CHECK(bad.failure().why == "it is odd");
}

TEST_CASE("a result hands over what can only be moved") {
  Result<std::unique_ptr<std::string>> made = std::make_unique<std::string>("anther");
  REQUIRE(made);
  CHECK((*made)->size() == 6);
  const std::unique_ptr<std::string> taken = *std::move(made);
  CHECK(*taken == "anther");
}

TEST_CASE("a result may hold a failure as text beside a text") {
  Result<std::string> text = std::string("value");
  REQUIRE(text);
  CHECK(text->size() == 5);
  text = Failure{"a", "b", "c", "d"};
  REQUIRE_FALSE(text);
  const Outcome outcome = Done{};
  CHECK(outcome);
}

TEST_CASE("a failure is one sentence and leaves out what it does not know") {
  const Failure whole{"read the settings", "antherd.toml", "no such file", "nothing was changed"};
  CHECK(whole.sentence() ==
        "could not read the settings (antherd.toml): no such file; nothing was changed");
  CHECK(Failure{"send a letter", "", "", ""}.sentence() == "could not send a letter");
  CHECK(Failure{"send a letter", "", "no route", ""}.sentence() ==
        "could not send a letter: no route");
  CHECK(Failure{"send a letter", "", "", "it waits"}.sentence() ==
        "could not send a letter; it waits");
}

TEST_CASE("a broken promise of our own code aborts, a kept one does not") {
  const int kept = status_of([] { ANTHERD_CHECK(1 + 1 == 2); });
  CHECK(WIFEXITED(kept));
  CHECK(WEXITSTATUS(kept) == 0);
  const int broken_one = status_of([] { ANTHERD_CHECK(1 + 1 == 3); });
  REQUIRE(WIFSIGNALED(broken_one));
  CHECK(WTERMSIG(broken_one) == SIGABRT);
}
