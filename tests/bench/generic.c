/* Table-driven baseline: any mass-action network, read from standard input, by the direct method.
 * Input: species reactions, then the initial counts, then for each reaction its constant, the number of its reactants with
 * (species, order) each, and the number of its changes with (species, change) each. */
#include "baseline.h"

typedef struct {
  double constant;
  int reactants, changes;
  int reactant[4], order[4], changed[8], change[8];
} reaction;

static int species, reactions;
static int *initial;
static reaction *table;
static int *x;
static double *prefix;

static double propensity(const reaction *r) {
  double a = r->constant;
  for (int i = 0; i < r->reactants; i++) {
    const double count = x[r->reactant[i]];
    switch (r->order[i]) {
      case 1: a *= count; break;
      case 2: a *= 0.5 * count * (count - 1); break;
      default: a *= count * (count - 1) * (count - 2) / 6;
    }
  }
  return a;
}

static uint64_t replicate(generator *g, double horizon, int intervals, int *grid) {
  for (int i = 0; i < species; i++) x[i] = initial[i];
  double t = 0;
  int point = 0;
  double next = 0;
  uint64_t events = 0;
  for (;;) {
    double total = 0;
    for (int k = 0; k < reactions; k++) prefix[k] = total += propensity(table + k);
    t = total > 0 ? t - log(uniform_above_zero(g)) / total : INFINITY;
    while (next < t) {
      for (int i = 0; i < species; i++) grid[point * species + i] = x[i];
      if (point == intervals) return events;
      point++;
      next = point * horizon / intervals;
    }
    const double u = uniform_below_one(g) * total;
    int k = 0;
    while (prefix[k] <= u) k++;
    const reaction *r = table + k;
    for (int i = 0; i < r->changes; i++) x[r->changed[i]] += r->change[i];
    events++;
  }
}

int main(int argc, char **argv) {
  if (scanf("%d %d", &species, &reactions) != 2) return 2;
  initial = malloc(sizeof(int) * (size_t)species);
  x = malloc(sizeof(int) * (size_t)species);
  table = calloc((size_t)reactions, sizeof(reaction));
  prefix = malloc(sizeof(double) * (size_t)reactions);
  for (int i = 0; i < species; i++)
    if (scanf("%d", initial + i) != 1) return 2;
  for (int k = 0; k < reactions; k++) {
    reaction *r = table + k;
    if (scanf("%lf %d", &r->constant, &r->reactants) != 2 || r->reactants > 4) return 2;
    for (int i = 0; i < r->reactants; i++)
      if (scanf("%d %d", r->reactant + i, r->order + i) != 2) return 2;
    if (scanf("%d", &r->changes) != 1 || r->changes > 8) return 2;
    for (int i = 0; i < r->changes; i++)
      if (scanf("%d %d", r->changed + i, r->change + i) != 2) return 2;
  }
  return run_baseline(argc, argv, species);
}
