/* Hand-written baseline: immigration-death. */
#include "baseline.h"

static uint64_t replicate(generator *g, double horizon, int intervals, int *grid) {
  const double immigration = 1000.0, death = 1.0;
  int x = 1000;
  double t = 0;
  int point = 0;
  double next = 0;
  uint64_t events = 0;
  for (;;) {
    const double a0 = immigration, total = a0 + death * x;
    t -= log(uniform_above_zero(g)) / total;
    while (next < t) {
      grid[point] = x;
      if (point == intervals) return events;
      point++;
      next = point * horizon / intervals;
    }
    if (uniform_below_one(g) * total < a0) x++;
    else x--;
    events++;
  }
}

int main(int argc, char **argv) { return run_baseline(argc, argv, 1); }
