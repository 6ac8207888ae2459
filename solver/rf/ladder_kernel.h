// The inner loop: one ladder at many points, P/Q form, vectorised over the points.
//
// With the state (V, I) at the load, a series impedance Z does V += Z I and a shunt admittance Y
// does I += Y V; no division is needed for elements whose immittance is linear in x. The
// instruction set is chosen at run time; a portable version stands behind it.
#pragma once

#include "solver/rf/points.h"

namespace bandwright {

// One element, with its tables over the points (SoA, `points` long).
struct KernelStep {
  enum class Op {
    series_reactance,   // V += j x b I
    shunt_susceptance,  // I += j x b V
    series_linear,      // V += x (a + jb) I
    shunt_linear,       // I += x (a + jb) V
    series_affine,      // V += (x (a + jb) + c + jd) I
    shunt_affine,       // I += V / (x (a + jb) + c + jd)
  };
  Op op = Op::series_reactance;
  const double* a = nullptr;
  const double* b = nullptr;
  const double* c = nullptr;
  const double* d = nullptr;
};

// What is read at the source; larger is worse. D stands for |V + Zs I|^2, one over the gain, and
// N for |V - conj(Zs) I|^2.
enum class Badness {
  reflected_from_gain,  // 1 - 1/D: |reflection|^2 of a lossless network
  reflected,            // N / D
  not_reflected,        // D / N
  lost,                 // D
  transferred,          // 1 / D
};

struct KernelSegment {
  int first = 0;
  int padded = 0;
  Badness badness = Badness::reflected;
};

struct KernelTask {
  const KernelStep* steps = nullptr;  // from the load to the source
  int step_count = 0;
  const KernelSegment* segments = nullptr;
  int segment_count = 0;
  const double *voltage_re = nullptr, *voltage_im = nullptr;
  const double *current_re = nullptr, *current_im = nullptr;
  const double *source_re = nullptr, *source_im = nullptr;
  bool real_source = false;  // source_im is zero everywhere
  bool alternating = false;  // as is_alternating() says, with a real source
};

// Longest ladder that has a loop of its own.
inline constexpr int kMostAlternating = 8;

// True for 1 to kMostAlternating lossless steps, series and shunt in turn.
bool is_alternating(const KernelStep* steps, int count);

// Writes each segment's largest badness to `worst` (segment_count long). `x` holds one factor for
// each step.
void kernel_worst(const KernelTask& task, const double* x, double* worst);
// Also writes the badness of every point to `badness` (one for each point, padding included).
void kernel_points(const KernelTask& task, const double* x, double* badness, double* worst);

// The sum over `padded` points of mask * (scale * badness)^(power / 2), negative badness counting
// as none. `power` is 2, 4, 8, ...; `padded` a multiple of kLanes.
double kernel_power_sum(const double* badness, const double* mask, int padded, double scale,
                        int power);

// The instruction set in use, for reports: "AVX2", "portable", ...
const char* kernel_instruction_set();

}  // namespace bandwright
