// The one main of every test program; it knows nothing of antherd.
#ifdef ANTHERD_CATCH3
#include <catch2/catch_session.hpp>
int main(int argc, char** argv) { return Catch::Session().run(argc, argv); }
#else
#define CATCH_CONFIG_MAIN
#include <catch2/catch.hpp>
#endif
