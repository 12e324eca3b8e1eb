/* One step of the nonlinear, vector-invariant equations: one sweep over rows, what is made on the way in rings of four
 * rows. With t the row that is read: half levels, fluxes and corners of t; limiter of t - 1; thickness and velocities
 * of t - 2. */
#include <stddef.h>

#include "model.h"

enum ring {
  UT, VT, HT, FLUX_U, FLUX_V, LIMIT, ENTRAINED, DIVERGENCE, OUTFLOW, HEAD, SPIN, TURN_U, TURN_V, BRAKE_U, BRAKE_V
};

static inline double larger(double a, double b) { return a > b ? a : b; }
static inline double smaller(double a, double b) { return a < b ? a : b; }

/* w_e = (H_e - h)^2 / (t_e H_e) where h < H_e. */
static void entrain_run(const double *restrict ht, double *restrict entrained, int first, int end, double onset,
                        double per) {
  for (int c = first; c < end; c++) {
    const double lack = larger(onset - ht[c], 0);
    entrained[c] = lack * lack * per;
  }
}

static void half_level_row(const model *m, int j) {
  if (is_dry(m->sweep, j)) return;
  double *ut = ring_row(m, UT, j), *vt = ring_row(m, VT, j + 1), *ht = ring_row(m, HT, j);
  const double *u0 = level_row(m, NOW, U_PLANE, j), *v0 = level_row(m, NOW, V_PLANE, j + 1);
  const double *u1 = level_row(m, PREVIOUS, U_PLANE, j), *v1 = level_row(m, PREVIOUS, V_PLANE, j + 1);
  const double *u2 = level_row(m, BEFORE, U_PLANE, j), *v2 = level_row(m, BEFORE, V_PLANE, j + 1);
  const double *h0 = level_row(m, NOW, H_PLANE, j), *h1 = level_row(m, PREVIOUS, H_PLANE, j);
  const double *h2 = level_row(m, BEFORE, H_PLANE, j);
  extrapolate(vt, v0, v1, v2, WEST - 1, WEST);
  extrapolate(vt, v0, v1, v2, WEST + m->nx, WEST + m->nx + 1);
  for (int s = m->sweep.row_start[j]; s < m->sweep.row_start[j + 1]; s++) {
    const int first = m->sweep.bounds[2 * s], end = m->sweep.bounds[2 * s + 1];
    extrapolate(ut, u0, u1, u2, first, end + 1);
    extrapolate(vt, v0, v1, v2, first, end);
    extrapolate(ht, h0, h1, h2, first, end);
  }
  if (m->minimum_thickness > 0)
    for (int s = m->cells.row_start[j]; s < m->cells.row_start[j + 1]; s++)
      for (int c = m->cells.bounds[2 * s]; c < m->cells.bounds[2 * s + 1]; c++)
        ht[c] = larger(ht[c], m->minimum_thickness);
  if (m->periodic) wrap_row(m, ht);
  if (!m->has_entrainment) return;
  double *entrained = ring_row(m, ENTRAINED, j);
  for (int s = m->cells.row_start[j]; s < m->cells.row_start[j + 1]; s++)
    entrain_run(ht, entrained, m->cells.bounds[2 * s], m->cells.bounds[2 * s + 1], m->onset_thickness,
                1 / (m->entrainment_timescale * m->onset_thickness));
  if (m->periodic) wrap_row(m, entrained);
}

/* Basin mean of the w_e of this step, taken before it; 0 without uniform detrainment. */
static double uniform_detrainment(const model *m) {
  if (!m->has_entrainment || !m->detrainment) return 0;
  const double onset = m->onset_thickness, per = 1 / (m->entrainment_timescale * onset);
  double volume = 0, area = 0;
  for (int j = 0; j < m->ny; j++) {
    const double *h0 = level_row(m, NOW, H_PLANE, j), *h1 = level_row(m, PREVIOUS, H_PLANE, j);
    const double *h2 = level_row(m, BEFORE, H_PLANE, j);
    double row = 0;
    int cells = 0;
    for (int s = m->cells.row_start[j]; s < m->cells.row_start[j + 1]; s++) {
      double lane[2] = {0, 0};
      const int first = m->cells.bounds[2 * s], end = m->cells.bounds[2 * s + 1];
      for (int c = first; c < end; c++) {
        const double raw = E0 * h0[c] + E1 * h1[c] + E2 * h2[c];
        const double h = m->minimum_thickness > 0 ? larger(raw, m->minimum_thickness) : raw;
        const double lack = larger(onset - h, 0);
        lane[(c - first) & 1] += lack * lack * per;
      }
      row += lane[0] + lane[1];
      cells += end - first;
    }
    volume += m->dx_c[j] * row;
    area += m->dx_c[j] * cells;
  }
  return area > 0 ? volume / area : 0;
}

