import { mkdir, mkdtemp, readdir, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { CAUTION, writeBundle } from '@halfdeep/contracts';
import { Integration, recordSteps, setupSha256, type Setup } from '@halfdeep/ocean';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { EXIT, integrateCommand } from './command';
import { FILL } from './netcdf-file';
import { cfViolations, openCf, type CfFile } from './testing/cf-check';
import { smallSetup } from './testing/small-setup';

// The machine may be busy: none of these measures time.
vi.setConfig({ testTimeout: 60_000 });

let folder: string;
let out: string;
let told: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), 'integrate-'));
  [out, told] = ['', ''];
});
afterEach(async () => {
  vi.restoreAllMocks();
  await rm(folder, { recursive: true, force: true });
});

function integrate(...argv: string[]): Promise<number> {
  return integrateCommand(argv, {
    stdout: { write: (text) => (out += text) },
    stderr: { write: (text) => (told += text) },
    cwd: folder,
    stop: new AbortController().signal,
  });
}
const lastLine = () => JSON.parse(out.trimEnd().split('\n').at(-1)!) as Record<string, unknown>;
const write = (name: string, value: unknown) => writeFile(join(folder, name), JSON.stringify(value));
const names = async () => (await readdir(folder)).sort();

async function bundle(name: string, setup: Setup, state: Uint8Array): Promise<void> {
  const pieces: Uint8Array[] = [];
  await writeBundle({ label: 'x', setup }, [state], (piece) => void pieces.push(piece));
  await writeFile(join(folder, name), Buffer.concat(pieces));
}

/** A setup that goes on from the last state of another, and that state. */
function extension(): { setup: Setup; state: Uint8Array } {
  const first = Integration.start(smallSetup(3));
  first.advance(first.totalSteps);
  const state = first.lastState();
  const setup = smallSetup(4.5, (draft) => {
    draft.start = {
      kind: 'state',
      runId: '0b0e6d0e-6a53-4d5b-9d6f-0d6e3f6b8d51',
      fingerprint: first.fingerprint().sha256,
      stateSha256: Integration.stateSha256(state),
      startStep: first.step,
      stepsPerDay: 16,
    };
  });
  return { setup, state };
}

