import { NONLINEAR_RING as RING } from '../layout';
import type { Model } from '../model';
import { clearRing } from '../rows';
import { limitMeridionalFluxes, limitRow, limitZonalFluxes, meridionalFluxRow, zonalFluxRow } from './fluxes';
import { halfLevelRow, uniformDetrainment } from './half-level';
import { meridionalRow, zonalRow } from './momentum';
import { cellSums, meridionalSums, zonalSums } from './nonlinear-sums';
import { thicknessRow } from './thickness';
import { cornerRow } from './vorticity';

/**
 * One step of the nonlinear, vector-invariant equations by the generalised forward-backward scheme (numerics.md §4, §6). One sweep;
 * with t the row that is read from the state, in this order:
 *   t      u, h at n + ½ (and v of row t + 1), clip, w_e; U of row t, V of row t, not limited
 *   t      corners: ζ, q, a, b, A s ζ, from the fluxes of rows t − 1 and t, not limited
 *   t − 1  R of its cells, from U of the row and V south and north of it; V and U of the row times R upstream
 *   t − 2  h(n + 1) and the head; then v(n + 1); then u(n + 1)
 *   t − 3  row sums of cells, which need the new v north of them
 * The limiter acts on continuity alone. Turning does no work on ½ h_u u² + ½ h_v v² just when its fluxes are u h_u and
 * v h_v; and a cell that lets nothing out must not lose its Coriolis force while the pressure gradient stays: with limited
 * fluxes the layer's edge sped up by f u, metres per second in a day, and outcropping runs blew up.
 * Nothing that is read lies more than three rows back, so a ring of four rows holds it all. The order of every expression
 * is fixed, no expression depends on data but for max, min and the choice of the upstream R.
 */
export function nonlinearStep(model: Model, sums: boolean): void {
  const { ny } = model.grid;
  model.forcing.factors(model.step, model.factors);
  const detrained = uniformDetrainment(model);
  const limiting = model.minimumThickness > 0;
  // Beyond the walls there is nothing, and nothing flows through them.
  for (const plane of [RING.ut, RING.ht, RING.fluxU]) clearRing(model, plane, -1);
  for (const plane of [RING.vt, RING.fluxV]) clearRing(model, plane, 0);
  for (let t = 0; t <= ny + 1; t++) {
    if (t < ny) {
      halfLevelRow(model, t, sums);
      zonalFluxRow(model, t);
      if (t > 0) meridionalFluxRow(model, t);
    } else if (t === ny) {
      for (const plane of [RING.ut, RING.ht, RING.fluxU]) clearRing(model, plane, ny);
      clearRing(model, RING.fluxV, ny);
    }
    // With the fluxes as they are, before continuity's are limited: see above.
    if (t <= ny) cornerRow(model, t);
    const r = t - 1;
    if (r < 0) continue;
    if (limiting && r < ny) {
      limitRow(model, r, sums);
      if (r > 0) limitMeridionalFluxes(model, r);
      limitZonalFluxes(model, r);
    }
    const j = t - 2;
    if (j < 0) continue;
    thicknessRow(model, j, detrained);
    if (j > 0) {
      meridionalRow(model, j);
      if (sums) meridionalSums(model, j);
    }
    zonalRow(model, j);
    if (sums) {
      zonalSums(model, j);
      if (j > 0) cellSums(model, j - 1, detrained);
    }
  }
  if (sums) cellSums(model, ny - 1, detrained);
  model.phase = (model.phase + 1) & 3;
  model.step += 1;
}