static void zonal_flux_run(const double *restrict ut, const double *restrict ht, double *restrict flux, int first,
                           int end) {
  for (int c = first; c < end; c++) flux[c] = ut[c] * (0.5 * (ht[c - 1] + ht[c]));
}

static void zonal_flux_row(const model *m, int j) {
  for (int s = m->sweep.row_start[j]; s < m->sweep.row_start[j + 1]; s++)
    zonal_flux_run(ring_row(m, UT, j), ring_row(m, HT, j), ring_row(m, FLUX_U, j), m->sweep.bounds[2 * s],
                   m->sweep.bounds[2 * s + 1] + 1);
}

static void meridional_flux_run(const double *restrict vt, const double *restrict ht_south, const double *restrict ht,
                                double *restrict flux, int first, int end, double south, double north) {
  for (int c = first; c < end; c++) flux[c] = vt[c] * (south * ht_south[c] + north * ht[c]);
}

static void meridional_flux_row(const model *m, int j) {
  if (is_dry(m->corners, j)) return;
  double *flux = ring_row(m, FLUX_V, j);
  for (int s = m->corners.row_start[j]; s < m->corners.row_start[j + 1]; s++) {
    const int first = m->corners.bounds[2 * s] - 1, end = m->corners.bounds[2 * s + 1];
    meridional_flux_run(ring_row(m, VT, j), ring_row(m, HT, j - 1), ring_row(m, HT, j), flux, first < WEST ? WEST : first,
                        end > WEST + m->nx ? WEST + m->nx : end, 0.5 * m->share_south[j], 0.5 * m->share_north[j]);
  }
  if (m->periodic) wrap_row(m, flux);
}

static void limit_run(const double *restrict flux_u, const double *restrict flux_v, const double *restrict flux_north,
                      const double *restrict h, double *restrict limit, int first, int end, double per_dx, double north,
                      double south, double least, double per_dt) {
  for (int c = first; c < end; c++) {
    const double zonal = (larger(flux_u[c + 1], 0) - smaller(flux_u[c], 0)) * per_dx;
    const double meridional = larger(flux_north[c], 0) * north - smaller(flux_v[c], 0) * south;
    const double outflow = zonal + meridional;
    const double supply = larger(h[c] - least, 0) * per_dt;
    const double share = supply / outflow;
    limit[c] = outflow > supply ? share : 1;
  }
}

static void limit_row(const model *m, int j) {
  double *limit = ring_row(m, LIMIT, j);
  for (int s = m->cells.row_start[j]; s < m->cells.row_start[j + 1]; s++)
    limit_run(ring_row(m, FLUX_U, j), ring_row(m, FLUX_V, j), ring_row(m, FLUX_V, j + 1), level_row(m, NOW, H_PLANE, j),
              limit, m->cells.bounds[2 * s], m->cells.bounds[2 * s + 1], m->per_dx_c[j], m->div_north[j], m->div_south[j],
              m->minimum_thickness, 1 / m->dt);
  if (m->periodic) wrap_row(m, limit);
}

static void upstream_run(double *restrict flux, const double *restrict behind, const double *restrict ahead, int first,
                         int end) {
  for (int c = first; c < end; c++) flux[c] = flux[c] * (flux[c] > 0 ? behind[c] : ahead[c]);
}

static void limit_meridional_fluxes(const model *m, int j) {
  if (is_dry(m->v_points, j)) return;
  double *flux = ring_row(m, FLUX_V, j);
  for (int s = m->v_points.row_start[j]; s < m->v_points.row_start[j + 1]; s++)
    upstream_run(flux, ring_row(m, LIMIT, j - 1), ring_row(m, LIMIT, j), m->v_points.bounds[2 * s],
                 m->v_points.bounds[2 * s + 1]);
  if (m->periodic) wrap_row(m, flux);
}

static void limit_zonal_fluxes(const model *m, int j) {
  if (is_dry(m->u_points, j)) return;
  double *flux = ring_row(m, FLUX_U, j);
  const double *limit = ring_row(m, LIMIT, j);
  for (int s = m->u_points.row_start[j]; s < m->u_points.row_start[j + 1]; s++)
    upstream_run(flux, limit - 1, limit, m->u_points.bounds[2 * s], m->u_points.bounds[2 * s + 1]);
  if (m->periodic) flux[WEST + m->nx] = flux[WEST];
}