describe('npm run integrate', () => {
  it('writes every record that the integration gives, and its fingerprint', async () => {
    const setup = smallSetup(7.5);
    await write('setup.json', setup);
    expect(await integrate('setup.json', 'out.nc', '--json')).toBe(EXIT.done);
    expect(await names()).toEqual(['out.nc', 'setup.json']);

    const direct = Integration.start(setup);
    const every = recordSteps(setup);
    const frames = [direct.frame()];
    const [sections, budget, moorings]: Float64Array[][] = [[], [], []];
    while (direct.step < direct.totalSteps) {
      direct.advance(1);
      if (direct.step % every.frames === 0) frames.push(direct.frame());
      if (direct.step % every.sections === 0) sections.push(direct.takeSections());
      if (direct.step % every.budget === 0) budget.push(direct.takeBudget());
      if (direct.step % every.moorings === 0) moorings.push(direct.takeMoorings());
    }
    expect([frames.length, sections.length, moorings.length]).toEqual([6, 7, 30]);

    const file = await openCf(join(folder, 'out.nc'));
    const all = (name: string) => [...(file.variables.get(name)!.read() as Float64Array)];
    const filled = (values: Iterable<number>) => [...values].map((value) => (Number.isNaN(value) ? FILL : value));
    for (const name of ['eta', 'u', 'v'] as const)
      expect(all(name)).toEqual(filled(frames.flatMap((frame) => [...frame[name]])));
    expect(all('h')).toEqual(filled(frames.flatMap((frame) => [...frame.eta.map((eta) => 200 + eta)])));
    expect(all('time')).toEqual([0, 1.5, 3, 4.5, 6, 7.5]);
    expect(all('section_time')).toEqual([1, 2, 3, 4, 5, 6, 7]);
    expect(all('section_time_bnds').slice(0, 4)).toEqual([0, 1, 1, 2]);
    const column = (records: Float64Array[], columns: { name: string }[], name: string) =>
      records.map((values) => values[columns.findIndex((one) => one.name === name)]);
    const along = (places: number[][]) => places[0].flatMap((_, record) => places.map((values) => values[record]));
    const sectionColumns = direct.sectionColumns();
    for (const [name, quantity] of Object.entries({ section_transport: 'transport', section_heat: 'heat' }))
      expect(all(name)).toEqual(along([0, 1].map((place) => column(sections, sectionColumns, `${place}.${quantity}`))));
    // A meridian has no volume north of it.
    expect(all('section_volume_north').slice(0, 2)).toEqual([sections[0][3], FILL]);
    expect(all('mooring_u_centre')).toEqual(
      along([0, 1].map((place) => column(moorings, direct.mooringColumns(), `${place}.uCentre`))),
    );
    for (const { name } of direct.budgetColumns()) {
      const variable = `budget_${name.replace(/[A-Z]/g, (letter) => `_${letter.toLowerCase()}`)}`;
      expect(all(variable), name).toEqual(column(budget, direct.budgetColumns(), name));
    }
    expect(file.variables.get('section_name')!.read()).toEqual(['Équateur', 'Middle']);
    expect(all('mask')).toEqual([...direct.grid.mask]);
    expect(file.attributes).toMatchObject({
      Conventions: 'CF-1.11',
      comment: CAUTION,
      halfdeep_fingerprint_sha256: direct.fingerprint().sha256,
      halfdeep_core_version: direct.fingerprint().coreVersion,
      halfdeep_setup_sha256: setupSha256(setup),
    });
    expect(JSON.parse(String(file.attributes['halfdeep_setup']))).toEqual(setup);
    expect(cfViolations(file)).toEqual([]);
    file.close();

    const energy = budget.map((values) => values[direct.budgetColumns().findIndex(({ name }) => name === 'windWork')]);
    const transport = column(sections, sectionColumns, '0.transport');
    const sum = (values: number[]) => values.reduce((total, value) => total + value, 0);
    expect(lastLine()).toMatchObject({
      fingerprint: direct.fingerprint(),
      coreVersion: direct.fingerprint().coreVersion,
      setupSha256: setupSha256(setup),
      steps: 120,
      days: 7.5,
      outputFile: 'out.nc',
      budgets: { windWork: { unit: 'PJ', last: energy.at(-1), sum: sum(energy) } },
      sections: [
        { name: 'Équateur', atDeg: 0, columns: { transport: { last: transport.at(-1), mean: sum(transport) / 7 } } },
        { name: 'Middle', along: 'longitude', atDeg: 15 },
      ],
    });
  });

  it('names no folder of this machine in the file', async () => {
    await write('setup.json', { label: 'Strong', setup: smallSetup(3) });
    expect(await integrate('setup.json', 'out.nc')).toBe(EXIT.done);
    const text = (await readFile(join(folder, 'out.nc'))).toString('latin1');
    expect(text).not.toContain(folder);
    expect(text).not.toContain(process.cwd());
    const file = await openCf(join(folder, 'out.nc'));
    expect(file.attributes['title']).toBe('Strong');
    file.close();
    expect(out).toMatch(/Fingerprint [0-9a-f]{64}\n$/);
  });

  it('goes on from the state in a bundle', async () => {
    const { setup, state } = extension();
    await bundle('longer.halfdeep.zip', setup, state);
    expect(await integrate('longer.halfdeep.zip', 'out.nc', '--json')).toBe(EXIT.done);
    const direct = Integration.start(setup, state);
    direct.advance(direct.totalSteps - direct.step);
    expect(lastLine()).toMatchObject({ fingerprint: direct.fingerprint(), steps: 72 });
    const file = await openCf(join(folder, 'out.nc'));
    expect([...(file.variables.get('time')!.read() as Float64Array)]).toEqual([3, 4.5, 6, 7.5]);
    file.close();
  });

  it('comes to the same bits by every kernel and any number of threads', async () => {
    await write('setup.json', smallSetup(6));
    const prints: unknown[] = [];
    for (const how of [
      ['--kernel', 'reference'],
      ['--kernel', 'simd'],
      ['--threads', '2'],
    ]) {
      expect(await integrate('setup.json', 'out.nc', '--json', ...how)).toBe(EXIT.done);
      prints.push(lastLine()['fingerprint']);
    }
    expect(prints[1]).toEqual(prints[0]);
    expect(prints[2]).toEqual(prints[0]);
  });

  it('writes the budgets of every term where the setup asks for them', async () => {
    const setup = smallSetup(3, ({ output }) => Object.assign(output, { momentumBudget: true, vorticityBudget: true }));
    await write('setup.json', setup);
    expect(await integrate('setup.json', 'out.nc')).toBe(EXIT.done);
    const file = await openCf(join(folder, 'out.nc'));
    const budgets = [...file.variables.keys()].filter((name) => name.startsWith('budget_') && !/time/.test(name));
    expect(budgets).toHaveLength(Integration.start(setup).budgetColumns().length);
    expect(budgets.length).toBeGreaterThan(Integration.start(smallSetup(3)).budgetColumns().length);
    expect(cfViolations(file)).toEqual([]);
    file.close();
  });

  it('integrates the nonlinear equations, with h in the fingerprint', async () => {
    const setup = smallSetup(3, ({ numerics }) => Object.assign(numerics, { equations: 'nonlinear', stepsPerDay: 20 }));
    await write('setup.json', setup);
    expect(await integrate('setup.json', 'out.nc', '--json')).toBe(EXIT.done);
    const direct = Integration.start(setup);
    direct.advance(direct.totalSteps);
    expect(lastLine()).toMatchObject({ fingerprint: direct.fingerprint(), cautions: direct.cautions() });
    const file = await openCf(join(folder, 'out.nc'));
    const frame = direct.frame();
    const eta = [...(file.variables.get('eta')!.read() as Float32Array)].slice(-frame.eta.length);
    expect(eta).toEqual([...frame.eta].map((value) => (Number.isNaN(value) ? FILL : value)));
    expect(cfViolations(file)).toEqual([]);
    file.close();
  });

  it('works without sections and moorings', async () => {
    await write(
      'setup.json',
      smallSetup(3, ({ output }) => Object.assign(output, { sections: [], moorings: [] })),
    );
    expect(await integrate('setup.json', 'out.nc', '--json')).toBe(EXIT.done);
    const file = await openCf(join(folder, 'out.nc'));
    expect([...file.variables.keys()].filter((name) => /^(section|mooring)/.test(name))).toEqual([]);
    expect(cfViolations(file)).toEqual([]);
    file.close();
    expect(lastLine()).toMatchObject({ sections: [] });
  });
});

