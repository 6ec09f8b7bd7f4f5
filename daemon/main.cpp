// antherd: picks the command and returns its exit status.
#include "run/commands/commands.hpp"

int main(int argc, char** argv) { return antherd::commands::main(argc, argv); }