typedef struct {
  const double *ut, *ut_south, *vt, *ht, *ht_south, *flux_u, *flux_u_south, *flux_v;
  double *turn_u, *turn_v, *spin;
  double f, per_dx, curl_north, curl_south, share_south, share_north, A;
} corners_of_row;

static inline void corner(const double *restrict ut, const double *restrict ut_south, const double *restrict vt,
                          const double *restrict ht, const double *restrict ht_south, const double *restrict flux_u,
                          const double *restrict flux_u_south, const double *restrict flux_v, double *restrict turn_u,
                          double *restrict turn_v, double *restrict spin, const corners_of_row *r, int first, int end,
                          double per_wet, double slip) {
  const double f = r->f, per_dx = r->per_dx, curl_north = r->curl_north, curl_south = r->curl_south, A = r->A;
  const double share_south = r->share_south, share_north = r->share_north;
  for (int c = first; c < end; c++) {
    const double raw = (vt[c] - vt[c - 1]) * per_dx - (ut[c] * curl_north - ut_south[c] * curl_south);
    const double zeta = slip * raw;
    const double water = share_south * (ht_south[c - 1] + ht_south[c]) + share_north * (ht[c - 1] + ht[c]);
    const double q = (f + zeta) / (per_wet * water);
    turn_u[c] = q * (flux_v[c - 1] + flux_v[c]);
    turn_v[c] = q * (flux_u_south[c] + flux_u[c]);
    spin[c] = A * zeta;
  }
}

static void corner_run(const corners_of_row *r, int first, int end, double per_wet, double slip) {
  corner(r->ut, r->ut_south, r->vt, r->ht, r->ht_south, r->flux_u, r->flux_u_south, r->flux_v, r->turn_u, r->turn_v,
         r->spin, r, first, end, per_wet, slip);
}

static void corner_row(const model *m, int j) {
  if (is_dry(m->corners, j)) return;
  const corners_of_row r = {
      ring_row(m, UT, j),     ring_row(m, UT, j - 1),     ring_row(m, VT, j),     ring_row(m, HT, j),
      ring_row(m, HT, j - 1), ring_row(m, FLUX_U, j),     ring_row(m, FLUX_U, j - 1), ring_row(m, FLUX_V, j),
      ring_row(m, TURN_U, j), ring_row(m, TURN_V, j),     ring_row(m, SPIN, j),   m->f[j],
      m->per_dx_v[j],         m->curl_north[j],           m->curl_south[j],       m->share_south[j],
      m->share_north[j],      m->viscosity};
  for (int s = m->corners.row_start[j]; s < m->corners.row_start[j + 1]; s++)
    corner_run(&r, m->corners.bounds[2 * s], m->corners.bounds[2 * s + 1], 0.25, 1);
  for (int k = m->coast_start[j]; k < m->coast_start[j + 1]; k++)
    corner_run(&r, m->coast_columns[k], m->coast_columns[k] + 1, m->coast_per_wet[k], m->no_slip ? 2 : 0);
}

static void thickness_run(const double *restrict ut, const double *restrict vt, const double *restrict vt_north,
                          const double *restrict flux_u, const double *restrict flux_v,
                          const double *restrict flux_north, const double *restrict entrained, const double *restrict h0,
                          const double *restrict h1, const double *restrict h2, double *restrict hn,
                          double *restrict head, int first, int end, double per_dx, double north, double south,
                          double damping, double rest, double push, double detrained, double g, double A) {
  const double w1 = g * P1, w0 = g * P0, wm1 = g * PM1, wm2 = g * PM2;
  for (int c = first; c < end; c++) {
    const double u_w = ut[c], u_e = ut[c + 1], v_s = vt[c], v_n = vt_north[c];
    const double D = (u_e - u_w) * per_dx + (v_n * north - v_s * south);
    const double O = (flux_u[c + 1] - flux_u[c]) * per_dx + (flux_north[c] * north - flux_v[c] * south);
    const double K = 0.25 * (u_w * u_w + u_e * u_e + (v_s * v_s + v_n * v_n));
    const double h = h0[c];
    const double next = h + push * (damping * (rest - h) - detrained + entrained[c] - O);
    hn[c] = next;
    head[c] = w1 * next + w0 * h + (wm1 * h1[c] + wm2 * h2[c]) + K - A * D;
  }
}

