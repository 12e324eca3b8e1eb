import { availableParallelism } from 'node:os';
import { parseArgs } from 'node:util';
import { Refusal } from './refusal';

const KERNELS = ['auto', 'reference', 'simd'] as const;
export type KernelChoice = (typeof KERNELS)[number];

export interface IntegrateArguments {
  /** As typed: relative to the folder in which the command was given. */
  setupFile: string;
  outputFile: string;
  /** The last line of standard output is one JSON object. */
  json: boolean;
  threads: number;
  kernel: KernelChoice;
}

export const USAGE = `npm run integrate -- SETUP OUT.nc [--json] [--threads N] [--kernel auto|reference|simd]

Integrates a setup without server or database and writes CF netCDF-4.

  SETUP      a setup exported from the form or from a run: setup.json, or a bundle (.halfdeep.zip)
             that carries the state which the setup starts from
  OUT.nc     the file to write; it appears under this name when it is whole
  --json     end with one JSON object: budgets, transports, fingerprint, core version, setup hash
  --threads  rows of the grid over so many threads, 1 to ${availableParallelism()} here (default 1); the result is the same
  --kernel   which stepper; all give the same bits (default auto: simd where there is one)

Exit codes: 0 done, 1 the integration failed, 2 bad input, 130 stopped by Ctrl-C.`;

/** Reads the command line; null when help was asked for. Throws Refusal for what it does not know. */
export function readArguments(argv: readonly string[]): IntegrateArguments | null {
  const { values, positionals } = parsed(argv);
  if (values.help) return null;
  const [setupFile, outputFile, ...more] = positionals;
  if (setupFile === undefined || outputFile === undefined || more.length > 0)
    throw new Refusal(`Two files are needed, a setup and an output; ${positionals.length} arrived.\n\n${USAGE}`);
  const most = availableParallelism();
  const threads = Number(values.threads ?? '1');
  if (!(Number.isInteger(threads) && threads >= 1 && threads <= most))
    throw new Refusal(`--threads must be a whole number from 1 to ${most} on this machine; ${values.threads} arrived.`);
  const kernel = KERNELS.find((name) => name === (values.kernel ?? 'auto'));
  if (!kernel) throw new Refusal(`--kernel must be one of ${KERNELS.join(', ')}; ${values.kernel} arrived.`);
  return { setupFile, outputFile, json: values.json ?? false, threads, kernel };
}

function parsed(argv: readonly string[]) {
  try {
    return parseArgs({
      args: [...argv],
      allowPositionals: true,
      options: {
        json: { type: 'boolean' },
        threads: { type: 'string' },
        kernel: { type: 'string' },
        help: { type: 'boolean', short: 'h' },
      },
    });
  } catch (error) {
    // Node names unknown options and missing values by codes of this kind.
    const { code, message } = error as NodeJS.ErrnoException;
    if (!code?.startsWith('ERR_PARSE_ARGS')) throw error;
    throw new Refusal(`${message}\n\n${USAGE}`);
  }
}
