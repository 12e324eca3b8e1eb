/* One step of the linear equations: one sweep over rows, what is made on the way in rings of four rows. */
#include <stddef.h>

#include "model.h"

enum ring { UT, VT, DIVERGENCE, HEAD, SPIN };

static void continuity_run(const double *restrict ut, const double *restrict vt_south, const double *restrict vt,
                           const double *restrict h0, const double *restrict h1, const double *restrict h2,
                           double *restrict hn, double *restrict divergence, double *restrict head, int first, int end,
                           double per_dx, double north, double south, double keep, double drain, double g, double A) {
  const double w1 = g * P1, w0 = g * P0, wm1 = g * PM1, wm2 = g * PM2;
  for (int c = first; c < end; c++) {
    const double D = (ut[c + 1] - ut[c]) * per_dx + (vt[c] * north - vt_south[c] * south);
    const double eta = h0[c];
    const double eta_n = keep * eta - drain * D;
    hn[c] = eta_n;
    divergence[c] = D;
    head[c] = w1 * eta_n + w0 * eta + (wm1 * h1[c] + wm2 * h2[c]) - A * D;
  }
}

static void continuity_row(const model *m, int j) {
  bare_row(m, j, ring_row(m, VT, j + 1));
  if (is_dry(m->sweep, j)) return;
  double *ut = ring_row(m, UT, j), *vt = ring_row(m, VT, j + 1);
  const double *u0 = level_row(m, NOW, U_PLANE, j), *v0 = level_row(m, NOW, V_PLANE, j + 1);
  const double *u1 = level_row(m, PREVIOUS, U_PLANE, j), *v1 = level_row(m, PREVIOUS, V_PLANE, j + 1);
  const double *u2 = level_row(m, BEFORE, U_PLANE, j), *v2 = level_row(m, BEFORE, V_PLANE, j + 1);
  double *hn = level_row(m, NEXT, H_PLANE, j);
  double *divergence = ring_row(m, DIVERGENCE, j), *head = ring_row(m, HEAD, j);
  const double brake = 1 + 0.5 * m->damping * m->dt;
  const double keep = (1 - 0.5 * m->damping * m->dt) / brake;
  const double drain = (m->dt * m->rest_thickness) / brake;
  extrapolate(vt, v0, v1, v2, WEST - 1, WEST);
  extrapolate(vt, v0, v1, v2, WEST + m->nx, WEST + m->nx + 1);
  for (int s = m->sweep.row_start[j]; s < m->sweep.row_start[j + 1]; s++) {
    const int first = m->sweep.bounds[2 * s], end = m->sweep.bounds[2 * s + 1];
    extrapolate(ut, u0, u1, u2, first, end + 1);
    extrapolate(vt, v0, v1, v2, first, end);
    continuity_run(ut, ring_row(m, VT, j), vt, level_row(m, NOW, H_PLANE, j), level_row(m, PREVIOUS, H_PLANE, j),
                   level_row(m, BEFORE, H_PLANE, j), hn, divergence, head, first, end, m->per_dx_c[j], m->div_north[j],
                   m->div_south[j], keep, drain, m->reduced_gravity, m->viscosity);
  }
  if (m->periodic) {
    wrap_row(m, hn);
    wrap_row(m, head);
    wrap_row(m, divergence);
  }
}

static void spin_run(const double *restrict ut, const double *restrict ut_south, const double *restrict vt,
                     double *restrict spin, int first, int end, double per_dx, double north, double south, double A) {
  for (int c = first; c < end; c++)
    spin[c] = A * ((vt[c] - vt[c - 1]) * per_dx - (ut[c] * north - ut_south[c] * south));
}

static void spin_row(const model *m, int j) {
  if (m->viscosity == 0 || is_dry(m->corners, j)) return;
  double *spin = ring_row(m, SPIN, j);
  for (int s = m->corners.row_start[j]; s < m->corners.row_start[j + 1]; s++)
    spin_run(ring_row(m, UT, j), ring_row(m, UT, j - 1), ring_row(m, VT, j), spin, m->corners.bounds[2 * s],
             m->corners.bounds[2 * s + 1], m->per_dx_v[j], m->curl_north[j], m->curl_south[j], m->viscosity);
  const double slip = m->no_slip ? 2 : 0;
  for (int k = m->coast_start[j]; k < m->coast_start[j + 1]; k++) spin[m->coast_columns[k]] *= slip;
}

