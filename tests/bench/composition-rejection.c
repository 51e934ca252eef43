/* Composition-rejection baseline: any mass-action network, read from standard input as by generic.c.
 * Method: Slepoy, Thompson & Plimpton, J. Chem. Phys. 128, 205101 (2008), with a dependency graph, groups by the power of two of the
 * propensity, sums kept up to date and added anew every 2^16 events. */
#include "baseline.h"
#include <string.h>

typedef struct {
  double constant;
  int reactants, changes;
  int reactant[4], order[4], changed[8], change[8];
  int dependents, *dependent;
} reaction;

typedef struct {
  double sum, bound;
  int size, capacity, *member;
} group;

enum { groups = 2048, added_anew = 1 << 16 };

static int species, reactions;
static int *initial;
static reaction *table;
static int *x;
static double *propensities;
static int *place;
static group all[groups];
static group *active[groups];
static int actives;

static inline double propensity(const reaction *r) {
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

static inline group *group_of(double a) {
  uint64_t bits;
  memcpy(&bits, &a, sizeof bits);
  return all + (bits >> 52);
}

static void take_out(int k) {
  group *g = group_of(propensities[k]);
  const int last = g->member[--g->size];
  g->member[place[k]] = last;
  place[last] = place[k];
  g->sum -= propensities[k];
  if (g->size > 0) return;
  g->sum = 0;
  int i = 0;
  while (active[i] != g) i++;
  for (actives--; i < actives; i++) active[i] = active[i + 1];
}

static void put_in(int k, double a) {
  group *g = group_of(a);
  if (g->size == g->capacity) {
    g->capacity = g->capacity ? 2 * g->capacity : 16;
    g->member = realloc(g->member, sizeof(int) * (size_t)g->capacity);
  }
  if (g->size == 0) {
    int i = actives++;
    for (; i > 0 && active[i - 1] < g; i--) active[i] = active[i - 1];
    active[i] = g;
  }
  place[k] = g->size;
  g->member[g->size++] = k;
  g->sum += a;
}

static inline void refresh(int k) {
  const double a = propensity(table + k);
  const double old = propensities[k];
  if (a == old) return;
  if (a > 0 && old > 0 && group_of(a) == group_of(old)) {
    group_of(a)->sum += a - old;
  } else {
    if (old > 0) take_out(k);
    if (a > 0) put_in(k, a);
  }
  propensities[k] = a;
}

static void add_anew(void) {
  for (int i = 0; i < actives; i++) {
    double sum = 0;
    for (int j = 0; j < active[i]->size; j++) sum += propensities[active[i]->member[j]];
    active[i]->sum = sum;
  }
}

static uint64_t replicate(generator *g, double horizon, int intervals, int *grid) {
  for (int i = 0; i < actives; i++) {
    active[i]->size = 0;
    active[i]->sum = 0;
  }
  actives = 0;
  for (int i = 0; i < species; i++) x[i] = initial[i];
  for (int k = 0; k < reactions; k++) {
    propensities[k] = 0;
    refresh(k);
  }
  double t = 0;
  int point = 0;
  double next = 0;
  uint64_t events = 0;
  for (;;) {
    double total = 0;
    for (int i = 0; i < actives; i++) total += active[i]->sum;
    t = total > 0 ? t - log(uniform_above_zero(g)) / total : INFINITY;
    while (next < t) {
      for (int i = 0; i < species; i++) grid[point * species + i] = x[i];
      if (point == intervals) return events;
      point++;
      next = point * horizon / intervals;
    }
    const double u = uniform_below_one(g) * total;
    double prefix = active[0]->sum;
    int chosen_group = 0;
    while (prefix <= u && chosen_group < actives - 1) prefix += active[++chosen_group]->sum;
    const group *from = active[chosen_group];
    int k;
    for (;;) {
      const double v = uniform_below_one(g) * from->size;
      const int i = (int)v;
      k = from->member[i];
      if ((v - i) * from->bound < propensities[k]) break;
    }
    const reaction *r = table + k;
    for (int i = 0; i < r->changes; i++) x[r->changed[i]] += r->change[i];
    for (int i = 0; i < r->dependents; i++) refresh(r->dependent[i]);
    if (++events % added_anew == 0) add_anew();
  }
}

/* Reactions that read a species which reaction k changes, in order. */
static void find_dependents(void) {
  int *readers = calloc((size_t)species, sizeof(int));
  int **reading = malloc(sizeof(int *) * (size_t)species);
  for (int k = 0; k < reactions; k++)
    for (int i = 0; i < table[k].reactants; i++) readers[table[k].reactant[i]]++;
  for (int s = 0; s < species; s++) {
    reading[s] = malloc(sizeof(int) * (size_t)(readers[s] + 1));
    readers[s] = 0;
  }
  for (int k = 0; k < reactions; k++)
    for (int i = 0; i < table[k].reactants; i++) {
      const int s = table[k].reactant[i];
      reading[s][readers[s]++] = k;
    }
  int *seen = malloc(sizeof(int) * (size_t)reactions);
  for (int k = 0; k < reactions; k++) seen[k] = -1;
  for (int k = 0; k < reactions; k++) {
    reaction *r = table + k;
    int most = 0;
    for (int i = 0; i < r->changes; i++) most += readers[r->changed[i]];
    r->dependent = malloc(sizeof(int) * (size_t)(most + 1));
    for (int i = 0; i < r->changes; i++)
      for (int j = 0; j < readers[r->changed[i]]; j++) {
        const int other = reading[r->changed[i]][j];
        if (seen[other] != k) r->dependent[r->dependents++] = other;
        seen[other] = k;
      }
  }
}

int main(int argc, char **argv) {
  if (scanf("%d %d", &species, &reactions) != 2) return 2;
  initial = malloc(sizeof(int) * (size_t)species);
  x = malloc(sizeof(int) * (size_t)species);
  table = calloc((size_t)reactions, sizeof(reaction));
  propensities = malloc(sizeof(double) * (size_t)reactions);
  place = malloc(sizeof(int) * (size_t)reactions);
  for (int i = 0; i < groups; i++) all[i].bound = ldexp(1, i - 1022);
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
  find_dependents();
  return run_baseline(argc, argv, species);
}
