import { defineConfig } from 'vitest/config';

const inWorkspace = { resolve: { conditions: ['node', 'import', 'default'] } };

/** The client's own specs run through `ng test`; everything else runs here, by project. */
export default defineConfig({
  ...inWorkspace,
  test: {
    passWithNoTests: false,
    projects: [
      {
        test: {
          name: 'unit',
          environment: 'node',
          include: ['libs/**/*.spec.ts', 'apps/api/**/*.spec.ts', 'worker/**/*.spec.ts'],
          setupFiles: ['tests/fast-check-seed.ts'],
          // Many files at once on few cores: a test is not wrong because it had to wait.
          testTimeout: 30_000,
        },
      },
      {
        test: {
          name: 'verification',
          environment: 'node',
          include: ['tests/verification/**/*.test.ts'],
          testTimeout: 300_000,
        },
      },
      {
        test: {
          name: 'api',
          environment: 'node',
          include: ['tests/api/**/*.test.ts'],
          testTimeout: 60_000,
          hookTimeout: 60_000,
        },
      },
      {
        test: {
          name: 'faults',
          environment: 'node',
          include: ['tests/faults/**/*.test.ts'],
          testTimeout: 180_000,
          hookTimeout: 60_000,
          fileParallelism: false,
        },
      },
    ],
  },
});
