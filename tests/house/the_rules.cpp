// Each rule of the house finds a planted offence and leaves good text alone.
#include "house/rules.hpp"
#include "support/catch.hpp"

using namespace house;

namespace {

const char* const table_text =
    "| room | may include | what |\n"
    "|---|---|---|\n"
    "| `core/units` | – | units |\n"
    "| `core/weather` | units | air |\n"
    "| `edge/clock` | units | clock |\n"
    "| `run/service` | core edge | loop |\n";

RoomTable table() {
  Complaints none;
  RoomTable made = read_room_table(table_text, none);
  REQUIRE(none == Complaints{});
  return made;
}

}  // namespace

TEST_CASE("house: the room table is read with its short names") {
  CHECK(table().at("core/weather") == std::set<std::string>{"core/units"});
  CHECK(table().at("run/service") ==
        std::set<std::string>{"core/units", "core/weather", "edge/clock"});
  Complaints complaints;
  read_room_table("| `core/units` | wether | x |\n| `core/units` | – | x |\n", complaints);
  CHECK(complaints.size() == 1);  // the second row stands, and its twin is named
  complaints.clear();
  read_room_table("| `core/units` | wether | x |\n", complaints);
  CHECK(complaints == Complaints{"core/units: no room is called 'wether'"});
}

TEST_CASE("house: an include across rooms is found") {
  const File good{"daemon/core/weather/a.cpp",
                  "#include \"core/weather/a.hpp\"\n#include \"core/units/b.hpp\"\n"};
  CHECK(check_includes(good, table()) == Complaints{});
  const File bad{"daemon/core/weather/a.cpp",
                 "#include <map>\n#include \"edge/clock/clock.hpp\"\n"};
  CHECK(check_includes(bad, table()).size() == 1);
  CHECK(check_includes(bad, table())[0].starts_with("daemon/core/weather/a.cpp:2: "));
  const File bare{"daemon/core/weather/a.cpp", "#include \"a.hpp\"\n"};
  CHECK(check_includes(bare, table()).size() == 1);
  const File homeless{"daemon/core/attic/a.cpp", ""};
  CHECK(check_includes(homeless, table()).size() == 1);
}

TEST_CASE("house: words and headers that the core must not hold are found") {
  const auto offences = [](const std::string& text) {
    return check_core_words({"daemon/core/x/a.cpp", text}).size();
  };
  CHECK(offences("auto t = Clock::now();\n") == 1);
  CHECK(offences("auto t = now ();\n") == 1);
  CHECK(offences("std::getenv(\"HOME\");\n") == 1);
  CHECK(offences("std::thread worker;\n") == 1);
  CHECK(offences("int r = rand();\n") == 1);
  CHECK(offences("#include <random>\n#include <spdlog/spdlog.h>\n#include <time.h>\n") == 3);
  CHECK(offences("// a thread of thought, now (and then)\nint brand = 1; // rand\n") == 0);
  CHECK(offences("const char* text = \"now (at 15:00)\";\n#include <vector>\n") == 0);
  CHECK(offences("bool known(int); int operand; Instant now;\n") == 0);
}

TEST_CASE("house: a clock outside the clock's room is found") {
  const std::string code = "auto t = std::chrono::system_clock::now();\n";
  CHECK(check_clock({"daemon/run/service/a.cpp", code}).size() == 1);
  CHECK(check_clock({"daemon/edge/clock/clock.cpp", code}) == Complaints{});
  CHECK(check_clock({"daemon/run/a.cpp", "Instant Keeper::now() const {\n"}) == Complaints{});
}

TEST_CASE("house: a shell and SQL made of values are found") {
  const auto complaints = [](const std::string& line) {
    return check_commands({"daemon/edge/store/a.cpp", line + "\n"}).size();
  };
  CHECK(complaints("system(command.c_str());") == 1);
  CHECK(complaints("FILE* pipe = ::popen(command, mode);") == 1);
  CHECK(complaints("if (fork() == 0) execv(path, words);") == 1);
  CHECK(complaints("database.use((\"SELECT a FROM b WHERE c = \" + name).c_str()).run();") == 1);
  CHECK(complaints("database.use(\"SELECT a FROM b WHERE c = ?\").bind(name).run();") == 0);
  CHECK(complaints("std::error_code error; operating.system(1); file_system(2);") == 0);
}

