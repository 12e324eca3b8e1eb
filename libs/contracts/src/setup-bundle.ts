import { strFromU8, strToU8, unzipSync, Zip, ZipPassThrough } from 'fflate';
import type { Setup } from '@halfdeep/ocean';
import { CAUTION } from './caution';

/** Ending of the file that carries a setup together with the state it starts from: an ordinary zip. */
export const BUNDLE_ENDING = '.halfdeep.zip';
export const BUNDLE_MEDIA = 'application/zip';
const ENTRIES = { setup: 'setup.json', state: 'start-state.bin', readme: 'README.txt' } as const;
/** Nine float64 arrays of the largest grid, and room to spare: what claims to be larger is not unpacked. */
const MOST_BYTES = { [ENTRIES.setup]: 4e6, [ENTRIES.state]: 400e6 };
/** The same content gives the same bytes, whenever it is written; the earliest day that a zip can name. */
const DATE = new Date(1980, 0, 1);
const PIECE = 1 << 20;

/** A file that holds no setup, or not all of it: the message says what is wrong and what would be right. */
export class SetupFileError extends Error {
  override readonly name = 'SetupFileError';
}

/** A setup as text for a file: what the form, the API and the headless command read. */
export function setupText(setup: Setup): string {
  return `${JSON.stringify(setup, null, 2)}\n`;
}

/** Stem of a file name from a label: letters and digits of any script, the rest becomes hyphens; “setup” when none is left. */
export function setupFileStem(label: string): string {
  const stem = label
    .toLowerCase()
    .replace(/[^\p{L}\p{N}.]+/gu, '-')
    .replace(/^[-.]+|[-.]+$/g, '');
  return stem || 'setup';
}

/** True for bytes that begin as a zip does. */
export function isZip(bytes: Uint8Array): boolean {
  return bytes.length >= 4 && bytes[0] === 0x50 && bytes[1] === 0x4b && bytes[2] === 3 && bytes[3] === 4;
}

/** What lies in a bundle: the setup as text, and the start state, null when there is none. */
export interface BundleContent {
  text: string;
  state: Uint8Array | null;
}

/** Unpacks a bundle. Throws SetupFileError when the bytes are no zip, damaged, too large, or hold no setup. */
export function readBundle(bytes: Uint8Array): BundleContent {
  let entries: Record<string, Uint8Array>;
  try {
    entries = unzipSync(bytes, {
      filter: ({ name, originalSize }) => {
        const most = (MOST_BYTES as Record<string, number>)[name];
        if (most !== undefined && originalSize > most)
          throw new SetupFileError(`${name} in this bundle has ${originalSize} bytes; at most ${most} are read.`);
        return most !== undefined;
      },
    });
  } catch (error) {
    if (error instanceof SetupFileError) throw error;
    // The library says what is wrong with a zip by errors of its own with a code, and by RangeError where it is cut off.
    throw new SetupFileError(`This bundle cannot be unpacked: ${(error as Error).message}. Export it once more.`);
  }
  const setup = entries[ENTRIES.setup];
  if (!setup)
    throw new SetupFileError(`This zip holds no ${ENTRIES.setup}: a bundle has ${Object.values(ENTRIES).join(', ')}.`);
  return { text: strFromU8(setup), state: entries[ENTRIES.state] ?? null };
}

/**
 * Writes a bundle piece by piece, so that a large state need not lie in memory twice. `state`: the bytes of the state
 * that the setup starts from, in pieces. `write` is awaited: a slow reader slows the writing down.
 */
export async function writeBundle(
  { label, setup }: { label: string; setup: Setup },
  state: AsyncIterable<Uint8Array> | Iterable<Uint8Array>,
  write: (piece: Uint8Array) => Promise<void> | void,
): Promise<void> {
  let pieces: Uint8Array[] = [];
  let failed: Error | null = null;
  const zip = new Zip((error, piece) => {
    if (error) failed ??= error;
    else pieces.push(piece);
  });
  const flush = async () => {
    if (failed) throw failed;
    const ready = pieces;
    pieces = [];
    for (const piece of ready) await write(piece);
  };
  // A state is nearly incompressible, and the rest is small: everything is stored as it is.
  const begin = (name: string) => {
    const entry = new ZipPassThrough(name);
    entry.mtime = DATE;
    zip.add(entry);
    return entry;
  };
  begin(ENTRIES.readme).push(strToU8(readme(label, setup)), true);
  begin(ENTRIES.setup).push(strToU8(setupText(setup)), true);
  await flush();
  const entry = begin(ENTRIES.state);
  for await (const piece of state)
    for (let from = 0; from < piece.length; from += PIECE) {
      entry.push(piece.subarray(from, from + PIECE));
      await flush();
    }
  entry.push(new Uint8Array(0), true);
  zip.end();
  await flush();
}

function readme(label: string, { start }: Setup): string {
  const named = start.kind === 'state' ? `, SHA-256 ${start.stateSha256}` : '';
  return [
    `Halfdeep: the setup “${label}” together with the state it starts from.`,
    '',
    `${ENTRIES.setup}       the setup: basin, layer, wind, start, friction, numerics, length, output`,
    `${ENTRIES.state}  the last state of the run that it goes on from${named}`,
    '',
    'Compute it without server or database, in a copy of Halfdeep:',
    `  npm run integrate -- FILE${BUNDLE_ENDING} out.nc`,
    'The same setup gives the same fingerprint as in the product, to the last bit.',
    '',
    CAUTION,
    '',
  ].join('\n');
}
