import { corvaneSetup } from '../presets/corvane';
import { PRESETS } from '../presets/presets';
import type { Check, Preflight } from '../preflight-types';
import type { Setup } from '../setup';

// What the specs of preflight share.

export const changed = (change: (setup: Setup) => void, from: Setup = corvaneSetup()): Setup => {
  const setup = structuredClone(from);
  change(setup);
  return setup;
};
export const preset = (id: string) => structuredClone(PRESETS.find((one) => one.id === id)!.setup);
export const row = (result: Preflight, id: string): Check => {
  const found = result.checks.find((check) => check.id === id);
  if (!found) throw new Error(`no row ${id} among ${result.checks.map((check) => check.id).join(', ')}`);
  return found;
};
export const number = (result: Preflight, id: string) => result.derived.find((one) => one.id === id)!.value;
