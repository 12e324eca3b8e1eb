import * as z from 'zod';
import { oneLine } from './one-line';
import { personRefSchema } from './people';
import { setupSchema, startStateSchema } from './setup-schema';

export const RUN_STATES = ['queued', 'running', 'finished', 'stopped', 'failed'] as const;
export const runStateSchema = z.enum(RUN_STATES);
export type RunState = z.infer<typeof runStateSchema>;

/** Why a run went back to the queue. */
export const QUEUED_REASONS = ['cap lowered', 'worker died', 'disk full', 'server stopped', 'resumed'] as const;
export const queuedReasonSchema = z.enum(QUEUED_REASONS);
export type QueuedReason = z.infer<typeof queuedReasonSchema>;

export const progressSchema = z
  .object({
    /** Absolute completed steps and the step at which the run ends. */
    step: z.number().int(),
    totalSteps: z.number().int(),
    /** Absolute first step: 0, or the start state's step for a run that extends another. */
    startStep: z.number().int(),
    /** Model day reached and model day of the end. */
    day: z.number(),
    totalDays: z.number(),
    /** Wet-and-dry cells times steps a second, over the last seconds; null when not running. */
    cellStepsPerSecond: z.number().nullable(),
    secondsLeft: z.number().nullable(),
    /** Number of records so far, by stream. */
    records: z.object({
      frames: z.number().int(),
      sections: z.number().int(),
      moorings: z.number().int(),
      budget: z.number().int(),
    }),
    /** Step of the last checkpoint that has landed; null before the first. */
    savedStep: z.number().int().nullable(),
    /** What the running model is watched for and came near to, in sentences; runs from before it was kept have none. */
    cautions: z.array(z.string()).default([]),
  })
  .meta({ id: 'Progress' });
export type Progress = z.infer<typeof progressSchema>;

export const failureSchema = z
  .object({
    cause: z.enum(['non-finite', 'step limit', 'outcropping', 'worker died', 'disk full', 'result lost', 'internal']),
    message: z.string(),
    step: z.number().int().nullable(),
    day: z.number().nullable(),
    place: z.string().nullable(),
    lastGoodStep: z.number().int().nullable(),
  })
  .meta({ id: 'RunFailure' });
export type RunFailure = z.infer<typeof failureSchema>;

export const setupChangeSchema = z
  .object({ pointer: z.string(), label: z.string(), from: z.string(), to: z.string(), unit: z.string() })
  .meta({ id: 'SetupChange' });

export const fingerprintSchema = z
  .object({ sha256: z.string(), coreVersion: z.string(), shape: z.array(z.number().int()).length(6) })
  .meta({ id: 'Fingerprint' });

export const runSummarySchema = z
  .object({
    id: z.uuid(),
    experimentId: z.uuid(),
    question: z.string(),
    label: z.string(),
    state: runStateSchema,
    queuedReason: queuedReasonSchema.nullable(),
    /** 1 = next; null when it does not wait. */
    queuePosition: z.number().int().nullable(),
    failure: failureSchema.nullable(),
    parentRunId: z.uuid().nullable(),
    parentLabel: z.string().nullable(),
    /** How it came from its parent: a sensitivity run changes the setup, an extension goes on from the last state. */
    descent: z.enum(['control', 'sensitivity', 'extension']),
    changes: z.array(setupChangeSchema),
    owner: personRefSchema,
    createdAt: z.iso.datetime(),
    startedAt: z.iso.datetime().nullable(),
    endedAt: z.iso.datetime().nullable(),
    progress: progressSchema,
    fingerprint: fingerprintSchema.nullable(),
    /** Facts a list shows: extents in degrees, cells. */
    grid: z.object({ nx: z.number().int(), ny: z.number().int() }),
    diskBytes: z.number().nullable(),
    /** What this person may do with it now. */
    can: z.object({
      stop: z.boolean(),
      resume: z.boolean(),
      extend: z.boolean(),
      /** Queue the same setup once more, to see whether the fingerprint comes out the same. */
      repeat: z.boolean(),
      derive: z.boolean(),
      delete: z.boolean(),
    }),
  })
  .meta({ id: 'RunSummary' });
export type RunSummary = z.infer<typeof runSummarySchema>;

export const runSchema = runSummarySchema
  .extend({
    setup: setupSchema,
    preflight: z.unknown(),
    /** The start that goes on from this run's last state, ready to be written into a setup; null until it has finished. */
    lastState: startStateSchema.nullable().default(null),
  })
  .meta({ id: 'Run' });
/** `preflight` is the answer of libs/ocean at the time of queueing. */
export type Run = RunSummary & {
  setup: z.infer<typeof setupSchema>;
  preflight: import('@halfdeep/ocean').Preflight;
  lastState: z.infer<typeof startStateSchema> | null;
};