describe('bad input ends with exit code 2, in the sentences of the API', () => {
  const refused = async (...argv: string[]) => {
    expect(await integrate(...argv, '--json')).toBe(EXIT.badInput);
    expect((await names()).filter((name) => name.includes('.nc'))).toEqual([]);
    return (lastLine() as { refused: { detail: string; errors: { pointer: string; detail: string }[] } }).refused;
  };

  it('by pointer, name and limit', async () => {
    await write(
      'setup.json',
      smallSetup(3, ({ layer }) => (layer.restThicknessM = 9000)),
    );
    const { errors } = await refused('setup.json', 'out.nc');
    expect(errors).toEqual([
      { pointer: '/layer/restThicknessM', detail: expect.stringMatching(/between 10 and 5000 m; 9000 arrived\.$/) },
    ]);
    expect(told).toContain('/layer/restThicknessM: ');
  });

  it('by pointer into the file when that also holds a label', async () => {
    const setup = { ...smallSetup(3), tide: 1 };
    await write('setup.json', { label: 'x', setup });
    expect((await refused('setup.json', 'out.nc')).errors[0]).toMatchObject({
      pointer: '/setup',
      detail: expect.stringContaining('“tide”'),
    });
  });

  it('when preflight refuses, with the cure', async () => {
    const fine = { spacingLongitudeDeg: 0.25, spacingLatitudeDeg: 0.25, stepsPerDay: 4 };
    await write(
      'setup.json',
      smallSetup(3, ({ numerics }) => Object.assign(numerics, fine)),
    );
    const { detail, errors } = await refused('setup.json', 'out.nc');
    expect(detail).toMatch(/^Preflight refuses this setup: /);
    expect(errors.find(({ pointer }) => pointer === '/numerics/stepsPerDay')?.detail).toMatch(
      /\/numerics\/stepsPerDay = \d+\.$/,
    );
  });

  it.each([
    ['NaN', '{"schemaVersion": NaN}', /neither JSON nor a bundle/],
    [
      'a null for a number',
      JSON.stringify(smallSetup(3)).replace('"restThicknessM":200', '"restThicknessM":null'),
      /The setup is not right/,
    ],
    [
      'a number too large',
      JSON.stringify(smallSetup(3)).replace('"restThicknessM":200', '"restThicknessM":1e999'),
      /The setup is not right/,
    ],
    ['a list', '[]', /The setup is not right/],
    ['nothing', '', /neither JSON nor a bundle/],
  ])('when the file holds %s', async (_, text, words) => {
    await writeFile(join(folder, 'setup.json'), text);
    expect((await refused('setup.json', 'out.nc')).detail).toMatch(words);
  });

  it('when the state is missing, another one, or not asked for', async () => {
    const { setup, state } = extension();
    await write('setup.json', setup);
    expect((await refused('setup.json', 'out.nc')).errors).toEqual([
      { pointer: '/start/stateSha256', detail: expect.stringMatching(/that state is missing: export the setup again/) },
    ]);
    const other = Integration.start(smallSetup(3)).lastState();
    await bundle('other.halfdeep.zip', setup, other);
    expect((await refused('other.halfdeep.zip', 'out.nc')).detail).toMatch(/the state in the bundle is another one/);
    await bundle('needless.halfdeep.zip', smallSetup(3), state);
    expect((await refused('needless.halfdeep.zip', 'out.nc')).detail).toMatch(/starts from “rest”/);
    const elsewhere = structuredClone(setup);
    elsewhere.basin.islands = [];
    await bundle('elsewhere.halfdeep.zip', elsewhere, state);
    expect((await refused('elsewhere.halfdeep.zip', 'out.nc')).detail).toMatch(/lies on another grid/);
    await writeFile(join(folder, 'broken.halfdeep.zip'), Buffer.from('PK\u0003\u0004 and no more'));
    expect((await refused('broken.halfdeep.zip', 'out.nc')).detail).toMatch(/cannot be unpacked/);
  });

  it('when files are not there or cannot be written', async () => {
    expect((await refused('none.json', 'out.nc')).detail).toBe(
      'The setup none.json cannot be read: there is no such file or folder.',
    );
    await write('setup.json', smallSetup(3));
    expect((await refused('setup.json', 'nowhere/out.nc')).detail).toMatch(
      /out\.nc cannot be written: there is no such/,
    );
    await mkdir(join(folder, 'there'));
    expect((await refused('setup.json', 'there')).detail).toMatch(/is not a file/);
  });

  it.each([
    [['setup.json'], /Two files are needed.*; 1 arrived/s],
    [['a', 'b', '--threads', '0'], /--threads must be a whole number from 1 to \d+ on this machine; 0 arrived/],
    [['a', 'b', '--threads', 'two'], /; two arrived/],
    [['a', 'b', '--kernel', 'fast'], /--kernel must be one of auto, reference, simd; fast arrived/],
    [['a', 'b', '--speed'], /speed/],
  ])('when the command line is %j', async (argv, words) => {
    expect((await refused(...argv)).detail).toMatch(words);
  });
});

