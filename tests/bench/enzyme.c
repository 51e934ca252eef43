/* Hand-written baseline: enzyme kinetics in three reactions. */
#include "baseline.h"

static uint64_t replicate(generator *g, double horizon, int intervals, int *grid) {
  const double binding = 0.001, unbinding = 0.5, conversion = 0.1;
  int s = 10000, e = 200, es = 0, p = 0;
  double t = 0;
  int point = 0;
  double next = 0;
  uint64_t events = 0;
  for (;;) {
    const double a1 = binding * s * e, a2 = unbinding * es, a3 = conversion * es;
    const double total = a1 + a2 + a3;
    t = total > 0 ? t - log(uniform_above_zero(g)) / total : INFINITY;
    while (next < t) {
      int *row = grid + 4 * point;
      row[0] = s, row[1] = e, row[2] = es, row[3] = p;
      if (point == intervals) return events;
      point++;
      next = point * horizon / intervals;
    }
    double u = uniform_below_one(g) * total;
    if (u < a1) s--, e--, es++;
    else if (u < a1 + a2) s++, e++, es--;
    else e++, es--, p++;
    events++;
  }
}

int main(int argc, char **argv) { return run_baseline(argc, argv, 4); }
