import { LIMITS, VARIABLES } from '@halfdeep/ocean';
import { type Response, Router } from 'express';
import * as z from 'zod';
import { route } from '../http/route';
import { type RunService } from '../runs/run-service';
import { csvRows } from './csv';
import { encodeSlice } from './encode';
import { type Slice, type SliceService } from './slice-service';

const runId = z.object({ id: z.uuid('A run is named by its id, a UUID.') });
const variable = z.enum(VARIABLES, `A variable is one of ${VARIABLES.join(', ')}.`);
const record = z
  .string()
  .regex(/^(latest|\d{1,9})$/, 'A record is a whole number from 0, or “latest”.')
  .transform((text) => (text === 'latest' ? text : Number(text)));
const format = z.enum(['binary', 'csv']).default('binary');
/** What a query string holds for an absent number is no number: an empty text must not become 0. */
const number = (name: string, min: number, max: number) =>
  z.preprocess(
    (text) => (typeof text === 'string' && text.trim() === '' ? NaN : text),
    z.coerce
      .number(`${name} must be a number.`)
      .min(min, `${name} must be between ${min} and ${max}.`)
      .max(max, `${name} must be between ${min} and ${max}.`),
  );
const days = {
  from: number('from', 0, 1e6).optional(),
  to: number('to', 0, 1e6).optional(),
};
const { longitude, latitude } = LIMITS;
const hovmollerQuery = z
  .object({
    variable,
    latitude: number('latitude', latitude.min, latitude.max).optional(),
    longitude: number('longitude', longitude.min, longitude.max).optional(),
    ...days,
    format,
  })
  .refine((query) => (query.latitude === undefined) !== (query.longitude === undefined), {
    path: ['latitude'],
    message: 'A space-time slice lies along one line: give either latitude or longitude.',
  });

const SERIES = ['sections', 'moorings', 'budget'] as const;
const MEDIA = 'application/octet-stream';

/** /runs/:id/frames, /hovmoller and /series: results as binary slices, or as CSV with ?format=csv. */
export function sliceRoutes({ runs, slices }: { runs: RunService; slices: SliceService }): Router {
  const router = Router();
  const subject = async ({ params }: { params: z.infer<typeof runId> }) => {
    const run = await runs.find(params.id);
    return { ownerId: run.ownerId, state: run.state, noun: 'run', run };
  };
  route(
    router,
    {
      method: 'get',
      path: '/runs/:id/frames/:record',
      action: 'run.read',
      summary: 'A map of one moment, [latitude, longitude]; record “latest” is the newest',
      params: runId.extend({
        record,
      }),
      query: z.object({ variable, format }),
      subject,
      media: MEDIA,
    },
    async ({ subject: { run }, params, query, res }) =>
      send(res, query.format, run.label, await slices.map(run, query.variable, params.record)),
  );
  route(
    router,
    {
      method: 'get',
      path: '/runs/:id/hovmoller',
      action: 'run.read',
      summary: 'A space-time slice along the nearest row or column, [time, place]; the head names it',
      params: runId,
      query: hovmollerQuery,
      subject,
      media: MEDIA,
    },
    async ({ subject: { run }, query, res }) => {
      const line =
        query.latitude !== undefined
          ? ({ along: 'latitude', askedDeg: query.latitude } as const)
          : ({ along: 'longitude', askedDeg: query.longitude ?? NaN } as const);
      await send(res, query.format, run.label, await slices.hovmoller(run, query.variable, line, query));
    },
  );
  route(
    router,
    {
      method: 'get',
      path: '/runs/:id/series/:stream',
      action: 'run.read',
      summary: 'Records of sections, moorings or the budget, [time, column], float64',
      params: runId.extend({ stream: z.enum(SERIES, `A stream of series is one of ${SERIES.join(', ')}.`) }),
      query: z.object({ ...days, format }),
      subject,
      media: MEDIA,
    },
    async ({ subject: { run }, params, query, res }) =>
      send(res, query.format, run.label, await slices.series(run, params.stream, query)),
  );
  return router;
}

/** Lines of text that go out at once. */
const LINES_A_WRITE = 2000;

async function send(res: Response, as: 'binary' | 'csv', label: string, { head, data }: Slice): Promise<void> {
  if (as === 'binary') {
    res.type(MEDIA).send(encodeSlice(head, data));
    return;
  }
  const name = [head.variable ?? head.name, label].join('-').replaceAll(/[^\p{L}\p{N}-]+/gu, '-');
  res.attachment(`${name}.csv`).type('text/csv; charset=utf-8');
  const about = [`Halfdeep, run “${label}” (${head.runId}): ${head.name}${head.unit ? `, ${head.unit}` : ''}`];
  let lines: string[] = [];
  for (const line of csvRows(head, data, about)) {
    if (lines.push(line) < LINES_A_WRITE) continue;
    if (res.destroyed) return; // nobody reads on
    if (!res.write(`${lines.join('\r\n')}\r\n`)) await drained(res);
    lines = [];
  }
  res.end(lines.length > 0 ? `${lines.join('\r\n')}\r\n` : '');
}

/** Resolves when the reader has taken what was written, or has gone. */
function drained(res: Response): Promise<void> {
  return new Promise((resolve) => {
    const done = () => {
      res.off('drain', done).off('close', done);
      resolve();
    };
    res.once('drain', done).once('close', done);
  });
}
