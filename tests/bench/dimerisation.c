/* Hand-written baseline: reversible dimerisation. */
#include "baseline.h"

static uint64_t replicate(generator *g, double horizon, int intervals, int *grid) {
  const double association = 0.001, dissociation = 0.1;
  int p = 1000, p2 = 0;
  double t = 0;
  int point = 0;
  double next = 0;
  uint64_t events = 0;
  for (;;) {
    const double a1 = 0.5 * association * p * (p - 1), a2 = dissociation * p2;
    const double total = a1 + a2;
    t -= log(uniform_above_zero(g)) / total;
    while (next < t) {
      grid[2 * point] = p, grid[2 * point + 1] = p2;
      if (point == intervals) return events;
      point++;
      next = point * horizon / intervals;
    }
    if (uniform_below_one(g) * total < a1) p -= 2, p2++;
    else p += 2, p2--;
    events++;
  }
}

int main(int argc, char **argv) { return run_baseline(argc, argv, 2); }
