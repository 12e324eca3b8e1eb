import { provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { corvaneSetup, preflight, type Check } from '@halfdeep/ocean';
import { proposeLabel, SetupDraft } from './setup-draft';

const parent = { id: 'p', label: 'Control', setup: corvaneSetup() };

describe('SetupDraft', () => {
  let draft: SetupDraft;
  beforeEach(() => {
    TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection(), SetupDraft] });
    draft = TestBed.inject(SetupDraft);
    draft.fill(corvaneSetup());
  });

  it('names a field that is out of range, and keeps the last setup that read well', () => {
    draft.set('/layer/restThicknessM', 9000);
    expect(draft.setup()).toBeNull();
    expect(draft.problems().get('/layer/restThicknessM')).toContain('between 10 and 5000 m; 9000 arrived');
    expect(draft.readable().layer.restThicknessM).toBe(200);
    draft.set('/layer/restThicknessM', 250);
    expect(draft.setup()?.layer.restThicknessM).toBe(250);
    expect(draft.problems().size).toBe(0);
  });

  it('says that nothing arrived for an empty field', () => {
    draft.set('/numerics/stepsPerDay', null);
    expect(draft.problems().get('/numerics/stepsPerDay')).toContain('nothing arrived');
  });

  it('marks each field that differs from the parent, whatever its place in a list', () => {
    draft.parent.set(parent);
    const [first] = draft.value().wind.components;
    draft.insert('/wind/components', { ...structuredClone(first), name: 'Another' }, 0);
    draft.set('/wind/seasonalStrength', 1.2);
    expect(draft.change('/wind/seasonalStrength')).toMatchObject({ from: '1.00', to: '1.20' });
    expect(draft.change('/wind/components/0')).not.toBeNull();
    // The belts moved down by one place and are still themselves.
    expect(draft.changes().map(({ pointer }) => pointer)).toEqual(['/wind/components/0', '/wind/seasonalStrength']);
  });

  it('judges a basin whose places lie outside, and moves them in or takes them away', () => {
    draft.parent.set(parent);
    draft.set('/basin/southDeg', 2);
    expect(draft.setup()).toBeNull();
    expect(draft.problems().get('/output/sections/1/atDeg')).toContain('must lie inside the basin');
    expect(draft.readable().basin.southDeg).toBe(2);
    expect(draft.readable().output.sections.map(({ name }) => name)).toEqual(['N 10', 'Meridian 30']);
    // They are left out of what is judged, not of what would be sent.
    expect(draft.changes().map(({ pointer }) => pointer)).toEqual(['/basin/southDeg']);
    const before = draft.value();
    draft.moveInside();
    expect(draft.setup()?.output.sections.map(({ atDeg }) => atDeg)).toEqual([10, 2.5, 2.5, 30]);
    draft.fill(before);
    draft.removeOutside();
    expect(draft.setup()?.output.moorings.map(({ name }) => name)).toEqual(['North']);
  });

  it('proposes a label from the changes until another is written', () => {
    draft.parent.set(parent);
    draft.set('/wind/seasonalStrength', 1.2);
    expect(draft.label()).toBe('Seasonal strength 1.20');
    draft.setLabel('Strong');
    draft.set('/wind/seasonalStrength', 1.4);
    expect(draft.label()).toBe('Strong');
    const change = { pointer: '', label: 'x', from: '1', to: '2', unit: '' };
    expect(proposeLabel(parent, [change, change, change])).toBe('3 changes from Control');
    expect(proposeLabel(null, [])).toBe('Control');
  });

  it('writes a remedy of preflight, after which the check passes', () => {
    draft.set('/numerics/stepsPerDay', 8);
    const refused = (): Check | undefined =>
      preflight(draft.readable()).checks.find((check) => check.verdict === 'refuse' && check.remedy !== null);
    const check = refused();
    expect(check?.remedy?.changes.map(({ pointer }) => pointer)).toContain('/numerics/stepsPerDay');
    expect(draft.apply(check!.remedy!)).toBe(true);
    expect(refused()).toBeUndefined();
  });

  it('does not apply half a remedy whose place has gone', () => {
    const changes = [
      { pointer: '/layer/restThicknessM', value: 100 },
      { pointer: '/output/moorings/99/latitudeDeg', value: 0 },
    ];
    expect(draft.apply({ label: 'Move it', changes })).toBe(false);
    expect(draft.value().layer.restThicknessM).toBe(200);
  });

  it('shows what the server refused at its field until the field is written', () => {
    draft.refuse([
      { pointer: '/setup/layer/restThicknessM', detail: 'Too thick for this machine.' },
      { pointer: '/label', detail: 'Taken.' },
    ]);
    expect(draft.problems().get('/layer/restThicknessM')).toBe('Too thick for this machine.');
    draft.set('/layer/restThicknessM', 190);
    expect([...draft.problems().keys()]).toEqual(['/label']);
    draft.setLabel('Another');
    expect(draft.problems().size).toBe(0);
  });
});