const label = oneLine(80, 'A label').min(1, 'A run needs a label.');
export const newRunSchema = z.strictObject({
  label,
  setup: setupSchema,
  parentRunId: z.uuid().nullish(),
});
/** POST /api/runs/:id/extend: by so many days beyond the end of the finished run. */
export const extendRunSchema = z.strictObject({ label, days: z.number().min(0.25).max(73_000).multipleOf(0.25) });

export const STREAMS = ['frames', 'sections', 'moorings', 'budget'] as const;
export type Stream = (typeof STREAMS)[number];

/**
 * Head of a binary slice. On the wire: uint32 LE length of the head, the head as JSON padded with spaces so that the
 * data start on a multiple of 8, then the data, little-endian, row-major; land is NaN.
 */
export const sliceHeadSchema = z
  .object({
    runId: z.string(),
    name: z.string(),
    variable: z.string().nullable(),
    unit: z.string().nullable(),
    /** Maps: model day of the frame. */
    day: z.number().optional(),
    dtype: z.enum(['float32', 'float64']),
    shape: z.array(z.number().int()),
    /** One axis a dimension; values are degrees, model days or column numbers. */
    axes: z.array(z.object({ name: z.string(), unit: z.string(), values: z.array(z.number()) })),
    /** Space-time slices: the row or column that was read, and what was asked. */
    line: z
      .object({
        along: z.enum(['latitude', 'longitude']),
        askedDeg: z.number(),
        atDeg: z.number(),
        index: z.number().int(),
      })
      .nullable(),
    /** Series: what each column is. */
    columns: z
      .array(
        z.object({
          name: z.string(),
          label: z.string(),
          unit: z.string(),
          kind: z.enum(['instant', 'mean', 'integral']),
        }),
      )
      .nullable(),
    /** First record of the slice and the number of records the stream holds now. */
    from: z.number().int(),
    available: z.number().int(),
  })
  .meta({ id: 'SliceHead' });
export type SliceHead = z.infer<typeof sliceHeadSchema>;

/** Events of GET /api/events. The SSE event name is `type`. */
export type HalfdeepEvent =
  | { type: 'state'; run: RunSummary }
  | { type: 'progress'; runId: string; progress: Progress }
  | { type: 'records'; runId: string; records: Progress['records'] }
  | { type: 'queue'; queue: QueueSummary };

export const queueSummarySchema = z
  .object({
    cap: z.number().int(),
    paused: z.boolean(),
    running: z.number().int(),
    waiting: z.number().int(),
  })
  .meta({ id: 'QueueSummary' });
export type QueueSummary = z.infer<typeof queueSummarySchema>;

export const adminQueueSchema = z
  .object({
    cap: z.number().int(),
    maxCap: z.number().int(),
    paused: z.boolean(),
    running: z.array(runSummarySchema),
    waiting: z.array(runSummarySchema),
  })
  .meta({ id: 'AdminQueue' });
export type AdminQueue = z.infer<typeof adminQueueSchema>;
export const adminQueuePatchSchema = z.strictObject({
  cap: z.number().int().min(1).max(64).optional(),
  /** When the cap falls below what runs: let running work end, or checkpoint and requeue the youngest at once. */
  whenLowered: z.enum(['drain', 'checkpoint']).optional(),
  paused: z.boolean().optional(),
  /** Ids of waiting runs in the order wanted; ids left out keep their order behind them. */
  order: z.array(z.uuid()).optional(),
});

export const workerInfoSchema = z
  .object({
    pid: z.number().int(),
    run: z.object({ id: z.uuid(), label: z.string(), question: z.string() }),
    startedAt: z.iso.datetime(),
    lastHeardAt: z.iso.datetime(),
    residentBytes: z.number().nullable(),
    cpuSeconds: z.number().nullable(),
    cellStepsPerSecond: z.number().nullable(),
    deaths: z.number().int(),
  })
  .meta({ id: 'WorkerInfo' });
export type WorkerInfo = z.infer<typeof workerInfoSchema>;

export const sideBySideSchema = z
  .object({
    a: runSummarySchema,
    b: runSummarySchema,
    changes: z.array(setupChangeSchema),
    /** Null with a reason when the two have no place or time in common. */
    reason: z.string().nullable(),
    /** How B was brought onto A's points: "same grid" or a sentence. */
    regridding: z.string(),
    commonDays: z.object({ from: z.number(), to: z.number(), records: z.number().int() }).nullable(),
    measures: z.array(
      z.object({
        variable: z.string(),
        unit: z.string(),
        /** Over all common cells and days, area-weighted. */
        rmsDifference: z.number().nullable(),
        correlation: z.number().nullable(),
        rmsA: z.number().nullable(),
        rmsB: z.number().nullable(),
      }),
    ),
  })
  .meta({ id: 'SideBySide' });
export type SideBySide = z.infer<typeof sideBySideSchema>;
