/* The bench's child: takes commands on standard input and answers on standard output, so that its chunks of steps
 * interleave with those of the other steppers.
 *
 * Command: uint64 code, uint64 bytes, then the bytes. Answer: uint64 bytes, then the bytes.
 *   1 load: int64 integers[count] (first: the count), then doubles; answers nothing (0 bytes).
 *   2 run: int64 steps, then the forcing factors [steps][bases]; answers two doubles, CPU and wall seconds.
 *   3 read: answers int64 phase, then the four levels as they lie in memory.
 * End of input ends it. */
#define _POSIX_C_SOURCE 200809L
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#include "model.h"

static void fail(const char *what) {
  fprintf(stderr, "%s\n", what);
  exit(1);
}

static double seconds(clockid_t clock) {
  struct timespec t;
  clock_gettime(clock, &t);
  return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

static void answer(const void *bytes, uint64_t length) {
  fwrite(&length, sizeof length, 1, stdout);
  if (length) fwrite(bytes, 1, length, stdout);
}

static void *aligned(size_t bytes) {
  void *memory = NULL;
  if (posix_memalign(&memory, 4096, bytes + 64)) fail("no memory");
  return memory;
}

/* Walks through a loaded message. */
typedef struct {
  const int64_t *integers;
  const double *doubles;
} reader;

static int next_int(reader *r) { return (int)*r->integers++; }

static const int32_t *next_ints(reader *r) {
  const int count = next_int(r);
  int32_t *values = aligned((size_t)count * sizeof *values);
  for (int k = 0; k < count; k++) values[k] = (int32_t)*r->integers++;
  return values;
}

static spans next_spans(reader *r) {
  spans s;
  s.row_start = next_ints(r);
  s.bounds = next_ints(r);
  return s;
}

static const double *next_doubles(reader *r, int64_t count) {
  double *values = aligned((size_t)count * sizeof *values);
  memcpy(values, r->doubles, (size_t)count * sizeof *values);
  r->doubles += count;
  return values;
}

static void load(model *m, const int64_t *message) {
  reader r = {message + 1, (const double *)(message + message[0])};
  m->nonlinear = next_int(&r);
  m->nx = next_int(&r);
  m->ny = next_int(&r);
  m->pitch = next_int(&r);
  m->periodic = next_int(&r);
  m->no_slip = next_int(&r);
  m->phase = next_int(&r);
  m->bases = next_int(&r);
  m->ring_planes = next_int(&r);
  m->stress_offset = next_int(&r);
  m->has_entrainment = next_int(&r);
  m->detrainment = next_int(&r);
  for (int k = 0; k < 4; k++) m->levels[k] = *r.integers++;
  m->level_length = *r.integers++;
  m->ring = *r.integers++;
  m->length = *r.integers++;
  m->tau_x_planes = next_ints(&r);
  m->tau_y_planes = next_ints(&r);
  m->cells = next_spans(&r);
  m->u_points = next_spans(&r);
  m->v_points = next_spans(&r);
  m->sweep = next_spans(&r);
  m->bare = next_spans(&r);
  m->corners = next_spans(&r);
  m->coast_start = next_ints(&r);
  m->coast_columns = next_ints(&r);

  m->dt = *r.doubles++;
  m->reduced_gravity = *r.doubles++;
  m->rest_thickness = *r.doubles++;
  m->density = *r.doubles++;
  m->rayleigh = *r.doubles++;
  m->viscosity = *r.doubles++;
  m->damping = *r.doubles++;
  m->dy = *r.doubles++;
  m->minimum_thickness = *r.doubles++;
  m->onset_thickness = *r.doubles++;
  m->entrainment_timescale = *r.doubles++;
  m->stress_floor = *r.doubles++;
  const double **rows[] = {&m->per_dx_c,      &m->per_dx_v,       &m->div_north,  &m->div_south,  &m->curl_north,
                           &m->curl_south,    &m->coriolis_south, &m->coriolis_north, &m->coriolis_v, &m->turn_south,
                           &m->turn_north,    &m->share_south,    &m->share_north, &m->f, &m->dx_c};
  for (size_t k = 0; k < sizeof rows / sizeof *rows; k++) *rows[k] = next_doubles(&r, m->ny + 1);
  m->tau_x_rows = next_doubles(&r, (int64_t)m->bases * (m->ny + 1));
  m->tau_y_rows = next_doubles(&r, (int64_t)m->bases * (m->ny + 1));
  m->coast_per_wet = next_doubles(&r, m->coast_start[m->ny + 1]);
  free(m->data);
  m->data = aligned((size_t)m->length * sizeof *m->data);
  memcpy(m->data, r.doubles, (size_t)m->length * sizeof *m->data);
}

static void run(model *m, const int64_t *message) {
  const int64_t steps = message[0];
  const double *factors = (const double *)(message + 1);
  const double cpu = seconds(CLOCK_PROCESS_CPUTIME_ID), wall = seconds(CLOCK_MONOTONIC);
  for (int64_t n = 0; n < steps; n++) {
    if (m->nonlinear) nonlinear_step(m, factors + n * m->bases);
    else linear_step(m, factors + n * m->bases);
  }
  const double spent[2] = {seconds(CLOCK_PROCESS_CPUTIME_ID) - cpu, seconds(CLOCK_MONOTONIC) - wall};
  answer(spent, sizeof spent);
}

static void read_levels(const model *m) {
  const int64_t phase = m->phase;
  const uint64_t level = (uint64_t)m->level_length * sizeof *m->data, length = sizeof phase + 4 * level;
  fwrite(&length, sizeof length, 1, stdout);
  fwrite(&phase, sizeof phase, 1, stdout);
  for (int k = 0; k < 4; k++) fwrite(m->data + m->levels[k], 1, level, stdout);
}

int main(void) {
  static model m;
  uint64_t head[2];
  while (fread(head, sizeof head, 1, stdin) == 1) {
    int64_t *message = aligned(head[1]);
    if (fread(message, 1, head[1], stdin) != head[1]) fail("a command ended early");
    if (head[0] == 1) {
      load(&m, message);
      answer(NULL, 0);
    } else if (head[0] == 2) run(&m, message);
    else if (head[0] == 3) read_levels(&m);
    else fail("no such command");
    fflush(stdout);
    free(message);
  }
  free(m.data);
  return 0;
}