describe('what goes wrong on the way', () => {
  it('ends with exit code 1 and the first bad step and cell; no file stays', async () => {
    const fine = { spacingLongitudeDeg: 0.25, spacingLatitudeDeg: 0.25, stepsPerDay: 20 };
    await write(
      'setup.json',
      smallSetup(120, ({ numerics }) => Object.assign(numerics, fine)),
    );
    const start = Integration.start.bind(Integration);
    vi.spyOn(Integration, 'start').mockImplementation((setup, ...more) => {
      const unstable = structuredClone(setup);
      unstable.numerics.stepsPerDay = 4; // S = 2.7, which preflight would have refused
      return start(unstable, ...more);
    });
    expect(await integrate('setup.json', 'out.nc', '--json')).toBe(EXIT.failed);
    expect(await names()).toEqual(['setup.json']);
    const { failed } = lastLine() as { failed: { cause: string; step: number; cell: object; message: string } };
    expect(failed.cause).toBe('non-finite');
    expect(failed.step).toBeGreaterThan(0);
    expect(failed.cell).not.toBeNull();
    expect(failed.message).toMatch(/The time step of .* is too long/);
    expect(told).toMatch(/The integration failed on day/);
  });

  it('lets a programme error through and leaves no file', async () => {
    await write('setup.json', smallSetup(3));
    vi.spyOn(Integration.prototype, 'takeMoorings').mockImplementation(() => {
      throw new TypeError('a programme error');
    });
    await expect(integrate('setup.json', 'out.nc')).rejects.toThrow('a programme error');
    expect(await names()).toEqual(['setup.json']);
  });

  it('stops when it is told to, with exit code 130; a file that was there stays as it was', async () => {
    await write(
      'setup.json',
      smallSetup(73_000, ({ output }) => {
        output.frameIntervalDays = 5;
        output.sectionIntervalDays = 5;
        output.mooringIntervalDays = 5;
      }),
    );
    await writeFile(join(folder, 'out.nc'), 'kept');
    const stop = new AbortController();
    const code = await integrateCommand(['setup.json', 'out.nc', '--json'], {
      stdout: { write: (text: string) => (out += text) },
      stderr: { isTTY: true, write: () => stop.abort() },
      cwd: folder,
      stop: stop.signal,
    });
    expect(code).toBe(EXIT.stopped);
    expect(await names()).toEqual(['out.nc', 'setup.json']);
    expect(await readFile(join(folder, 'out.nc'), 'utf8')).toBe('kept');
    expect(lastLine()).toEqual({ stopped: true });
  });
});

