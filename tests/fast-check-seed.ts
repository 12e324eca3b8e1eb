import fc from 'fast-check';

/**
 * Property tests draw the same cases every time, so that a green run stays green; HALFDEEP_TEST_SEED=<whole number> draws
 * others (fast-check prints the seed of a failure).
 */
const seed = Number(process.env['HALFDEEP_TEST_SEED'] ?? 20_261_201);
if (!Number.isInteger(seed))
  throw new Error(`HALFDEEP_TEST_SEED must be a whole number; “${process.env['HALFDEEP_TEST_SEED']}” arrived.`);
fc.configureGlobal({ seed });
