#include "server/api/decode_options.h"

#include "server/api/limits.h"
#include "server/api/option_names.h"

namespace bandwright {
namespace {

// The member `name` of the object `node`, or nothing if either is left out or at fault.
std::optional<Node> member(const std::optional<Node>& node, std::string_view name) {
  return node ? node->find(name) : std::nullopt;
}

// Reads the whole number `group`/`name`, or notes its default.
std::int64_t option_integer(const Node& request, std::string_view group, std::string_view name,
                            std::int64_t usual, std::int64_t min, std::int64_t max) {
  if (const auto node = member(request.find(group), name)) {
    return node->integer(min, max).value_or(usual);
  }
  request.context().assume_default(pointer_child(pointer_child(request.pointer(), group), name),
                                   std::to_string(usual));
  return usual;
}

template <class Words>
std::size_t option_choice(const Node& request, std::string_view group, std::string_view name,
                          const Words& words, std::size_t usual) {
  if (const auto node = member(request.find(group), name)) {
    return node->choice(words).value_or(usual);
  }
  request.context().assume_default(pointer_child(pointer_child(request.pointer(), group), name),
                                   words[usual]);
  return usual;
}

}  // namespace

std::string decode_name(const Node& request) {
  const auto node = request.find("name");
  return node ? node->text(limits::kNameBytes).value_or("") : "";
}

ToleranceRequest decode_tolerance_request(const Node& request) {
  if (const auto node = request.find("tolerance")) node->expect_object({"samples", "distribution"});
  ToleranceRequest tolerance;
  tolerance.samples = static_cast<int>(option_integer(
      request, "tolerance", "samples", tolerance.samples, 0, limits::kToleranceSamples));
  tolerance.distribution = static_cast<Distribution>(
      option_choice(request, "tolerance", "distribution", kDistributionWords,
                    static_cast<std::size_t>(tolerance.distribution)));
  return tolerance;
}

SearchRequest decode_search(const Node& request) {
  if (const auto node = request.find("search")) node->expect_object({"seed", "designs", "effort"});
  SearchRequest search;
  search.seed = static_cast<std::uint64_t>(option_integer(
      request, "search", "seed", static_cast<std::int64_t>(search.seed), 0, limits::kSeed));
  search.designs = static_cast<int>(
      option_integer(request, "search", "designs", search.designs, 1, limits::kDesigns));
  search.effort = static_cast<Effort>(option_choice(request, "search", "effort", kEffortWords,
                                                    static_cast<std::size_t>(search.effort)));
  return search;
}

std::uint64_t decode_analysis_seed(const Node& request) {
  if (const auto node = request.find("search")) node->expect_object({"seed"});
  const SearchRequest usual;
  return static_cast<std::uint64_t>(option_integer(
      request, "search", "seed", static_cast<std::int64_t>(usual.seed), 0, limits::kSeed));
}

double decode_run_seconds(const Node& request) {
  const auto budget = request.find("budget");
  if (budget) budget->expect_object({"run_seconds"});
  if (const auto node = member(budget, "run_seconds")) {
    return node->quantity(Unit::second, {limits::kRunSecondsLeast, limits::kRunSeconds})
        .value_or(limits::kRunSecondsDefault);
  }
  request.context().assume_default("#/budget/run_seconds",
                                   shown(limits::kRunSecondsDefault, Unit::second));
  return limits::kRunSecondsDefault;
}

double decode_drive_w(const Node& request) {
  const Problem usual;
  if (const auto node = request.find("drive_w")) {
    return node->quantity(Unit::watt, {1e-15, 1e9}).value_or(usual.drive_w);
  }
  request.assume_default("drive_w", shown(usual.drive_w, Unit::watt));
  return usual.drive_w;
}

RankBy decode_rank_by(const Node& request) {
  const Problem usual;
  if (const auto node = request.find("rank_by")) {
    const auto index = node->choice(kRankWords);
    return index ? static_cast<RankBy>(*index) : usual.rank_by;
  }
  const auto index = static_cast<std::size_t>(usual.rank_by);
  request.assume_default("rank_by", kRankWords[index]);
  return usual.rank_by;
}

}  // namespace bandwright