describe('the check of the conventions', () => {
  it('sees what is wrong with a file', async () => {
    await write('setup.json', smallSetup(3));
    await integrate('setup.json', 'out.nc');
    const file = await openCf(join(folder, 'out.nc'));
    const spoiled = (change: (copy: CfFile) => void) => {
      const copy: CfFile = {
        ...file,
        attributes: { ...file.attributes },
        variables: new Map(
          [...file.variables].map(([name, one]) => [name, { ...one, attributes: { ...one.attributes } }]),
        ),
      };
      change(copy);
      return cfViolations(copy).join('\n');
    };
    const set = (name: string, attribute: string, value: unknown) => (copy: CfFile) =>
      void (copy.variables.get(name)!.attributes[attribute] = value);
    expect(spoiled(() => undefined)).toBe('');
    expect(spoiled(({ attributes }) => delete attributes['Conventions'])).toMatch(/2\.6\.1/);
    expect(spoiled(set('u', 'units', 'm/s²'))).toMatch(/u: units .* cannot be parsed/);
    expect(spoiled(set('u', 'units', undefined))).toMatch(/u: no units/);
    expect(spoiled(set('time', 'calendar', 'lunar'))).toMatch(/4\.4\.1/);
    expect(spoiled(set('lat', 'bounds', 'gone'))).toMatch(/7\.1/);
    expect(spoiled(set('section_heat', 'cell_methods', 'time: mean'))).toMatch(/7\.3/);
    expect(spoiled(set('eta', 'grid_mapping', 'mask'))).toMatch(/5\.6/);
    expect(spoiled(set('eta', 'coordinates', 'section_name'))).toMatch(/other dimensions/);
    expect(spoiled(set('mask', 'flag_meanings', 'land'))).toMatch(/3\.5/);
    expect(spoiled((copy) => copy.variables.delete('cell_area'))).toMatch(/7\.2/);
    file.close();
  });
});