TEST_CASE("house: long files, lines and functions are found") {
  const auto complaints = [](const std::string& text) {
    return check_sizes({"daemon/a.cpp", text}, true).size();
  };
  std::string body;
  for (int i = 0; i < 58; ++i) body += "  step();\n";
  CHECK(complaints("void f() {\n" + body + "}\n") == 0);             // 60 lines
  CHECK(complaints("void f() {\n" + body + "  step();\n}\n") == 1);  // 61
  CHECK(complaints("struct S {\n  int f(int a,\n    int b) {\n" + body + "  }\n};\n") == 1);
  CHECK(complaints("namespace a {\nclass B {\n" + body + "int c();\n};\n" + body + "}\n") == 0);
  CHECK(complaints("auto f = [](int) {\n" + body + "  step();\n};\n") == 1);
  CHECK(complaints("const int list[] = {\n" + body + body + "};\n") == 0);
  CHECK(complaints("void f() {\n  if (a) {\n" + body + "  }\n  g(\"}\");\n}\n") == 1);
  CHECK(complaints(std::string(100, 'a') + "\n") == 0);
  CHECK(complaints(std::string(101, 'a') + "\n") == 1);
  std::string degrees;
  for (int i = 0; i < 100; ++i) degrees += "°";
  CHECK(complaints(degrees + "\n") == 0);  // characters, not bytes
  std::string file;
  for (int i = 0; i < 400; ++i) file += "int a;\n";
  CHECK(complaints(file) == 0);
  CHECK(complaints(file + "int b;\n") == 1);
}

TEST_CASE("house: a formula without its source is found") {
  const auto complaints = [](const std::string& text) {
    return check_sources({"daemon/core/weather/a.hpp", text}).size();
  };
  CHECK(complaints("/// Slope. Source: FAO-56 eq. 13.\ndouble slope(Celsius t);\n") == 0);
  CHECK(complaints("/// Score of a day (science §8).\n/// More.\ndouble score(int day);\n") == 0);
  CHECK(complaints("/// Slope.\ndouble slope(Celsius t);\n") == 1);
  CHECK(complaints("/// Source: elsewhere.\n\nstd::optional<Celsius> wet(Celsius t);\n") == 1);
  CHECK(complaints("bool is_up(Instant at);\n  double share = 0;\n") == 0);
}

TEST_CASE("house: words of the workshop are found") {
  const auto complaints = [](const std::string& text) {
    return check_words({"README.md", text}).size();
  };
  CHECK(complaints("see /wo"
                   "rk/main\n") == 1);
  CHECK(complaints("as in the trans"
                   "cript of a sess"
                   "ion\n") == 2);
  CHECK(complaints("// TO"
                   "DO later\n") == 1);
  CHECK(complaints("fixes Issue"
                   " 12\n") == 1);
  CHECK(complaints("the network/working day, obsession, an issue of 12 mm\n") == 0);
}

TEST_CASE("house: strange names at the top are found") {
  std::vector<std::string> names = {"CMakeLists.txt",
                                    "CMakePresets.json",
                                    "LICENSE",
                                    "README.md",
                                    "DEVELOPERS.md",
                                    "daemon",
                                    "config",
                                    "tests",
                                    "systemd",
                                    "demo",
                                    ".git"};
  CHECK(check_top_level(names) == Complaints{});
  names.push_back("scripts");
  CHECK(check_top_level(names).size() == 1);
  names.erase(names.begin());
  CHECK(check_top_level(names).size() == 2);
}

TEST_CASE("house: tests are counted where they stand, not where they are spoken of") {
  const std::string one = std::string("TEST_") + "CASE(\"a\") {}\n";
  CHECK(count_tests(one + "  " + one) == 2);
  CHECK(count_tests("// " + one + "const char* t = \"" + "x\";\n") == 0);
}

TEST_CASE("house: comments and texts are cut out and lines stay lines") {
  CHECK(without_comments_and_texts("a // b\nc") == "a     \nc");
  CHECK(without_comments_and_texts("f(\"a\\\"b\", 'c')") == "f(      ,    )");
  CHECK(without_comments_and_texts("x = 1'000; /* a\nb */ y") == "x = 1'000;     \n     y");
  CHECK(without_comments_and_texts("R\"(a\n{)\" b") == "    \n    b");
}
