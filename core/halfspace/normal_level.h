// The normal problem on one grid, in the units of that grid (private to core/halfspace).
#pragma once

#include <memory>
#include <mutex>
#include <optional>
#include <vector>

#include "core/base/progress.h"
#include "core/halfspace/convolver.h"

namespace runband::halfspace {

/// Love's kernel for cells of sides ratio by 1, prepared: exact in double for the residual, single for the corrections.
class NormalKernel {
 public:
  NormalKernel(int nx, int ns, double ratio);
  ~NormalKernel();
  Convolver<double> exact;
  Convolver<float> quick;
  CirculantInverse<float> inverse;
  /// From a small cache shared by all threads.
  static std::shared_ptr<const NormalKernel> of(int nx, int ns, double ratio);

  /// Buffers of one solve: taken at its start, given back at its end, so that a drag does not allocate.
  struct Scratch;
  std::unique_ptr<Scratch> take() const;
  void give(std::unique_ptr<Scratch> scratch) const;

 private:
  NormalKernel(int nx, int ns, const std::vector<double>& table);
  mutable std::mutex pool_lock_;
  mutable std::vector<std::unique_ptr<Scratch>> pool_;
};

/// Pressures are scaled, q = p ds/(pi E*), so that u = K q in mm with the kernel above.
struct LevelProblem {
  std::shared_ptr<const NormalKernel> kernel;
  std::vector<double> gap;         ///< may hold infinities: such cells stay free
  std::optional<double> sum;       ///< of q over the cells (given load), or
  std::optional<double> approach;  ///< given approach
  double cap;                      ///< on q; infinite if none
  double tolerance;
};

struct LevelState {
  std::vector<double> q;  ///< start on entry, answer on return
  std::vector<double> g;  ///< K q + gap - approach
  double approach = 0;
  int iterations = 0;
  double work = 0;  ///< convolutions of this grid
  double residual = 0;
  bool converged = false;
};

/// Brings q to the given sum with no cell above the cap: cells between keep their proportions, cells at the cap stay
/// there; where that is not enough, empty cells are filled, smallest `order` first. False if all cells at the cap do
/// not reach the sum.
bool rescale(std::vector<double>& q, double sum, double cap, const std::vector<double>& order);

void solve_level(const LevelProblem& problem, LevelState& state, const Progress& progress);

/// Fallback for a given load, needed where nearly every cell has yielded and the few others do not settle the approach:
/// the approach is searched, each try a solve for given approach.
void solve_level_by_approach(const LevelProblem& problem, LevelState& state, const Progress& progress);

/// Fallback for a given approach: slower, with a proof of convergence.
void solve_level_steadily(const LevelProblem& problem, LevelState& state, const Progress& progress);

}  // namespace runband::halfspace
