// What leaves the product to be computed elsewhere: setups, bundles with their start state, last states.
import { unlink } from 'node:fs/promises';
import { type Experiment, type Problem, readBundle, type Run, setupSchema } from '@halfdeep/contracts';
import { Integration } from '@halfdeep/ocean';
import { runPaths, sha256Of } from '@halfdeep/store';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  bytesOf,
  endlessSetup,
  newExperiment,
  newRun,
  reach,
  smallSetup,
  startRunApi,
  type Hand,
  type RunApi,
} from './run-harness';

let api: RunApi;
let hand: Hand;
let experiment: Experiment;
let parent: Run;
let child: Run;
beforeAll(async () => {
  api = await startRunApi();
  hand = await api.person('Mara', 'modeller');
  experiment = await newExperiment(hand);
  parent = await reach(hand, (await newRun(hand, experiment.id, smallSetup(6), 'Süd, first')).id, 'finished');
  const extended = await hand.post(`/api/runs/${parent.id}/extend`, { label: 'Longer', days: 3 }).expect(202);
  child = await reach(hand, (extended.body as Run).id, 'finished');
});
afterAll(() => api.close());

describe('an exported setup', () => {
  it('is a JSON file named after the run, which the API takes back', async () => {
    const answer = await hand.get(`/api/runs/${parent.id}/setup`).expect(200);
    expect(answer.headers['content-type']).toMatch(/^application\/json/);
    expect(answer.headers['content-disposition']).toContain(
      `filename*=UTF-8''${encodeURIComponent('süd-first.setup.json')}`,
    );
    expect(setupSchema.parse(answer.body)).toEqual(parent.setup);
    await hand.post('/api/preflight', answer.body as object).expect(200);
  });

  it('is a bundle with the very state it starts from, which gives the same fingerprint', async () => {
    const answer = await hand.get(`/api/runs/${child.id}/setup`).responseType('blob').expect(200);
    expect(answer.headers['content-type']).toBe('application/zip');
    expect(answer.headers['content-disposition']).toContain('longer.halfdeep.zip');
    const { text, state } = readBundle(new Uint8Array(answer.body as Buffer));
    const setup = setupSchema.parse(JSON.parse(text));
    expect(setup).toEqual(child.setup);
    const direct = Integration.start(setup, state!);
    direct.advance(direct.totalSteps - direct.step);
    expect(direct.fingerprint()).toEqual(child.fingerprint);
  });
});

describe('a last state', () => {
  it('is what the run says of it, by its hash', async () => {
    const state = await bytesOf(hand.get(`/api/runs/${parent.id}/state`));
    expect(sha256Of(state)).toBe(parent.lastState!.stateSha256);
  });

  it('is refused in words while there is none, or when its file is gone', async () => {
    const going = await newRun(hand, experiment.id, endlessSetup());
    const early = await hand.get(`/api/runs/${going.id}/state`).expect(409);
    expect((early.body as Problem).detail).toMatch(/only a finished run has a last state/);
    await hand.post(`/api/runs/${going.id}/stop`).expect(202);
    await unlink(runPaths(api.varFolder, parent.id).last);
    const gone = await hand.get(`/api/runs/${parent.id}/state`).expect(409);
    expect((gone.body as Problem).detail).toBe(
      'The last state of this run is missing: its file is gone. Compute that run again.',
    );
    await unlink(runPaths(api.varFolder, child.id).start);
    const bundle = await hand.get(`/api/runs/${child.id}/setup`).expect(409);
    expect((bundle.body as Problem).detail).toMatch(/start state of this run is missing/);
    const repeat = await hand.post(`/api/runs/${child.id}/repeat`).expect(409);
    expect((repeat.body as Problem).detail).toMatch(/start state of the run that it repeats is missing/);
  });
});
