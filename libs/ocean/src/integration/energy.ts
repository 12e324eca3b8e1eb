import { addTo, SUM_SLOTS, sumAt } from '../exact/running-sum';
import { fieldOf, type FieldPlace } from '../stepper/fields';
import { forRuns, type Model } from '../stepper/model';

/** ρ0 ∫η dA, kg. */
export function massAnomaly(model: Model): number {
  return model.density * volumeNorthOf(model, 0);
}

/** ∫η dA over cell rows j0 and north of it, m³: compensated, fixed order. */
export function volumeNorthOf(model: Model, j0: number): number {
  const { grid, spans } = model;
  const { data, offset, rowStride } = fieldOf(model, 'h');
  const rest = restOf(model);
  const sums = new Float64Array(SUM_SLOTS);
  for (let j = j0; j < grid.ny; j++) {
    let row = 0;
    forRuns(spans.cells, j, (first, end) => {
      for (let k = offset + j * rowStride + first; k < offset + j * rowStride + end; k++) row += data[k] - rest;
    });
    addTo(sums, 0, row * (grid.dxC[j] * grid.dy));
  }
  return sumAt(sums, 0);
}

/** What is taken from the stored field for η: 0 in linear mode, H in nonlinear mode. */
function restOf(model: Model): number {
  return model.equations === 'linear' ? 0 : model.restThickness;
}

/**
 * Kinetic energy ½ ρ0 ∫h (u² + v²), with H for h in linear mode, and available potential energy ½ ρ0 g′ ∫η², J;
 * numerics.md §8. h at u and v points is the area mean of the two cells.
 */
export function energyOf(model: Model): { kinetic: number; potential: number } {
  const { grid, density, reducedGravity, spans } = model;
  const [h, u, v] = (['h', 'u', 'v'] as const).map((variable) => fieldOf(model, variable));
  const rest = restOf(model);
  const sums = new Float64Array(2 * SUM_SLOTS);
  for (let j = 0; j < grid.ny; j++) {
    const area = grid.dxC[j] * grid.dy;
    let row = 0;
    forRuns(spans.cells, j, (first, end) => {
      for (let i = first; i < end; i++) {
        const eta = at(h, i, j) - rest;
        row += eta * eta;
      }
    });
    addTo(sums, SUM_SLOTS, row * area);
    addTo(sums, 0, kineticRow(j, u, spans.uPoints, zonalThickness(model, h)) * area);
    addTo(sums, 0, kineticRow(j, v, spans.vPoints, meridionalThickness(model, h)) * (grid.dxV[j] * grid.dy));
  }
  return {
    kinetic: 0.5 * density * sumAt(sums, 0),
    potential: 0.5 * density * reducedGravity * sumAt(sums, SUM_SLOTS),
  };
}

type Thickness = (i: number, j: number) => number;

/** h_u now at a u point: H, or the mean of the two cells. */
export function zonalThickness(model: Model, h: FieldPlace = fieldOf(model, 'h')): Thickness {
  if (model.equations === 'linear') return () => model.restThickness;
  return (i, j) => 0.5 * (at(h, i - 1, j) + at(h, i, j));
}

/** h_v now at a v point: H, or the mean of the two cells by their areas. */
export function meridionalThickness(model: Model, h: FieldPlace = fieldOf(model, 'h')): Thickness {
  if (model.equations === 'linear') return () => model.restThickness;
  const { shareSouth, shareNorth } = model.rows;
  return (i, j) => 0.5 * shareSouth[j] * at(h, i, j - 1) + 0.5 * shareNorth[j] * at(h, i, j);
}

function kineticRow(j: number, field: FieldPlace, points: Model['spans']['uPoints'], thickness: Thickness): number {
  let row = 0;
  forRuns(points, j, (first, end) => {
    for (let i = first; i < end; i++) {
      const speed = at(field, i, j);
      row += thickness(i, j) * (speed * speed);
    }
  });
  return row;
}

function at({ data, offset, rowStride }: FieldPlace, i: number, j: number): number {
  return data[offset + j * rowStride + i];
}
