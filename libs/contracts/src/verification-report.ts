import * as z from 'zod';

const plateAxisSchema = z.object({
  /** What is drawn, with its unit behind a comma: “spacing, km”. */
  label: z.string(),
  /** Logarithmic; every value is then positive. */
  log: z.boolean(),
});

const plateSeriesSchema = z.object({
  name: z.string(),
  /** found: what the core made. expected: the independent answer. slope: a line of the expected order. */
  role: z.enum(['found', 'expected', 'slope']),
  /** [x, y] in order of x. */
  points: z.array(z.tuple([z.number(), z.number()])),
});

/** One small figure of the verification report: errors against spacing, or a profile found and expected. */
export const verificationPlateSchema = z
  .object({
    /** What is drawn, in words: the text alternative too. */
    caption: z.string(),
    x: plateAxisSchema,
    y: plateAxisSchema,
    series: z.array(plateSeriesSchema),
  })
  .meta({ id: 'VerificationPlate' });
export type VerificationPlate = z.infer<typeof verificationPlateSchema>;

const orderRangeSchema = z.tuple([z.number(), z.number()]);

/** One number of the proof, computed by a test of its own. */
export const verificationCheckSchema = z
  .object({
    /** Name within its case. */
    id: z.string(),
    /** What is compared, with its unit behind a comma where it has one. */
    quantity: z.string(),
    expected: z.number(),
    /** null: not a finite number. */
    obtained: z.number().nullable(),
    /** Size of the miss as `errorKind` says. */
    error: z.number().nullable(),
    /** relative: |obtained/expected − 1|. absolute: |obtained − expected|. L2: ‖found − exact‖/‖exact‖ of a whole field, obtained itself. bound: how much `obtained` passes the bound `expected`, 0 when it does not. */
    errorKind: z.enum(['relative', 'absolute', 'L2', 'bound']),
    tolerance: z.number(),
    /** Observed order of convergence on the finest pair of grids, where the check has one, and what it may be. */
    order: z.number().nullable(),
    orderRange: orderRangeSchema.nullable(),
    resolution: z.string(),
    passed: z.boolean(),
    plate: verificationPlateSchema.nullable(),
  })
  .meta({ id: 'VerificationCheck' });
export type VerificationCheck = z.infer<typeof verificationCheckSchema>;

/** One case of the proof: its leading number, and all its checks (the leading one first). */
export const verificationCaseSchema = z
  .object({
    id: z.string(),
    title: z.string(),
    /** Published source, “common practice”, or “derived for this project”. */
    source: z.string(),
    /** What is set up and why, in a sentence or two. */
    about: z.string(),
    quantity: z.string(),
    /** Of the leading check; null when no check of the case was reached. */
    expected: z.number().nullable(),
    obtained: z.number().nullable(),
    error: z.number().nullable(),
    tolerance: z.number().nullable(),
    order: z.number().nullable(),
    resolution: z.string(),
    /** All checks passed, and there are some. */
    passed: z.boolean(),
    checks: z.array(verificationCheckSchema),
  })
  .meta({ id: 'VerificationCase' });
export type VerificationCase = z.infer<typeof verificationCaseSchema>;

/** What `npm run verify` writes and Help shows. */
export const verificationReportSchema = z
  .object({
    /** Version of the numerical core that was verified. */
    coreVersion: z.string(),
    /** JavaScript engine, whose elementary functions the tests use: “V8 11.3”. */
    engine: z.string(),
    /** When it was made; null where that is not written. */
    madeAt: z.iso.datetime().nullable().default(null),
    counts: z.object({
      cases: z.number().int(),
      passed: z.number().int(),
      failed: z.number().int(),
      checks: z.number().int(),
      checksFailed: z.number().int(),
    }),
    cases: z.array(verificationCaseSchema),
    /** Tests that failed, checks or not, by name. */
    failures: z.array(z.string()),
  })
  .meta({ id: 'VerificationReport' });
export type VerificationReport = z.infer<typeof verificationReportSchema>;

/** The report that ships with the product, beside the core that runs. */
export const verificationAnswerSchema = z
  .object({
    /** Version of the core that runs here; runs of another one are not what was verified. */
    coreVersion: z.string(),
    /** null: there is none, or it cannot be read. */
    report: verificationReportSchema.nullable(),
    /** Why there is no report, in a sentence; empty when there is one. */
    why: z.string(),
  })
  .meta({ id: 'VerificationAnswer' });
export type VerificationAnswer = z.infer<typeof verificationAnswerSchema>;
