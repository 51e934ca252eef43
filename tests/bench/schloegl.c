/* Hand-written baseline: Schlögl's bistable system in four reactions, the buffered species kept constant. */
#include "baseline.h"

static uint64_t replicate(generator *g, double horizon, int intervals, int *grid) {
  const double c1 = 3e-7, c2 = 1e-4, c3 = 1e-3, c4 = 3.5;
  const double a = 1e5, b = 2e5;
  int x = 250;
  double t = 0;
  int point = 0;
  double next = 0;
  uint64_t events = 0;
  for (;;) {
    const double pairs = 0.5 * x * (x - 1.0);
    const double a1 = c1 * a * pairs, a2 = c2 * pairs * (x - 2.0) / 3.0, a3 = c3 * b, a4 = c4 * x;
    const double s2 = a1 + a2, s3 = s2 + a3, total = s3 + a4;
    t -= log(uniform_above_zero(g)) / total;
    while (next < t) {
      grid[point] = x;
      if (point == intervals) return events;
      point++;
      next = point * horizon / intervals;
    }
    const double u = uniform_below_one(g) * total;
    if (u < a1) x++;
    else if (u < s2) x--;
    else if (u < s3) x++;
    else x--;
    events++;
  }
}

int main(int argc, char **argv) { return run_baseline(argc, argv, 1); }
