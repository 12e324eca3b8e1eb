import { zipSync } from 'fflate';
import { corvaneSetup, type Setup } from '@halfdeep/ocean';
import { describe, expect, it } from 'vitest';
import { CAUTION } from './caution';
import { isZip, readBundle, setupFileStem, setupText, writeBundle } from './setup-bundle';

const setup: Setup = corvaneSetup();
const state = Uint8Array.from({ length: 3_000_001 }, (_, k) => (k * 2654435761) >>> 24);

async function bundleOf(pieces: Uint8Array[]): Promise<Uint8Array> {
  const written: Uint8Array[] = [];
  await writeBundle({ label: 'Strong', setup }, pieces, (piece) => void written.push(piece.slice()));
  return new Uint8Array(Buffer.concat(written));
}

describe('a bundle', () => {
  it('gives back the setup and every byte of the state, however it came in pieces', async () => {
    const whole = await bundleOf([state]);
    const cut = await bundleOf([state.subarray(0, 7), state.subarray(7, 2_000_000), state.subarray(2_000_000)]);
    for (const bytes of [whole, cut]) {
      expect(isZip(bytes)).toBe(true);
      const content = readBundle(bytes);
      expect(JSON.parse(content.text)).toEqual(setup);
      expect(Buffer.compare(content.state!, state)).toBe(0);
    }
  });

  it('is the same to the last byte whenever it is written', async () => {
    expect(Buffer.compare(await bundleOf([state]), await bundleOf([state]))).toBe(0);
  });

  it('carries the caution', async () => {
    expect(new TextDecoder().decode(await bundleOf([]))).toContain(CAUTION);
  });

  it('says what is missing or broken', async () => {
    const bytes = await bundleOf([state]);
    expect(() => readBundle(bytes.subarray(0, bytes.length - 40))).toThrow(/cannot be unpacked: .*Export it once more/);
    expect(() => readBundle(zipSync({ 'notes.txt': new Uint8Array(3) }))).toThrow(/holds no setup\.json/);
    expect(() => readBundle(zipSync({ 'setup.json': new Uint8Array(5e6) }))).toThrow(/5000000 bytes; at most 4000000/);
    expect(readBundle(zipSync({ 'setup.json': new Uint8Array(2) })).state).toBeNull();
  });

  it('passes on what goes wrong while writing', async () => {
    const full = () => Promise.reject(new Error('ENOSPC'));
    await expect(writeBundle({ label: '', setup }, [state], full)).rejects.toThrow('ENOSPC');
  });
});

it('tells a zip from JSON', () => {
  expect(isZip(new TextEncoder().encode(setupText(setup)))).toBe(false);
  expect(isZip(new Uint8Array(2))).toBe(false);
});

it('makes a file name of a label', () => {
  expect(setupFileStem('Seasonal strength 1.20')).toBe('seasonal-strength-1.20');
  expect(setupFileStem('…/..')).toBe('setup');
  expect(setupFileStem('Süd, 2×')).toBe('süd-2');
});
