import { expect, it } from 'vitest';
import { withLaterFields } from './later-fields';
import { corvaneSetup } from './presets/corvane';
import type { Setup } from './setup';

it('gives an earlier setup what it lacks, and leaves a complete one as it is', () => {
  const complete = corvaneSetup(1, 'nonlinear');
  expect(withLaterFields(complete)).toBe(complete);
  const old = corvaneSetup();
  const drop = (part: keyof Setup, ...fields: string[]) =>
    fields.forEach((field) => delete (old[part] as unknown as Record<string, unknown>)[field]);
  drop('basin', 'sponges', 'coastSpacing');
  drop('layer', 'minimumThicknessM', 'entrainment');
  drop('wind', 'stressFloorM');
  drop('friction', 'viscosityPatches');
  drop('output', 'momentumBudget', 'vorticityBudget');
  const before = structuredClone(old);
  expect(withLaterFields(old)).toEqual(corvaneSetup());
  expect(old).toEqual(before);
  const one = corvaneSetup();
  one.layer.minimumThicknessM = 7;
  delete (one.layer as Partial<Setup['layer']>).entrainment;
  expect(withLaterFields(one).layer).toMatchObject({ minimumThicknessM: 7, entrainment: null });
});
