import * as z from 'zod';
import { runSummarySchema } from './runs';

/** How land is turned into cells on the other grids: the run's own cells divided and gathered, or the coast rasterised anew. */
export const CONVERGENCE_COASTS = ['same', 'anew'] as const;
export const convergenceCoastSchema = z.enum(CONVERGENCE_COASTS, 'The coast is “same” or “anew”.');
export type ConvergenceCoast = z.infer<typeof convergenceCoastSchema>;

/** The two other grids: twice the spacing, half the spacing. */
export const CONVERGENCE_ROLES = ['half', 'twice'] as const;
export type ConvergenceRole = (typeof CONVERGENCE_ROLES)[number];

/** POST /api/runs/:id/convergence */
export const convergenceOrderSchema = z.strictObject({ coast: convergenceCoastSchema });

const convergencePlanSchema = z
  .object({
    nx: z.number().int(),
    ny: z.number().int(),
    stepsPerDay: z.number().int(),
    /** Seconds of one core at the speed of this machine, and bytes on disk. */
    seconds: z.number(),
    diskBytes: z.number(),
    verdict: z.enum(['pass', 'caution', 'refuse']),
    /** What preflight refuses or cautions about, in sentences. */
    remarks: z.array(z.string()),
    /** Lines and moorings that lie elsewhere on this grid, in sentences. */
    notes: z.array(z.string()),
  })
  .meta({ id: 'ConvergencePlan' });
export type ConvergencePlan = z.infer<typeof convergencePlanSchema>;

const convergenceLevelSchema = z
  .object({
    role: z.enum(CONVERGENCE_ROLES),
    /** The run that was queued; null before. */
    run: runSummarySchema.nullable(),
    /** What queueing it would cost; null when it cannot be made. */
    plan: convergencePlanSchema.nullable(),
    /** Why it cannot be made or queued; null when it can. */
    refusal: z.string().nullable(),
  })
  .meta({ id: 'ConvergenceLevel' });
export type ConvergenceLevel = z.infer<typeof convergenceLevelSchema>;

/** An uncertainty in Sv, and as a share of the value that it belongs to (null beside a value of nothing). */
const uncertaintySchema = z.object({ amount: z.number(), share: z.number().nullable() });

const convergenceMeasureSchema = z
  .object({
    /** Number of the section in the setup. */
    section: z.number().int(),
    name: z.string(),
    along: z.enum(['latitude', 'longitude']),
    /** The line of this run, degrees. */
    atDeg: z.number(),
    /** Over the window: the mean, or half the way from the smallest to the largest interval mean. */
    quantity: z.enum(['mean', 'amplitude']),
    unit: z.literal('Sv'),
    /** At half the resolution, of this run, at twice the resolution. */
    half: z.number(),
    own: z.number(),
    twice: z.number(),
    verdict: z.enum(['asymptotic', 'not monotone', 'order out of range', 'equal', 'line moved']),
    sentence: z.string(),
    /** Observed order. */
    order: z.number().nullable(),
    /** Richardson extrapolation, Sv. */
    extrapolated: z.number().nullable(),
    /** Grid convergence index (Roache 1994) of this run and of the run at twice the resolution; Fs = 1.25. */
    gci: z.object({ own: uncertaintySchema, twice: uncertaintySchema }).nullable(),
    /** Near 1 in the asymptotic range. */
    asymptoticRatio: z.number().nullable(),
  })
  .meta({ id: 'ConvergenceMeasure' });
export type ConvergenceMeasure = z.infer<typeof convergenceMeasureSchema>;

const convergenceChoiceSchema = z
  .object({
    coast: convergenceCoastSchema,
    /** Half the resolution, then twice the resolution. */
    levels: z.array(convergenceLevelSchema).length(2),
    /** What stands in the way of the result, or null when it is here. */
    waitingFor: z.string().nullable(),
    result: z
      .object({
        /** The last 365 model days; `wholeYear` false where the run or its intervals do not hold just that. */
        window: z.object({ fromDay: z.number(), toDay: z.number(), wholeYear: z.boolean() }),
        measures: z.array(convergenceMeasureSchema),
        /** What to bear in mind: other core versions, steps not refined alike. */
        remarks: z.array(z.string()),
      })
      .nullable(),
  })
  .meta({ id: 'ConvergenceChoice' });
export type ConvergenceChoice = z.infer<typeof convergenceChoiceSchema>;

/** GET /api/runs/:id/convergence: the same setup at half and at twice the resolution, and what the three say together. */
export const convergenceSchema = z
  .object({
    runId: z.uuid(),
    /** This person may queue the two runs now. */
    canQueue: z.boolean(),
    /** One a way to treat the coast; a basin without land has one. */
    choices: z.array(convergenceChoiceSchema).min(1).max(2),
  })
  .meta({ id: 'Convergence' });
export type Convergence = z.infer<typeof convergenceSchema>;
