import { type Setup, buildGrid } from '@halfdeep/ocean';

const KG_PER_GT = 1e12;

/** Mass of the layer at rest, Gt: what a residual of mass is held against. */
export function restMassGt(setup: Setup): number {
  const { nx, ny, mask, dxC, dy } = buildGrid(setup);
  let area = 0;
  for (let j = 0; j < ny; j++) for (let i = 0; i < nx; i++) area += (mask[j * nx + i] ?? 0) * (dxC[j] ?? 0) * dy;
  return (area * setup.layer.restThicknessM * setup.constants.densityKgM3) / KG_PER_GT;
}