static void thickness_row(const model *m, int j, double detrained) {
  double *hn = level_row(m, NEXT, H_PLANE, j), *head = ring_row(m, HEAD, j);
  const double half = 0.5 * m->dt;
  for (int s = m->cells.row_start[j]; s < m->cells.row_start[j + 1]; s++)
    thickness_run(ring_row(m, UT, j), ring_row(m, VT, j), ring_row(m, VT, j + 1), ring_row(m, FLUX_U, j),
                  ring_row(m, FLUX_V, j), ring_row(m, FLUX_V, j + 1), ring_row(m, ENTRAINED, j),
                  level_row(m, NOW, H_PLANE, j), level_row(m, PREVIOUS, H_PLANE, j), level_row(m, BEFORE, H_PLANE, j),
                  hn, head, m->cells.bounds[2 * s], m->cells.bounds[2 * s + 1], m->per_dx_c[j], m->div_north[j],
                  m->div_south[j], m->damping, m->rest_thickness, m->dt / (1 + half * m->damping), detrained,
                  m->reduced_gravity, m->viscosity);
  if (m->periodic) {
    wrap_row(m, hn);
    wrap_row(m, head);
  }
}

/* Crank-Nicolson drag where it varies along the row: `next` holds the tendency of everything else. */
static void brake_run(const double *restrict brake, const double *restrict now, double *restrict next, int first,
                      int end, double half, double rayleigh, double dt) {
  for (int c = first; c < end; c++) {
    const double k = half * (rayleigh + brake[c]);
    next[c] = ((1 - k) * now[c] + dt * next[c]) / (1 + k);
  }
}

/* The same where it does not vary. */
static void plain_brake_run(const double *restrict now, double *restrict next, int first, int end, double keep,
                            double push) {
  for (int c = first; c < end; c++) next[c] = keep * now[c] + push * next[c];
}

#define MERIDIONAL(STRESS)                                             \
  for (int c = first; c < end; c++) {                                  \
    const double hv = south * ht_south[c] + north * ht[c];             \
    const double C = turn * (turn_v[c] + turn_v[c + 1]);               \
    const double P = (head_south[c] - head[c]) * per_dy;               \
    const double F = (spin[c + 1] - spin[c]) * per_dx;                 \
    next[c] = P - C + F + STRESS / larger(hv, floor);                  \
  }

static void meridional_run(const double *restrict ht_south, const double *restrict ht,
                           const double *restrict head_south, const double *restrict head,
                           const double *restrict turn_v, const double *restrict spin, double *restrict next,
                           const double *restrict stress, double uniform, int first, int end, double south, double north,
                           double turn, double per_dx, double per_dy, double floor) {
  if (stress) {
    MERIDIONAL(stress[c])
  } else {
    MERIDIONAL(uniform)
  }
}

static void dilute_v_run(const double *restrict entrained_south, const double *restrict entrained,
                         const double *restrict ht_south, const double *restrict ht, double *restrict brake, int first,
                         int end, double south, double north) {
  for (int c = first; c < end; c++)
    brake[c] = (south * entrained_south[c] + north * entrained[c]) / (south * ht_south[c] + north * ht[c]) + 0;
}

static void meridional_row(const model *m, int j, const double *factors) {
  if (is_dry(m->v_points, j)) return;
  double uniform;
  const double *stress = stress_of_row(m, j, 'y', 1 / m->density, factors, &uniform);
  double *next = level_row(m, NEXT, V_PLANE, j), *brake = ring_row(m, BRAKE_V, j);
  const double *now = level_row(m, NOW, V_PLANE, j), *ht = ring_row(m, HT, j), *ht_south = ring_row(m, HT, j - 1);
  const double south = 0.5 * m->share_south[j], north = 0.5 * m->share_north[j];
  const double slow = 1 + 0.5 * m->rayleigh * m->dt;
  for (int s = m->v_points.row_start[j]; s < m->v_points.row_start[j + 1]; s++) {
    const int first = m->v_points.bounds[2 * s], end = m->v_points.bounds[2 * s + 1];
    meridional_run(ht_south, ht, ring_row(m, HEAD, j - 1), ring_row(m, HEAD, j), ring_row(m, TURN_V, j),
                   ring_row(m, SPIN, j), next, stress, uniform, first, end, south, north, 0.25,
                   m->per_dx_v[j], 1 / m->dy, m->stress_floor);
    if (m->has_entrainment) {
      dilute_v_run(ring_row(m, ENTRAINED, j - 1), ring_row(m, ENTRAINED, j), ht_south, ht, brake, first, end, south,
                   north);
      brake_run(brake, now, next, first, end, 0.5 * m->dt, m->rayleigh, m->dt);
    } else {
      plain_brake_run(now, next, first, end, (1 - 0.5 * m->rayleigh * m->dt) / slow, m->dt / slow);
    }
  }
  if (m->periodic) wrap_row(m, next);
}

