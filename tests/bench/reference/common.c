#include <string.h>

#include "model.h"

void clear_row(const model *m, double *row) { memset(row, 0, (size_t)m->pitch * sizeof *row); }

/* Periodic copies into the halo columns. */
void wrap_row(const model *m, double *row) {
  row[WEST - 1] = row[WEST + m->nx - 1];
  row[WEST + m->nx] = row[WEST];
}

void bare_row(const model *m, int j, double *row) {
  for (int s = m->bare.row_start[j]; s < m->bare.row_start[j + 1]; s++)
    for (int c = m->bare.bounds[2 * s]; c < m->bare.bounds[2 * s + 1]; c++) row[c] = 0;
}

void extrapolate(double *restrict out, const double *restrict now, const double *restrict previous,
                 const double *restrict before, int first, int end) {
  for (int c = first; c < end; c++) out[c] = E0 * now[c] + E1 * previous[c] + E2 * before[c];
}

const double *stress_of_row(const model *m, int j, char component, double factor, const double *factors,
                            double *uniform) {
  const double *rows = component == 'x' ? m->tau_x_rows : m->tau_y_rows;
  const int32_t *planes = component == 'x' ? m->tau_x_planes : m->tau_y_planes;
  double sum = 0;
  int fields = 0;
  for (int b = 0; b < m->bases; b++) {
    sum += factors[b] * rows[b * (m->ny + 1) + j];
    fields += planes[b] != NONE;
  }
  *uniform = sum * factor;
  if (!fields) return NULL;
  double *restrict row = m->data + m->stress_offset + WEST;
  for (int i = 0; i < m->nx; i++) row[i] = *uniform;
  for (int b = 0; b < m->bases; b++) {
    if (planes[b] == NONE) continue;
    const double part = factors[b] * factor;
    const double *restrict field = m->data + planes[b] + (int64_t)j * m->pitch + WEST;
    for (int i = 0; i < m->nx; i++) row[i] += part * field[i];
  }
  return row - WEST;
}
