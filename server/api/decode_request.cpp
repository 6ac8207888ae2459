#include "server/api/decode_request.h"

#include <algorithm>

#include "server/api/decode_goals.h"
#include "server/api/decode_network.h"
#include "server/api/decode_one_port.h"
#include "server/api/decode_options.h"
#include "server/api/decode_template.h"
#include "server/api/limits.h"

namespace bandwright {
namespace {

// What both kinds of request say of the port and of what is wanted.
struct Setup {
  std::optional<OnePort> source;
  std::optional<std::vector<LoadState>> loads;
  std::optional<std::vector<Goal>> goals;
  bool covered = false;

  bool complete() const { return source && loads && goals && covered; }
};

Setup decode_setup(const Node& request) {
  Setup setup{decode_source(request), decode_loads(request), decode_goals(request), false};
  if (setup.goals) {
    setup.covered = check_goals_covered(request, *setup.goals, setup.source, setup.loads);
  }
  return setup;
}

// Known only when goals and source are: the source must cover the centre of the bands.
std::optional<RangeBasis> range_basis(const Node& request, const Setup& setup) {
  if (!setup.goals || !setup.source || !setup.covered) return std::nullopt;
  const double centre_hz = centre_frequency_hz(*setup.goals);
  const Node goals = *request.find("goals");
  if (!check_covered(goals, centre_hz, *setup.source, "the source")) return std::nullopt;
  const double source_ohm = source_resistance_ohm(*setup.source, centre_hz);
  if (!(source_ohm > 0)) {
    request.member_fault("source", "source_without_resistance",
                         "the source has no resistance at " + shown(centre_hz, Unit::hertz) +
                             ", so no power is available from it");
    return std::nullopt;
  }
  return RangeBasis{centre_hz, source_ohm};
}

std::optional<double> decode_sweep_edge(const Node& request, const Setup& setup,
                                        std::string_view name, double usual) {
  const auto node = request.find(name);
  if (!node) {
    request.assume_default(name, shown(usual, Unit::hertz));
    return usual;
  }
  const auto edge = node->quantity(Unit::hertz, kFrequencyHz);
  if (!edge) return std::nullopt;
  bool covered = !setup.source || check_covered(*node, *edge, *setup.source, "the source");
  if (setup.loads) {
    for (const LoadState& state : *setup.loads) {
      covered = check_covered(*node, *edge, state.port, "the load") && covered;
    }
  }
  return covered ? edge : std::nullopt;
}

// Over the goal bands unless the request says otherwise.
std::optional<SweepRange> decode_sweep(const Node& request, const Setup& setup) {
  SweepRange sweep;
  if (setup.goals) {
    const auto& goals = *setup.goals;
    const auto by_from = [](const Goal& a, const Goal& b) { return a.from_hz < b.from_hz; };
    const auto by_to = [](const Goal& a, const Goal& b) { return a.to_hz < b.to_hz; };
    sweep.from_hz = std::min_element(goals.begin(), goals.end(), by_from)->from_hz;
    sweep.to_hz = std::max_element(goals.begin(), goals.end(), by_to)->to_hz;
  }
  std::optional<std::int64_t> points = sweep.points;
  if (const auto node = request.find("points")) {
    points = node->integer(2, limits::kSweepPoints);
  } else {
    request.assume_default("points", std::to_string(sweep.points));
  }
  if (!setup.goals) return std::nullopt;
  const auto from_hz = decode_sweep_edge(request, setup, "from_hz", sweep.from_hz);
  const auto to_hz = decode_sweep_edge(request, setup, "to_hz", sweep.to_hz);
  if (!from_hz || !to_hz || !points) return std::nullopt;
  if (*from_hz > *to_hz) {
    request.member_fault("to_hz", "reversed",
                         "the sweep ends at " + shown(*to_hz, Unit::hertz) +
                             ", below where it begins, " + shown(*from_hz, Unit::hertz));
    return std::nullopt;
  }
  return SweepRange{*from_hz, *to_hz, static_cast<int>(*points)};
}

Problem assemble(Setup setup, std::vector<Topology> topologies) {
  Problem problem;
  problem.source = std::move(*setup.source);
  problem.loads = std::move(*setup.loads);
  problem.goals = std::move(*setup.goals);
  problem.topologies = std::move(topologies);
  return problem;
}

}  // namespace

Result<JobRequest, std::vector<Fault>> decode_job_request(const Json& document) {
  DecodeContext context;
  const Node request(document, "#", context);
  if (!request.expect_object({"name", "source", "load", "loads", "template", "goals", "parts",
                              "tolerance", "search", "budget", "drive_w", "rank_by"})) {
    return context.faults.list();
  }
  JobRequest job;
  job.name = decode_name(request);
  Setup setup = decode_setup(request);
  const std::optional<RangeBasis> basis = range_basis(request, setup);
  const PartTable parts = decode_parts(request);
  const std::optional<Template> form = decode_template(request, parts, basis);
  std::optional<std::vector<Topology>> topologies;
  if (form && basis) topologies = expand_template(request, *form, *basis);
  const ToleranceRequest tolerance = decode_tolerance_request(request);
  const SearchRequest search = decode_search(request);
  job.run_seconds = decode_run_seconds(request);
  const double drive_w = decode_drive_w(request);
  const RankBy rank_by = decode_rank_by(request);
  if (!context.faults.empty()) return context.faults.list();

  job.problem = assemble(std::move(setup), std::move(*topologies));
  job.problem.tolerance = tolerance;
  job.problem.search = search;
  job.problem.drive_w = drive_w;
  job.problem.rank_by = rank_by;
  job.assumptions = std::move(context.assumptions);
  return job;
}

Result<AnalysisRequest, std::vector<Fault>> decode_analysis_request(const Json& document) {
  DecodeContext context;
  const Node request(document, "#", context);
  if (!request.expect_object({"name", "source", "load", "loads", "network", "goals", "parts",
                              "tolerance", "search", "drive_w", "from_hz", "to_hz", "points"})) {
    return context.faults.list();
  }
  AnalysisRequest analysis;
  analysis.name = decode_name(request);
  Setup setup = decode_setup(request);
  std::optional<FixedNetwork> network = decode_network(request, decode_parts(request));
  const std::optional<SweepRange> sweep = decode_sweep(request, setup);
  const ToleranceRequest tolerance = decode_tolerance_request(request);
  const std::uint64_t seed = decode_analysis_seed(request);
  const double drive_w = decode_drive_w(request);
  if (!context.faults.empty()) return context.faults.list();

  analysis.problem = assemble(std::move(setup), {std::move(network->topology)});
  analysis.problem.tolerance = tolerance;
  analysis.problem.search.seed = seed;
  analysis.problem.drive_w = drive_w;
  analysis.values = std::move(network->values);
  analysis.sweep = *sweep;
  analysis.assumptions = std::move(context.assumptions);
  return analysis;
}

}  // namespace bandwright
