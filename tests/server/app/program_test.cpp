// The program as it is started from a shell.
#include <doctest/doctest.h>

#include <fstream>
#include <string>

#include "server/config/option_table.h"
#include "tests/server/app/daemon.h"

namespace bandwright {
namespace {

// Runs the program to its end.
struct Run {
  explicit Run(const std::vector<std::string>& arguments, const std::string& input = "")
      : process(BANDWRIGHT_DAEMON, arguments, input), status(process.wait()) {}
  bool says(const std::string& text) const {
    return (process.output_text + process.error_text).find(text) != std::string::npos;
  }
  ChildProcess process;
  int status;
};

TEST_CASE("the version is printed on standard output") {
  const Run run({"--version"});
  CHECK(run.status == 0);
  CHECK(run.process.output_text.find("bandwrightd ") == 0);
}

TEST_CASE("the help of serve tells every option, its range and its variable") {
  const Run run({"serve", "--help"});
  CHECK(run.status == 0);
  for (const Option& option : option_table()) {
    CAPTURE(option.key);
    CHECK(run.says("--" + std::string(option.key) + " "));
    CHECK(run.says(environment_name(option)));
  }
}

TEST_CASE("a command line that cannot be understood is status 64") {
  CHECK(Run({}).status == 64);
  CHECK(Run({"bake"}).status == 64);
  CHECK(Run({"serve", "--no-such-flag", "1"}).status == 64);
  CHECK(Run({"solve"}).status == 64);
  CHECK(Run({"solve", "-", "--threads", "-1"}, "{}").status == 64);
}

TEST_CASE("a wrong configuration is status 78 with every fault named") {
  const Run run({"serve", "--listen", "0.0.0.0:80", "--workers", "none"});
  CHECK(run.status == 78);
  CHECK(run.says("no token support"));
  CHECK(run.says("--workers: 'none'"));
  CHECK(run.says("data: "));
}

TEST_CASE("options are read from the file that --config names") {
  const TempDir folder;
  const auto file = folder.path() / "bw.conf";
  std::ofstream(file) << "data = " << folder.path().string() << "\nworkers = 0\n";
  const Run run({"serve", "--config", file.string()});
  CHECK(run.status == 78);
  CHECK(run.says(file.string() + ":2: '0'"));
  CHECK_FALSE(run.says("data: "));
  CHECK(Run({"serve", "--config", (folder.path() / "none").string()}).status == 1);
}

TEST_CASE("solve refuses a request that cannot be read with status 65 and a problem document") {
  const Run run({"solve", "-", "--threads", "1"}, "{\"load\": ");
  CHECK(run.status == 65);
  CHECK(run.process.output_text.empty());
  CHECK(run.process.error_text.find("\"status\"") != std::string::npos);
}

TEST_CASE("solve without its file is a failure with a reason") {
  const Run run({"solve", "/nonexistent/request.json"});
  CHECK(run.status == 1);
  CHECK(run.says("/nonexistent/request.json"));
}

}  // namespace
}  // namespace bandwright
