/* A model of the ocean core, as the bench hands it over: the same memory, the same rows and spans, the same order of
 * expressions as the TypeScript reference, so that the results are the same to the last bit. */
#ifndef MODEL_H
#define MODEL_H

#include <stdint.h>

/* Column of cell 0 in a padded row. */
#define WEST 2
#define RING_ROWS 4
#define NONE (-1)

/* Generalised forward-backward weights (Shchepetkin & McWilliams 2005). */
#define E0 1.781105
#define E1 (-1.06221)
#define E2 0.281105
#define P1 0.614
#define P0 0.285
#define PM1 0.088
#define PM2 0.013

enum plane { H_PLANE, U_PLANE, V_PLANE, STATE_PLANES };
enum role { NOW, NEXT, BEFORE, PREVIOUS };

/* Run s of row j covers columns bounds[2 s] to bounds[2 s + 1] - 1, for s = row_start[j] ... row_start[j + 1] - 1. */
typedef struct {
  const int32_t *row_start;
  const int32_t *bounds;
} spans;

typedef struct {
  int nonlinear, nx, ny, pitch, periodic, no_slip, phase, bases, ring_planes, stress_offset;
  int detrainment, has_entrainment;
  int64_t levels[4], ring, length, level_length;
  double dt, reduced_gravity, rest_thickness, density, rayleigh, viscosity, damping, dy;
  double minimum_thickness, onset_thickness, entrainment_timescale, stress_floor;
  /* [ny + 1] each. */
  const double *per_dx_c, *per_dx_v, *div_north, *div_south, *curl_north, *curl_south;
  const double *coriolis_south, *coriolis_north, *coriolis_v;
  const double *turn_south, *turn_north, *share_south, *share_north, *f, *dx_c;
  /* Stress of each basis: one number a row, zero where there is none, [bases][ny + 1]; offsets of fields or NONE. */
  const double *tau_x_rows, *tau_y_rows;
  const int32_t *tau_x_planes, *tau_y_planes;
  spans cells, u_points, v_points, sweep, bare, corners;
  /* Corners that touch land: row_start, columns, and 1 over the number of water cells around. */
  const int32_t *coast_start, *coast_columns;
  const double *coast_per_wet;
  double *data;
} model;

/* Column 0 of a plane of row j of a level, and of the ring. */
static inline double *level_row(const model *m, enum role role, enum plane plane, int j) {
  return m->data + m->levels[(m->phase + (int)role) & 3] + ((int64_t)(j + 1) * STATE_PLANES + plane) * m->pitch;
}
static inline double *ring_row(const model *m, int plane, int j) {
  return m->data + m->ring + (int64_t)(((j + RING_ROWS) & 3) * m->ring_planes + plane) * m->pitch;
}
static inline int is_dry(spans s, int j) { return s.row_start[j] == s.row_start[j + 1]; }

/* What the two equations share (common.c). */
void clear_row(const model *m, double *row);
void wrap_row(const model *m, double *row);
/* Puts 0 where the sweep of row j + 1 reads what the sweep of row j does not make; `row` is that of j + 1. */
void bare_row(const model *m, int j, double *row);
void extrapolate(double *restrict out, const double *restrict now, const double *restrict previous,
                 const double *restrict before, int first, int end);
/* Stress of row j times `factor`: the part that is one number a row, and where there are fields the whole in a row. */
const double *stress_of_row(const model *m, int j, char component, double factor, const double *factors, double *uniform);

void linear_step(model *m, const double *factors);
void nonlinear_step(model *m, const double *factors);

#endif
