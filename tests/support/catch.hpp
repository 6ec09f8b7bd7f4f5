// Chooses between Catch2 v2 (Debian 12) and v3 (Debian 13), so that tests include one name.
#pragma once
#ifdef ANTHERD_CATCH3
#include <catch2/catch_all.hpp>
using Catch::Approx;
#else
#include <catch2/catch.hpp>
#endif
