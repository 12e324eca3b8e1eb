// What leaves the product to be computed elsewhere: setups, bundles with their start state, last states.
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdtemp, readdir, rm, unlink, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { type Experiment, type Problem, readBundle, type Run, setupSchema } from '@halfdeep/contracts';
import { Integration } from '@halfdeep/ocean';
import { runPaths, sha256Of } from '@halfdeep/store';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  bundled,
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

describe('the headless command', () => {
  let folder: string;
  let main: string;
  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), 'halfdeep-integrate-'));
    main = await bundled('worker/src/integrate/main.ts');
  });
  afterAll(async () => {
    await rm(folder, { recursive: true });
    await rm(dirname(main), { recursive: true });
  });

  /** Runs the command in its own process, without any of this server's settings. */
  async function headless(...argv: string[]): Promise<{ code: number; last: Record<string, unknown>; told: string }> {
    const child = spawn(process.execPath, [main, ...argv, '--json'], {
      cwd: folder,
      env: { PATH: process.env['PATH'] },
    });
    let [out, told] = ['', ''];
    child.stdout.on('data', (data: Buffer) => (out += data.toString()));
    child.stderr.on('data', (data: Buffer) => (told += data.toString()));
    const [code] = (await once(child, 'close')) as [number];
    return { code, last: JSON.parse(out.trimEnd().split('\n').at(-1) ?? '{}') as Record<string, unknown>, told };
  }

  it('comes to the fingerprint of the product from an exported setup, and from a bundle', async () => {
    await writeFile(join(folder, 'setup.json'), await bytesOf(hand.get(`/api/runs/${parent.id}/setup`)));
    await writeFile(join(folder, 'longer.halfdeep.zip'), await bytesOf(hand.get(`/api/runs/${child.id}/setup`)));
    const first = await headless('setup.json', 'first.nc');
    expect(first).toMatchObject({ code: 0, last: { fingerprint: parent.fingerprint } });
    const longer = await headless('longer.halfdeep.zip', 'longer.nc');
    expect(longer).toMatchObject({ code: 0, last: { fingerprint: child.fingerprint } });
    expect((await readdir(folder)).sort()).toEqual(['first.nc', 'longer.halfdeep.zip', 'longer.nc', 'setup.json']);
  }, 120_000);

  it('refuses in the sentences of the API, at the same places', async () => {
    const setup = smallSetup(3, ({ layer, numerics }) => {
      layer.restThicknessM = 9000;
      numerics.stepsPerDay = 5;
    });
    const label = 'x';
    await writeFile(join(folder, 'wrong.json'), JSON.stringify({ label, setup }));
    const answer = await hand.post(`/api/experiments/${experiment.id}/runs`, { label, setup }).expect(422);
    const { code, last, told } = await headless('wrong.json', 'wrong.nc');
    expect(code).toBe(2);
    expect((last['refused'] as Problem).errors).toEqual((answer.body as Problem).errors);
    for (const { pointer, detail } of (answer.body as Problem).errors!) expect(told).toContain(`${pointer}: ${detail}`);
  }, 120_000);

  it('stops on Ctrl-C with exit code 130 and leaves nothing half-written', async () => {
    await writeFile(join(folder, 'endless.json'), JSON.stringify(endlessSetup()));
    const child = spawn(process.execPath, [main, 'endless.json', 'endless.nc'], { cwd: folder });
    // The file is begun under another name before the first step; on a busy machine it takes a while to get there.
    while (child.exitCode === null && !(await readdir(folder)).some((name) => name.endsWith('.part'))) await sleep(50);
    child.kill('SIGINT');
    const [code] = (await once(child, 'close')) as [number];
    expect(code).toBe(130);
    expect((await readdir(folder)).filter((name) => /endless\.nc|part/.test(name))).toEqual([]);
  }, 120_000);
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
