// The program: reads the command line and does what it says. Returns the exit status.
//
//   0   done                       69  the data folder is in use, or the address is
//   1   a failure without a name   74  the store failed: it ends the process
//   64  the command line is wrong  78  the configuration is wrong
//   65  the request is wrong (solve)
#pragma once

namespace bandwright {

int run(int argc, const char* const* argv);

}  // namespace bandwright
