import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import { verificationAnswerSchema, verificationReportSchema, type VerificationAnswer } from '@halfdeep/contracts';
import { Router } from 'express';
import { NotFoundError } from '../http/errors';
import { route } from '../http/route';

export interface VerificationParts {
  /** Where `npm run verify` writes report.json and report.html. */
  folder: string;
  /** Version of the core that runs here. */
  coreVersion: string;
}

const NONE = 'No verification report came with this installation; npm run verify writes one.';

/** /verification: the proof of the core, made by the tests and shipped with the product. */
export function verificationRoutes({ folder, coreVersion }: VerificationParts): Router {
  const router = Router();
  route(
    router,
    {
      method: 'get',
      path: '/verification',
      action: 'verification.read',
      summary: 'The verification report of the numerical core, beside the version that runs here.',
      answer: verificationAnswerSchema,
    },
    async () => ({ coreVersion, ...(await readReport(folder)) }),
  );
  route(
    router,
    {
      method: 'get',
      path: '/verification/report',
      action: 'verification.read',
      summary: 'The same report as a page of its own, to read and print.',
      media: 'text/html',
    },
    async ({ res }) => {
      const page = await readOr(join(folder, 'report.html'));
      if (page === null) throw new NotFoundError(NONE);
      res.type('html').send(page);
    },
  );
  return router;
}

/** The report as it was written, or why there is none. */
async function readReport(folder: string): Promise<Pick<VerificationAnswer, 'report' | 'why'>> {
  const text = await readOr(join(folder, 'report.json'));
  if (text === null) return { report: null, why: NONE };
  const parsed = verificationReportSchema.safeParse(jsonOf(text));
  if (parsed.success) return { report: parsed.data, why: '' };
  return {
    report: null,
    why: 'The verification report of this installation cannot be read: it was damaged, or written by another version. npm run verify writes it anew.',
  };
}

/** The text of a file; null when there is none. */
async function readOr(path: string): Promise<string | null> {
  try {
    return await readFile(path, 'utf8');
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw error;
  }
}

/** What a text says, undefined when it is no JSON. */
function jsonOf(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch (error) {
    if (error instanceof SyntaxError) return undefined;
    throw error;
  }
}
