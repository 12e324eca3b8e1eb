import { type Type, provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { MatButtonHarness } from '@angular/material/button/testing';
import { MatInputHarness } from '@angular/material/input/testing';
import { MatNativeSelectHarness } from '@angular/material/input/testing';
import { provideRouter } from '@angular/router';
import { setupSchema } from '@halfdeep/contracts';
import { corvaneSetup, type Setup } from '@halfdeep/ocean';
import { blankSetup, freeEdges } from '../blank-setup';
import { RemedyActions } from '../preflight/remedy-actions';
import { SetupDraft } from '../setup-draft';
import { BasinSection } from './basin-section';
import { FrictionSection } from './friction-section';
import { LayerSection } from './layer-section';
import { NumericsSection } from './numerics-section';
import { OutputSection } from './output-section';
import { WindSection } from './wind-section';

/** One section over a draft, as the page provides it. */
async function open<T>(section: Type<T>, change: (setup: Setup) => void = () => undefined) {
  TestBed.configureTestingModule({
    providers: [provideZonelessChangeDetection(), provideRouter([]), SetupDraft, RemedyActions],
  });
  const draft = TestBed.inject(SetupDraft);
  const setup = corvaneSetup();
  change(setup);
  draft.fill(setup);
  const fixture = TestBed.createComponent(section);
  await fixture.whenStable();
  const loader = TestbedHarnessEnvironment.loader(fixture);
  const element = fixture.nativeElement as HTMLElement;
  return {
    draft,
    loader,
    /** What a person reads. */
    text: () => element.textContent ?? '',
    press: async (words: string) => (await loader.getHarness(MatButtonHarness.with({ text: words }))).click(),
    choose: async (pointer: string, label: string) =>
      (await loader.getHarness(MatNativeSelectHarness.with({ ancestor: `[data-pointer="${pointer}"]` }))).selectOptions(
        { text: label },
      ),
    write: async (pointer: string, value: string) => {
      const input = await loader.getHarness(MatInputHarness.with({ ancestor: `[data-pointer="${pointer}"]` }));
      await input.setValue(value);
      await input.blur();
    },
    has: (pointer: string) => element.querySelector(`[data-pointer="${pointer}"]`) !== null,
    labels: () => [...element.querySelectorAll('mat-label')].map((label) => label.textContent?.trim()),
    sees: (selector: string) => element.querySelectorAll(selector).length,
    settle: () => fixture.whenStable(),
  };
}
type Section = Awaited<ReturnType<typeof open>>;
const valid = ({ draft }: Section) => setupSchema.safeParse(draft.value()).success;

describe('sponges in the form', { timeout: 30_000 }, () => {
  it('are added edge by edge, each valid, until every edge has one, and are drawn on the map', async () => {
    const basin = await open(BasinSection);
    for (const edge of ['south', 'north', 'west', 'east']) {
      await basin.press('Add a sponge');
      expect(basin.draft.value().basin.sponges.at(-1)).toMatchObject({ edge, peakRatePerS: null, tapersWind: true });
      expect(valid(basin)).toBe(true);
    }
    const button = await basin.loader.getHarness(MatButtonHarness.with({ text: 'Add a sponge' }));
    expect(await button.isDisabled()).toBe(true);
    expect(basin.sees('rect.sponge')).toBe(4);
    expect(basin.text()).toContain('Dotted: sponges.');
  });
  it('say at the field what is wrong with a width and with a second one at an edge', async () => {
    const basin = await open(BasinSection);
    await basin.press('Add a sponge');
    await basin.write('/basin/sponges/0/widthDeg', '20');
    expect(basin.text()).toContain('at most half as wide as the basin, 17.5°');
    await basin.write('/basin/sponges/0/widthDeg', '4');
    await basin.press('Add a sponge');
    await basin.choose('/basin/sponges/1/edge', 'south');
    expect(basin.text()).toContain('a sponge at the south edge already');
    expect(valid(basin)).toBe(false);
  });
  it('may leave the wind alone, take a rate of their own, and go', async () => {
    const basin = await open(BasinSection);
    await basin.press('Add a sponge');
    await basin.choose('/basin/sponges/0/tapersWind', 'blows as outside');
    await basin.write('/basin/sponges/0/peakRatePerS', '1e-5');
    expect(basin.draft.value().basin.sponges[0]).toMatchObject({ tapersWind: false, peakRatePerS: 1e-5 });
    const remove = await basin.loader.getHarness(MatButtonHarness.with({ selector: '[aria-label="Remove the south sponge"]' })); // prettier-ignore
    await remove.click();
    expect(basin.draft.value().basin.sponges).toEqual([]);
  });
  it('leave the west and east edges when the basin becomes periodic', async () => {
    const basin = await open(BasinSection, ({ basin: water }) => {
      water.sponges = (['west', 'north'] as const).map((edge) => ({ edge, widthDeg: 3, peakRatePerS: null, tapersWind: true })); // prettier-ignore
    });
    await basin.choose('/basin/zonallyPeriodic', 'zonally periodic');
    expect(basin.draft.value().basin.sponges.map(({ edge }) => edge)).toEqual(['north']);
    expect(freeEdges(basin.draft.value().basin)).toEqual(['south']);
    expect(valid(basin)).toBe(true);
  });
});

it('a spherical band asks for no latitude of contact, f₀ or β', async () => {
  const basin = await open(BasinSection);
  expect(basin.has('/basin/betaPerMS')).toBe(true);
  await basin.choose('/basin/geometry', 'spherical band');
  await basin.settle();
  for (const field of ['referenceLatitudeDeg', 'f0PerS', 'betaPerMS']) expect(basin.has(`/basin/${field}`)).toBe(false);
  await basin.choose('/basin/geometry', 'f-plane');
  await basin.settle();
  expect(basin.has('/basin/referenceLatitudeDeg')).toBe(true);
});

it('the coast may have a grid of its own, which must nest', async () => {
  const basin = await open(BasinSection);
  expect(basin.has('/basin/coastSpacing/longitudeDeg')).toBe(false);
  const selects = await basin.loader.getAllHarnesses(MatNativeSelectHarness);
  const texts = await Promise.all(selects.map(async (select) => (await select.getOptions()).length && (await (await select.getOptions())[0].getText()))); // prettier-ignore
  await selects[texts.indexOf('the run’s own')].selectOptions({ text: 'a grid of its own' });
  expect(basin.draft.value().basin.coastSpacing).toEqual({ longitudeDeg: 0.25, latitudeDeg: 0.25 });
  await basin.write('/basin/coastSpacing/longitudeDeg', '0.3');
  expect(basin.text()).toContain('must be a whole multiple or a whole fraction of the grid spacing');
  await basin.write('/basin/coastSpacing/longitudeDeg', '0.5');
  expect(valid(basin)).toBe(true);
});

describe('the nonlinear equations in the form', { timeout: 30_000 }, () => {
  it('show their own fields where they are chosen, and only there', async () => {
    const layer = await open(LayerSection);
    expect(layer.has('/layer/minimumThicknessM')).toBe(false);
    layer.draft.set('/numerics/equations', 'nonlinear');
    await layer.settle();
    expect(layer.has('/layer/minimumThicknessM')).toBe(true);
    expect(layer.has('/layer/entrainment/onsetThicknessM')).toBe(false);
    const select = await layer.loader.getHarness(MatNativeSelectHarness);
    await select.selectOptions({ text: 'where thin' });
    expect(layer.draft.value().layer.entrainment).toEqual({
      onsetThicknessM: 60,
      timescaleDays: 10,
      detrainment: 'none',
    });
    await layer.write('/layer/entrainment/onsetThicknessM', '10');
    expect(layer.text()).toContain('between the minimum thickness and the thickness at rest, 20 and 200 m');
    await layer.choose('/layer/entrainment/detrainment', 'evenly over the basin');
    await select.selectOptions({ text: 'none' });
    expect(layer.draft.value().layer.entrainment).toBeNull();
    expect(valid(layer)).toBe(true);
  });
  it('bring the stress floor into the wind', async () => {
    const wind = await open(WindSection);
    expect(wind.has('/wind/stressFloorM')).toBe(false);
    wind.draft.set('/numerics/equations', 'nonlinear');
    await wind.settle();
    await wind.write('/wind/stressFloorM', '250');
    expect(wind.text()).toContain('at most the thickness at rest, 200 m');
  });
  it('begin with a minimum thickness that fits a thin layer', async () => {
    const numerics = await open(NumericsSection, ({ layer, wind }) => {
      layer.restThicknessM = 30;
      wind.stressFloorM = 50;
    });
    await numerics.choose('/numerics/equations', 'nonlinear');
    expect(numerics.draft.value().layer.minimumThicknessM).toBe(3);
    expect(numerics.draft.value().wind.stressFloorM).toBe(0);
    expect(valid(numerics)).toBe(true);
    expect(numerics.text()).toContain('nonlinear equations on a C-grid');
  });
});

it('places of other viscosity are named, drawn and removed', async () => {
  const friction = await open(FrictionSection);
  await friction.press('Add a place');
  expect(friction.draft.value().friction.viscosityPatches).toMatchObject([{ name: 'Place 1', addedM2S: 4000 }]);
  expect(valid(friction)).toBe(true);
  await friction.write('/friction/viscosityPatches/0/addedM2S', '-5');
  expect(friction.text()).toContain('Added viscosity must be between 0 and');
  const remove = await friction.loader.getHarness(MatButtonHarness.with({ text: 'Remove' }));
  await remove.click();
  expect(friction.draft.value().friction.viscosityPatches).toEqual([]);
});

it('budgets are kept when asked for', async () => {
  const output = await open(OutputSection);
  await output.choose('/output/momentumBudget', 'kept');
  await output.choose('/output/vorticityBudget', 'kept');
  expect(output.draft.value().output).toMatchObject({ momentumBudget: true, vorticityBudget: true });
});

it('a draft kept before these fields existed opens with their defaults, and is not counted as touched', () => {
  TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection(), SetupDraft] });
  const draft = TestBed.inject(SetupDraft);
  const old = corvaneSetup();
  for (const [part, field] of [
    ['basin', 'sponges'],
    ['basin', 'coastSpacing'],
    ['layer', 'minimumThicknessM'],
    ['layer', 'entrainment'],
    ['wind', 'stressFloorM'],
    ['friction', 'viscosityPatches'],
    ['output', 'momentumBudget'],
    ['output', 'vorticityBudget'],
  ] as const)
    delete (old[part] as unknown as Record<string, unknown>)[field];
  draft.start.set(old);
  draft.parent.set({ id: 'run', label: 'Old', setup: old });
  draft.fill(old);
  expect(draft.value()).toEqual(corvaneSetup());
  expect(draft.setup()).toEqual(corvaneSetup());
  expect(draft.touched()).toBe(false);
  expect(draft.changes()).toEqual([]);
  expect(blankSetup().basin.sponges).toEqual([]);
});
