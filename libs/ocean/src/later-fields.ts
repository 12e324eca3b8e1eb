import { LIMITS } from './limits';
import type { Setup } from './setup';

/** What fields that came after the first setups were kept stand for where they are missing. */
const LATER = {
  basin: { sponges: [], coastSpacing: null },
  layer: { minimumThicknessM: LIMITS.minimumThickness.default, entrainment: null },
  wind: { stressFloorM: LIMITS.stressFloor.default },
  friction: { viscosityPatches: [] },
  output: { momentumBudget: false, vorticityBudget: false },
} as const;

/**
 * A setup with the fields that came after it was kept, each at its default, behind those that it has; the very same
 * object when none is missing. Drafts kept by a browser and setups of earlier runs may lack them.
 */
export function withLaterFields(setup: Setup): Setup {
  const parts = Object.entries(LATER) as [keyof typeof LATER, Record<string, unknown>][];
  let complete = setup;
  for (const [part, defaults] of parts) {
    const missing = Object.entries(defaults).filter(([field]) => !Object.hasOwn(setup[part], field));
    if (missing.length === 0) continue;
    complete = { ...complete, [part]: { ...setup[part], ...structuredClone(Object.fromEntries(missing)) } };
  }
  return complete;
}
