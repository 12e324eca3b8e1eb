import * as z from 'zod';
import { isPlain } from './one-line';
import { personRefSchema } from './people';
import { queueSummarySchema, runSummarySchema } from './runs';
import { setupSchema } from './setup-schema';

const question = z
  .string()
  .trim()
  .min(8, 'A question has at least 8 characters.')
  .max(300, 'A question has at most 300 characters.')
  .refine(isPlain, 'A question has no control characters.');
const notes = z
  .string()
  .max(20_000, 'Notes have at most 20 000 characters.')
  .refine(isPlain, 'Notes have no control characters.');
export const newExperimentSchema = z.strictObject({ question, notes: notes.default('') });
export const experimentPatchSchema = z.strictObject({ question: question.optional(), notes: notes.optional() });

export const experimentSummarySchema = z
  .object({
    id: z.uuid(),
    question: z.string(),
    owner: personRefSchema,
    createdAt: z.iso.datetime(),
    /** When anything in it moved last, and what: "Strong finished". */
    movedAt: z.iso.datetime(),
    moved: z.string(),
    /** Of the control run's setup, in a few words each; null before the first run. */
    physics: z.object({ basin: z.string(), layer: z.string(), season: z.string() }).nullable(),
    runs: z.object({
      queued: z.number().int(),
      running: z.number().int(),
      finished: z.number().int(),
      stopped: z.number().int(),
      failed: z.number().int(),
    }),
    can: z.object({ edit: z.boolean(), queueRuns: z.boolean() }),
  })
  .meta({ id: 'ExperimentSummary' });
export type ExperimentSummary = z.infer<typeof experimentSummarySchema>;

export const experimentSchema = experimentSummarySchema
  .extend({ notes: z.string(), runList: z.array(runSummarySchema) })
  .meta({ id: 'Experiment' });
export type Experiment = z.infer<typeof experimentSchema>;

export const presetSchema = z
  .object({ id: z.string(), name: z.string(), about: z.string(), setup: setupSchema })
  .meta({ id: 'Preset' });
export type Preset = z.infer<typeof presetSchema>;

/** GET /api/desk: what moved since this person's last visit. */
export const deskSchema = z
  .object({
    since: z.iso.datetime().nullable(),
    queue: queueSummarySchema,
    running: z.array(runSummarySchema),
    waiting: z.array(runSummarySchema),
    /** Finished, stopped and failed since then; when nothing moved, the last few with `recent` true. */
    ended: z.array(runSummarySchema),
    recent: z.boolean(),
    disk: z.object({ usedBytes: z.number(), quotaBytes: z.number(), freeBytes: z.number() }),
  })
  .meta({ id: 'Desk' });
export type Desk = z.infer<typeof deskSchema>;

export const healthSchema = z
  .object({
    ok: z.boolean(),
    version: z.string(),
    coreVersion: z.string(),
    schema: z.string(),
    uptimeSeconds: z.number(),
  })
  .meta({ id: 'Health' });
export type Health = z.infer<typeof healthSchema>;
