import { corvaneSetup, preflight } from '@halfdeep/ocean';
import { expect, it } from 'vitest';
import { readFields } from './field-errors';
import { preflightRefusal } from './preflight-refusal';
import { setupSchema } from './setup-schema';

it('refuses nothing that preflight lets in', () => {
  expect(preflightRefusal(preflight(corvaneSetup()), String)).toBeNull();
});

it('names every refused field at its place, with the cure', () => {
  const setup = corvaneSetup();
  setup.numerics.stepsPerDay = 4;
  const refusal = preflightRefusal(preflight(setup), (pointer) => `/setup${pointer}`)!;
  expect(refusal.detail).toMatch(/^Preflight refuses this setup: /);
  const at = refusal.errors.find(({ pointer }) => pointer === '/setup/numerics/stepsPerDay')!;
  expect(at.detail).toMatch(/\/setup\/numerics\/stepsPerDay = \d+\.$/);
});

it('says what a schema refuses by pointer, name and limit', () => {
  const setup = corvaneSetup();
  setup.layer.restThicknessM = 9000;
  expect(readFields(setupSchema, setup)).toEqual({
    data: null,
    errors: [
      { pointer: '/layer/restThicknessM', detail: expect.stringMatching(/between 10 and 5000 m; 9000 arrived/) },
    ],
  });
  expect(readFields(setupSchema, corvaneSetup()).errors).toBeNull();
});
