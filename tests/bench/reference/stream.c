/* The triad of STREAM (McCalpin 1995): a = b + s c on arrays far beyond the cache. Prints the best bandwidth in bytes a
 * second, counted as STREAM counts: two arrays read, one written. Argument: doubles in an array. */
#define _POSIX_C_SOURCE 200809L
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

static double seconds(void) {
  struct timespec t;
  clock_gettime(CLOCK_MONOTONIC, &t);
  return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

static void triad(double *restrict a, const double *restrict b, const double *restrict c, double s, size_t count) {
  for (size_t k = 0; k < count; k++) a[k] = b[k] + s * c[k];
}

int main(int argc, char **argv) {
  const size_t count = argc > 1 ? strtoull(argv[1], NULL, 10) : 0;
  double *a = malloc(count * sizeof *a), *b = malloc(count * sizeof *b), *c = malloc(count * sizeof *c);
  if (!count || !a || !b || !c) return 1;
  for (size_t k = 0; k < count; k++) {
    a[k] = 0;
    b[k] = (double)k;
    c[k] = 2;
  }
  double best = 0;
  for (int round = 0; round < 12; round++) {
    const double before = seconds();
    triad(a, b, c, 3 + round, count);
    const double bandwidth = 3.0 * sizeof(double) * (double)count / (seconds() - before);
    if (bandwidth > best) best = bandwidth;
  }
  /* Read what was written, so that nothing is left out. */
  if (a[count - 1] != b[count - 1] + 14 * c[count - 1]) return 1;
  printf("%.6e\n", best);
  return 0;
}