#define MERIDIONAL(STRESS)                                                                \
  for (int c = first; c < end; c++) {                                                     \
    const double C = turn * ((ut_south[c] + ut[c]) + (ut_south[c + 1] + ut[c + 1]));      \
    const double P = (head_south[c] - head[c]) * per_dy;                                  \
    const double F = (spin[c + 1] - spin[c]) * per_dx;                                    \
    next[c] = keep * now[c] + push * (P - C + F + STRESS);                                \
  }

static void meridional_run(const double *restrict ut_south, const double *restrict ut,
                           const double *restrict head_south, const double *restrict head, const double *restrict spin,
                           const double *restrict now, double *restrict next, const double *restrict stress,
                           double uniform, int first, int end, double turn, double per_dx, double per_dy, double keep,
                           double push) {
  if (stress) {
    MERIDIONAL(stress[c])
  } else {
    MERIDIONAL(uniform)
  }
}

static void meridional_row(const model *m, int j, const double *factors) {
  if (is_dry(m->v_points, j)) return;
  double uniform;
  const double *stress = stress_of_row(m, j, 'y', 1 / (m->density * m->rest_thickness), factors, &uniform);
  double *next = level_row(m, NEXT, V_PLANE, j);
  const double brake = 1 + 0.5 * m->rayleigh * m->dt;
  for (int s = m->v_points.row_start[j]; s < m->v_points.row_start[j + 1]; s++)
    meridional_run(ring_row(m, UT, j - 1), ring_row(m, UT, j), ring_row(m, HEAD, j - 1), ring_row(m, HEAD, j),
                   ring_row(m, SPIN, j), level_row(m, NOW, V_PLANE, j), next, stress, uniform, m->v_points.bounds[2 * s],
                   m->v_points.bounds[2 * s + 1], m->coriolis_v[j], m->per_dx_v[j], 1 / m->dy,
                   (1 - 0.5 * m->rayleigh * m->dt) / brake, m->dt / brake);
  if (m->periodic) wrap_row(m, next);
}

#define ZONAL(STRESS)                                                                     \
  for (int c = first; c < end; c++) {                                                     \
    const double C = (turn_south * vt[c - 1] + turn_north * vt_north[c - 1]) +            \
                     (turn_south * vt[c] + turn_north * vt_north[c]);                     \
    const double P = (head[c - 1] - head[c]) * per_dx;                                    \
    const double F = (spin[c] - spin_north[c]) * per_dy;                                  \
    next[c] = keep * now[c] + push * (P + C + F + STRESS);                                \
  }

static void zonal_run(const double *restrict vt, const double *restrict vt_north, const double *restrict head,
                      const double *restrict spin, const double *restrict spin_north, const double *restrict now,
                      double *restrict next, const double *restrict stress, double uniform, int first, int end,
                      double turn_south, double turn_north, double per_dx, double per_dy, double keep, double push) {
  if (stress) {
    ZONAL(stress[c])
  } else {
    ZONAL(uniform)
  }
}

static void zonal_row(const model *m, int j, const double *factors) {
  if (is_dry(m->u_points, j)) return;
  double uniform;
  const double *stress = stress_of_row(m, j, 'x', 1 / (m->density * m->rest_thickness), factors, &uniform);
  double *next = level_row(m, NEXT, U_PLANE, j);
  const double brake = 1 + 0.5 * m->rayleigh * m->dt;
  for (int s = m->u_points.row_start[j]; s < m->u_points.row_start[j + 1]; s++)
    zonal_run(ring_row(m, VT, j), ring_row(m, VT, j + 1), ring_row(m, HEAD, j), ring_row(m, SPIN, j),
              ring_row(m, SPIN, j + 1), level_row(m, NOW, U_PLANE, j), next, stress, uniform, m->u_points.bounds[2 * s],
              m->u_points.bounds[2 * s + 1], m->coriolis_south[j], m->coriolis_north[j], m->per_dx_c[j], 1 / m->dy,
              (1 - 0.5 * m->rayleigh * m->dt) / brake, m->dt / brake);
  if (m->periodic) wrap_row(m, next);
}

void linear_step(model *m, const double *factors) {
  /* Beyond the walls nothing moves, and nothing moves through them. */
  clear_row(m, ring_row(m, UT, -1));
  clear_row(m, ring_row(m, VT, 0));
  for (int j = 0; j <= m->ny; j++) {
    if (j < m->ny) continuity_row(m, j);
    else clear_row(m, ring_row(m, UT, m->ny));
    spin_row(m, j);
    if (j > 0 && j < m->ny) meridional_row(m, j, factors);
    if (j > 0) zonal_row(m, j - 1, factors);
  }
  m->phase = (m->phase + 1) & 3;
}
