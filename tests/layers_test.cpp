// The layers of the tree, held by a test: which folder may include which, and where each third
// party lives. An arrow that is not in the table fails here; so does a file that grew too long.

#include <doctest/doctest.h>

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <map>
#include <set>
#include <sstream>
#include <string>
#include <vector>

namespace bandwright {
namespace {

namespace fs = std::filesystem;

constexpr std::size_t kMostLines = 500;

// A folder may include itself, solver/base, and what is listed. "solver" stands for all of it.
const std::map<std::string, std::set<std::string>>& arrows() {
  static const std::map<std::string, std::set<std::string>> kArrows{
      {"solver/base", {}},
      {"solver/rf", {}},
      {"solver/search", {"solver/rf"}},
      {"solver/tolerance", {"solver/rf"}},
      {"solver/limit", {"solver/rf"}},
      {"solver/rank", {"solver/rf"}},
      {"solver/solver",
       {"solver/rank", "solver/limit", "solver/tolerance", "solver/search", "solver/rf"}},
      {"server/message", {}},
      {"server/config", {}},
      {"server/store", {"server/message"}},
      {"server/http", {"server/message"}},
      {"server/draw", {"solver"}},
      {"server/jobs", {"server/store", "server/message", "solver"}},
      {"server/api", {"server/jobs", "server/draw", "server/message", "solver"}},
      {"server/app",
       {"server/http", "server/api", "server/jobs", "server/store", "server/message",
        "server/config", "solver"}},
      {"server/main", {"server/app", "server/config"}}};
  return kArrows;
}

// Headers of other projects and the only folders that may include them.
struct Home {
  std::string prefix;
  std::set<std::string> folders;
};

const std::vector<Home>& homes() {
  static const std::vector<Home> kHomes{{"boost/asio", {"server/http"}},
                                        {"boost/beast", {"server/http"}},
                                        {"nlohmann/", {"server/api", "server/config"}},
                                        {"sqlite3.h", {"server/store"}},
                                        {"libpq-fe.h", {"server/store"}},
                                        {"spdlog/", {"server/app", "server/http"}},
                                        {"nlopt", {"solver/search"}},
                                        {"Eigen/", {"solver"}}};
  return kHomes;
}

struct Source {
  std::string path;  // from the root of the tree
  std::string text;
};

struct Include {
  std::string name;
  bool quoted = false;
};

std::string folder_of(const std::string& path) {
  return path.substr(0, path.rfind('/'));
}
std::string top_of(const std::string& path) {
  return path.substr(0, path.find('/'));
}

bool contains(const std::set<std::string>& folders, const std::string& folder) {
  return folders.contains(folder) || folders.contains(top_of(folder));
}

std::vector<Include> includes_of(const std::string& text) {
  std::vector<Include> includes;
  std::istringstream lines(text);
  for (std::string line; std::getline(lines, line);) {
    std::istringstream words(line);
    std::string word;
    words >> word;
    // "#include" and its operand may also be written with blanks between.
    if (word == "#") {
      words >> word;
      word = "#" + word;
    }
    if (!word.starts_with("#include")) continue;
    const std::size_t open = line.find_first_of("<\"");
    if (open == std::string::npos) continue;
    const std::size_t close = line.find_first_of(">\"", open + 1);
    if (close == std::string::npos) continue;
    includes.push_back({line.substr(open + 1, close - open - 1), line[open] == '"'});
  }
  return includes;
}

// What is wrong with one include of a file in `folder`; empty if nothing is.
std::string include_fault(const std::string& folder, const Include& include) {
  for (const Home& home : homes()) {
    if (include.name.starts_with(home.prefix) && !contains(home.folders, folder)) {
      return "<" + include.name + "> does not belong in " + folder;
    }
  }
  const bool ours = include.name.starts_with("solver/") || include.name.starts_with("server/");
  if (!ours) {
    return include.quoted ? "\"" + include.name + "\" does not start at the root" : "";
  }
  const std::string target = folder_of(include.name);
  if (target == folder || target == "solver/base") return "";
  if (contains(arrows().at(folder), target)) return "";
  return folder + " must not include " + target;
}

std::vector<std::string> faults_of(const Source& source) {
  std::vector<std::string> faults;
  const std::string folder = folder_of(source.path);
  if (!arrows().contains(folder)) return {source.path + ": " + folder + " is no known layer"};
  for (const Include& include : includes_of(source.text)) {
    const std::string fault = include_fault(folder, include);
    if (!fault.empty()) faults.push_back(source.path + ": " + fault);
  }
  const auto lines = std::count(source.text.begin(), source.text.end(), '\n');
  if (static_cast<std::size_t>(lines) > kMostLines) {
    faults.push_back(source.path + ": " + std::to_string(lines) + " lines");
  }
  return faults;
}

std::vector<Source> sources_of(const fs::path& root) {
  std::vector<Source> sources;
  for (const char* top : {"solver", "server"}) {
    for (const auto& entry : fs::recursive_directory_iterator(root / top)) {
      const std::string kind = entry.path().extension().string();
      if (kind != ".h" && kind != ".cpp") continue;
      std::ifstream file(entry.path());
      sources.push_back({fs::relative(entry.path(), root).generic_string(),
                         {std::istreambuf_iterator<char>(file), {}}});
    }
  }
  return sources;
}

std::vector<std::string> files_including(const std::vector<Source>& sources,
                                         const std::string& prefix) {
  std::vector<std::string> files;
  for (const Source& source : sources) {
    const auto includes = includes_of(source.text);
    if (std::any_of(includes.begin(), includes.end(),
                    [&](const Include& i) { return i.name.starts_with(prefix); })) {
      files.push_back(source.path);
    }
  }
  return files;
}

TEST_CASE("every include of the tree follows the table of layers") {
  const std::vector<Source> sources = sources_of(BANDWRIGHT_SOURCE_DIR);
  REQUIRE(sources.size() > 20);
  for (const Source& source : sources) {
    for (const std::string& fault : faults_of(source)) FAIL_CHECK(fault);
  }
}

TEST_CASE("the optimisation library is included by one source file of solver/search") {
  for (const std::string& file : files_including(sources_of(BANDWRIGHT_SOURCE_DIR), "nlopt")) {
    CHECK(file.ends_with(".cpp"));
  }
  CHECK(files_including(sources_of(BANDWRIGHT_SOURCE_DIR), "nlopt").size() <= 1);
}

TEST_CASE("the table of layers has no cycle") {
  // Take away layers that include none of the rest until none are left.
  std::map<std::string, std::set<std::string>> left = arrows();
  for (bool moved = true; moved;) {
    moved = false;
    for (auto it = left.begin(); it != left.end();) {
      const bool stands = std::none_of(left.begin(), left.end(), [&](const auto& other) {
        return other.first != it->first && contains(it->second, other.first);
      });
      it = stands ? left.erase(it) : std::next(it);
      moved = moved || stands;
    }
  }
  CHECK(left.empty());
}

TEST_CASE("the checker catches each kind of violation") {
  const auto faults = [](const std::string& path, const std::string& text) {
    return faults_of({path, text}).size();
  };
  CHECK(faults("solver/rf/a.cpp", "#include \"solver/base/result.h\"\n#include <vector>\n") == 0);
  CHECK(faults("server/api/a.cpp", "#include \"solver/rf/goal.h\"\n") == 0);
  CHECK(faults("solver/rf/a.cpp", "#include \"server/api/api.h\"\n") == 1);
  CHECK(faults("solver/rf/a.h", "#include \"solver/search/a.h\"\n") == 1);
  CHECK(faults("solver/base/a.h", "  #  include \"solver/rf/wave.h\"\n") == 1);
  CHECK(faults("server/http/a.cpp", "#include \"server/api/api.h\"\n") == 1);
  CHECK(faults("server/http/a.cpp", "#include \"solver/rf/goal.h\"\n") == 1);
  CHECK(faults("server/store/a.cpp", "#include \"server/jobs/job_service.h\"\n") == 1);
  CHECK(faults("server/api/a.cpp", "#include <boost/beast/http.hpp>\n") == 1);
  CHECK(faults("server/jobs/a.cpp", "#include <nlohmann/json.hpp>\n") == 1);
  CHECK(faults("server/jobs/a.cpp", "#include <sqlite3.h>\n") == 1);
  CHECK(faults("solver/rf/a.cpp", "#include <nlopt.hpp>\n") == 1);
  CHECK(faults("solver/rf/a.cpp", "#include <spdlog/spdlog.h>\n") == 1);
  CHECK(faults("server/draw/a.cpp", "#include <Eigen/Dense>\n") == 1);
  CHECK(faults("solver/rf/a.cpp", "#include \"wave.h\"\n") == 1);
  CHECK(faults("solver/extra/a.cpp", "") == 1);
  CHECK(faults("solver/rf/a.cpp", std::string(500, '\n')) == 0);
  CHECK(faults("solver/rf/a.cpp", std::string(501, '\n')) == 1);
}

}  // namespace
}  // namespace bandwright
