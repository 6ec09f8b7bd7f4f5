// Units do not mix, and a temperature is a point.
#include "core/units/quantity.hpp"

#include <concepts>

#include "support/catch.hpp"

using namespace antherd;

namespace {

template <class A, class B>
concept adds = requires(A a, B b) {
  a + b;
};
template <class A, class B>
concept subtracts = requires(A a, B b) {
  a - b;
};
template <class A, class B>
concept compares = requires(A a, B b) {
  a < b;
};

static_assert(!adds<Celsius, Celsius>);
static_assert(adds<Celsius, CelsiusDifference>);
static_assert(!adds<Celsius, double>);
static_assert(!subtracts<CelsiusDifference, Celsius>);
static_assert(!adds<Millimetre, Metre>);
static_assert(!compares<Kilopascal, Percent>);
static_assert(!std::convertible_to<double, Celsius>);
static_assert(!std::convertible_to<double, Percent>);
static_assert(std::same_as<decltype(Celsius{} - Celsius{}), CelsiusDifference>);
static_assert(std::same_as<decltype(Millimetre{} / Millimetre{}), double>);

}  // namespace

TEST_CASE("two temperatures differ by a difference, which moves a temperature") {
  CHECK((Celsius{35.0} - Celsius{32.5}).value == 2.5);
  CHECK((Celsius{20.0} + CelsiusDifference{-0.5}).value == 19.5);
  CHECK((Celsius{20.0} - CelsiusDifference{-0.5}).value == 20.5);
  CHECK(Celsius{31.9} < Celsius{32.2});
  CHECK(Celsius{32.2} >= Celsius{32.2});
}

TEST_CASE("a quantity adds, scales and compares with its own kind") {
  Millimetre water{6.0};
  water += Millimetre{0.5};
  CHECK(water == Millimetre{6.5});
  CHECK((2.0 * Millimetre{3.0}).value == 6.0);
  CHECK((Millimetre{3.0} * 2.0).value == 6.0);
  CHECK((Millimetre{3.0} / 2.0).value == 1.5);
  CHECK(Millimetre{3.0} / Millimetre{2.0} == 1.5);
  CHECK((Millimetre{3.0} - Millimetre{5.0}) == -Millimetre{2.0});
  CHECK(Percent{}.value == 0.0);
}
