#include "solver/search/local_search.h"

#include <nlopt.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <memory>

namespace bandwright {
namespace {

// What a start that cannot be evaluated is worth to NLopt, which dislikes infinities.
constexpr double kHopeless = 1e6;

struct OptDeleter {
  void operator()(nlopt_opt opt) const { nlopt_destroy(opt); }
};
using Opt = std::unique_ptr<std::remove_pointer_t<nlopt_opt>, OptDeleter>;

// Offers every evaluation to the best held.
class Keeper {
 public:
  Keeper(std::span<const double> start) {
    best_.point.assign(start.begin(), start.end());
    best_.value = -std::numeric_limits<double>::infinity();
  }
  void offer(const double* point, double value) {
    ++best_.evaluations;
    if (std::isfinite(value) && value > best_.value) {
      best_.value = value;
      std::copy_n(point, best_.point.size(), best_.point.begin());
    }
  }
  LocalBest take() { return std::move(best_); }

 private:
  LocalBest best_;
};

struct PlainCall {
  const LocalObjective* objective;
  Keeper keeper;
};

double plain_cost(unsigned, const double* point, double*, void* data) {
  auto* call = static_cast<PlainCall*>(data);
  const double value = (*call->objective)(point);
  call->keeper.offer(point, value);
  return std::isfinite(value) ? -value : kHopeless;
}

// COBYLA works on the point with one coordinate more: the bound under all margins.
struct LeastCall {
  const LocalMargins* margins;
  int dimension;
  Keeper keeper;
};

double bound_cost(unsigned n, const double* point, double*, void*) {
  return -point[n - 1];
}

void bound_excess(unsigned count, double* excess, unsigned n, const double* point, double*,
                  void* data) {
  auto* call = static_cast<LeastCall*>(data);
  (*call->margins)(point, excess);
  call->keeper.offer(point, *std::min_element(excess, excess + count));
  for (unsigned i = 0; i < count; ++i) {
    excess[i] = std::isfinite(excess[i]) ? point[n - 1] - excess[i] : kHopeless;
  }
}

}  // namespace

LocalBest maximise(const LocalObjective& objective, std::span<const double> start,
                   const LocalOptions& options) {
  const bool axes = options.method == LocalMethod::principal_axis && start.size() > 1;
  Opt opt(nlopt_create(axes ? NLOPT_LN_PRAXIS : NLOPT_LN_SBPLX, start.size()));
  PlainCall call{&objective, Keeper(start)};
  nlopt_set_min_objective(opt.get(), plain_cost, &call);
  nlopt_set_maxeval(opt.get(), options.most_evaluations);
  nlopt_set_ftol_abs(opt.get(), options.value_tolerance);
  nlopt_set_initial_step1(opt.get(), options.first_step);
  nlopt_srand(static_cast<unsigned long>(options.seed));  // per thread in NLopt
  std::vector<double> point(start.begin(), start.end());
  double cost = 0;
  nlopt_optimize(opt.get(), point.data(), &cost);
  return call.keeper.take();
}

LocalBest maximise_least(const LocalMargins& margins, int count, std::span<const double> start,
                         const LocalOptions& options) {
  const int n = static_cast<int>(start.size());
  LeastCall call{&margins, n, Keeper(start)};
  std::vector<double> first(count);
  margins(start.data(), first.data());
  const double least = *std::min_element(first.begin(), first.end());
  call.keeper.offer(start.data(), least);
  if (!std::isfinite(least)) return call.keeper.take();

  Opt opt(nlopt_create(NLOPT_LN_COBYLA, n + 1));
  nlopt_set_min_objective(opt.get(), bound_cost, nullptr);
  nlopt_add_inequality_mconstraint(opt.get(), count, bound_excess, &call, nullptr);
  std::vector<double> point(start.begin(), start.end());
  point.push_back(least);
  std::vector<double> step(n + 1, options.first_step);
  nlopt_set_initial_step(opt.get(), step.data());
  nlopt_set_maxeval(opt.get(), options.most_evaluations);
  nlopt_set_xtol_abs1(opt.get(), options.value_tolerance * 0.1);
  double cost = 0;
  nlopt_optimize(opt.get(), point.data(), &cost);
  return call.keeper.take();
}

}  // namespace bandwright
