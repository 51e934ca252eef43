/* What every baseline shares: the generator, its seeding, uniforms, processor time and the loop over replicates.
 * Each program is used as: PROGRAM replicates seed horizon gridIntervals, and prints events, seconds and a checksum. */
#ifndef BASELINE_H
#define BASELINE_H
#include <inttypes.h>
#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

typedef struct {
  uint64_t s[4];
} generator;

static inline uint64_t rotate_left(uint64_t x, int by) { return (x << by) | (x >> (64 - by)); }

static inline uint64_t next_word(generator *g) {
  uint64_t *s = g->s;
  const uint64_t output = rotate_left(s[0] + s[3], 23) + s[0];
  const uint64_t shifted = s[1] << 17;
  s[2] ^= s[0];
  s[3] ^= s[1];
  s[1] ^= s[2];
  s[0] ^= s[3];
  s[2] ^= shifted;
  s[3] = rotate_left(s[3], 45);
  return output;
}

/* In [0, 1) and in (0, 1]. */
static inline double uniform_below_one(generator *g) { return (double)(next_word(g) >> 11) * 0x1.0p-53; }
static inline double uniform_above_zero(generator *g) { return (double)((next_word(g) >> 11) + 1) * 0x1.0p-53; }

static inline uint64_t mix(uint64_t z) {
  z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9ull;
  z = (z ^ (z >> 27)) * 0x94d049bb133111ebull;
  return z ^ (z >> 31);
}

static inline generator seeded(uint64_t seed, uint64_t replicate) {
  generator g;
  uint64_t counter = mix(mix(seed) + replicate);
  for (int i = 0; i < 4; i++) g.s[i] = mix(counter += 0x9e3779b97f4a7c15ull);
  return g;
}

static inline double processor_seconds(void) {
  struct timespec t;
  clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &t);
  return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

/* One replicate: writes `species` counts at each grid time into `grid`, answers the number of events. */
static uint64_t replicate(generator *g, double horizon, int intervals, int *grid);

static int run_baseline(int argc, char **argv, int species) {
  if (argc != 5) return 2;
  const long replicates = atol(argv[1]);
  const uint64_t seed = strtoull(argv[2], NULL, 10);
  const double horizon = atof(argv[3]);
  const int intervals = atoi(argv[4]);
  int *grid = malloc(sizeof(int) * (size_t)species * (size_t)(intervals + 1));
  uint64_t events = 0;
  double sum = 0;
  const double start = processor_seconds();
  for (long r = 0; r < replicates; r++) {
    generator g = seeded(seed, (uint64_t)r);
    events += replicate(&g, horizon, intervals, grid);
    for (int i = 0; i < species; i++) sum += grid[intervals * species + i];
  }
  const double seconds = processor_seconds() - start;
  printf("%" PRIu64 " %.9f %.17g\n", events, seconds, sum / (double)replicates);
  free(grid);
  return 0;
}
#endif
