// The commands, one file each; this header is what main() and the commands share.
#pragma once

namespace antherd::commands {

/// Exit status: 0 done; 1 failed and said why; 2 usage or settings; 3 done, needs attention.
enum Exit { done = 0, failed = 1, usage = 2, attention = 3 };

int main(int argc, char** argv);

}  // namespace antherd::commands
