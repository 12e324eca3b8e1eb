import { corvaneSetup } from '@halfdeep/ocean';
import { hasShapeOfSetup, readSetupFile, setupFileName, writeSetupFile } from './setup-file';
import { withValueAt } from './setup-pointer';

const refusal = (text: string) => {
  const reading = readSetupFile(text);
  return reading.kind === 'refused' ? reading.reasons.join(' ') : 'was read';
};

describe('readSetupFile', () => {
  it('reads what it wrote', () => {
    const setup = corvaneSetup();
    expect(readSetupFile(writeSetupFile(setup))).toEqual({ kind: 'setup', setup, label: null, refusedFields: 0 });
  });
  it('takes a label beside the setup', () => {
    const text = JSON.stringify({ label: 'Strong', setup: corvaneSetup(1.2) });
    expect(readSetupFile(text)).toMatchObject({ kind: 'setup', label: 'Strong' });
  });
  it('lets a value out of range into the form, which shows it', () => {
    const thick = withValueAt(corvaneSetup(), '/layer/restThicknessM', 9000);
    expect(readSetupFile(JSON.stringify(thick))).toMatchObject({ kind: 'setup', refusedFields: 1 });
  });
  it('lets an empty number into the form', () => {
    expect(hasShapeOfSetup(withValueAt(corvaneSetup(), '/numerics/stepsPerDay', null))).toBe(true);
  });
  it('says why a file is no setup', () => {
    expect(refusal('{"a":')).toContain('not JSON');
    expect(refusal('[1, 2]')).toContain('holds no setup');
    expect(refusal('{"schemaVersion": 7}')).toContain('schema version 7');
    expect(refusal(JSON.stringify(withValueAt(corvaneSetup(), '/layer', 'thick')))).toContain('/layer (Layer)');
    expect(refusal(JSON.stringify(withValueAt(corvaneSetup(), '/friction/slip', 'half')))).toContain('/friction/slip');
    expect(refusal(JSON.stringify({ ...corvaneSetup(), tide: 1 }))).toContain('tide');
  });
});

it('names the file after the label', () => {
  expect(setupFileName('Seasonal strength 1.20')).toBe('seasonal-strength-1.20.setup.json');
  expect(setupFileName('…/..')).toBe('setup.setup.json');
});