#define ZONAL(STRESS)                                                  \
  for (int c = first; c < end; c++) {                                  \
    const double hu = 0.5 * (ht[c - 1] + ht[c]);                       \
    const double C = turn_south * turn_u[c] + turn_north * turn_u_north[c]; \
    const double P = (head[c - 1] - head[c]) * per_dx;                 \
    const double F = (spin[c] - spin_north[c]) * per_dy;               \
    next[c] = P + C + F + STRESS / larger(hu, floor);                  \
  }

static void zonal_run(const double *restrict ht, const double *restrict head, const double *restrict turn_u,
                      const double *restrict turn_u_north, const double *restrict spin,
                      const double *restrict spin_north, double *restrict next, const double *restrict stress,
                      double uniform, int first, int end, double turn_south, double turn_north, double per_dx,
                      double per_dy, double floor) {
  if (stress) {
    ZONAL(stress[c])
  } else {
    ZONAL(uniform)
  }
}

static void dilute_u_run(const double *restrict entrained, const double *restrict ht, double *restrict brake, int first,
                         int end) {
  for (int c = first; c < end; c++)
    brake[c] = (0.5 * (entrained[c - 1] + entrained[c])) / (0.5 * (ht[c - 1] + ht[c])) + 0;
}

static void zonal_row(const model *m, int j, const double *factors) {
  if (is_dry(m->u_points, j)) return;
  double uniform;
  const double *stress = stress_of_row(m, j, 'x', 1 / m->density, factors, &uniform);
  double *next = level_row(m, NEXT, U_PLANE, j), *brake = ring_row(m, BRAKE_U, j);
  const double *now = level_row(m, NOW, U_PLANE, j), *ht = ring_row(m, HT, j);
  const double slow = 1 + 0.5 * m->rayleigh * m->dt;
  for (int s = m->u_points.row_start[j]; s < m->u_points.row_start[j + 1]; s++) {
    const int first = m->u_points.bounds[2 * s], end = m->u_points.bounds[2 * s + 1];
    zonal_run(ht, ring_row(m, HEAD, j), ring_row(m, TURN_U, j), ring_row(m, TURN_U, j + 1), ring_row(m, SPIN, j),
              ring_row(m, SPIN, j + 1), next, stress, uniform, first, end, m->turn_south[j], m->turn_north[j],
              m->per_dx_c[j], 1 / m->dy, m->stress_floor);
    if (m->has_entrainment) {
      dilute_u_run(ring_row(m, ENTRAINED, j), ht, brake, first, end);
      brake_run(brake, now, next, first, end, 0.5 * m->dt, m->rayleigh, m->dt);
    } else {
      plain_brake_run(now, next, first, end, (1 - 0.5 * m->rayleigh * m->dt) / slow, m->dt / slow);
    }
  }
  if (m->periodic) wrap_row(m, next);
}

void nonlinear_step(model *m, const double *factors) {
  const double detrained = uniform_detrainment(m);
  static const enum ring cells[] = {UT, HT, FLUX_U};
  for (int k = 0; k < 3; k++) clear_row(m, ring_row(m, cells[k], -1));
  clear_row(m, ring_row(m, VT, 0));
  clear_row(m, ring_row(m, FLUX_V, 0));
  for (int t = 0; t <= m->ny + 1; t++) {
    if (t < m->ny) {
      half_level_row(m, t);
      zonal_flux_row(m, t);
      if (t > 0) meridional_flux_row(m, t);
    } else if (t == m->ny) {
      for (int k = 0; k < 3; k++) clear_row(m, ring_row(m, cells[k], m->ny));
      clear_row(m, ring_row(m, FLUX_V, m->ny));
    }
    /* Turning takes the fluxes before continuity's are limited. */
    if (t <= m->ny) corner_row(m, t);
    const int r = t - 1;
    if (r < 0) continue;
    if (m->minimum_thickness > 0 && r < m->ny) {
      limit_row(m, r);
      if (r > 0) limit_meridional_fluxes(m, r);
      limit_zonal_fluxes(m, r);
    }
    const int j = t - 2;
    if (j < 0) continue;
    thickness_row(m, j, detrained);
    if (j > 0) meridional_row(m, j, factors);
    zonal_row(m, j, factors);
  }
  m->phase = (m->phase + 1) & 3;
}
