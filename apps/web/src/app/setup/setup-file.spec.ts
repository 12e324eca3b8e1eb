import { setupText, writeBundle } from '@halfdeep/contracts';
import { corvaneSetup, Integration, type Setup } from '@halfdeep/ocean';
import { hasShapeOfSetup, readSetupBytes, readSetupFile } from './setup-file';
import { withValueAt } from './setup-pointer';

const refusal = (text: string) => {
  const reading = readSetupFile(text);
  return reading.kind === 'refused' ? reading.reasons.join(' ') : 'was read';
};

describe('readSetupFile', () => {
  it('reads what it wrote', () => {
    const setup = corvaneSetup();
    expect(readSetupFile(setupText(setup))).toEqual({ kind: 'setup', setup, label: null, refusedFields: 0 });
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

describe('readSetupBytes', () => {
  const state = Uint8Array.of(1, 2, 3);
  const from = (stateSha256: string): Setup => ({
    ...corvaneSetup(),
    start: {
      kind: 'state',
      runId: '22222222-2222-4222-8222-222222222222',
      fingerprint: 'ab'.repeat(32),
      stateSha256,
      startStep: 160,
      stepsPerDay: 16,
    },
  });
  async function bundle(setup: Setup, pieces: Uint8Array[]): Promise<Uint8Array> {
    const parts: Uint8Array[] = [];
    await writeBundle({ label: 'x', setup }, pieces, (piece) => void parts.push(piece.slice()));
    return new Uint8Array(await new Blob(parts as BlobPart[]).arrayBuffer());
  }
  const reasons = (bytes: Uint8Array) => {
    const reading = readSetupBytes(bytes);
    return reading.kind === 'refused' ? reading.reasons.join(' ') : 'was read';
  };

  it('reads JSON and bundles alike', async () => {
    const setup = from(Integration.stateSha256(state));
    const whole = { kind: 'setup', setup, label: null, refusedFields: 0 };
    expect(readSetupBytes(new TextEncoder().encode(setupText(setup)))).toEqual(whole);
    expect(readSetupBytes(await bundle(setup, [state]))).toEqual(whole);
  });
  it('refuses a bundle whose state is another one, missing or not asked for', async () => {
    expect(reasons(await bundle(from('cd'.repeat(32)), [state]))).toContain('another one');
    expect(reasons(await bundle(corvaneSetup(), [state]))).toContain('starts from “rest”');
    expect(reasons(Uint8Array.of(0x50, 0x4b, 3, 4, 0))).toContain('cannot be unpacked');
  });
});
