import { defineConfig } from 'vitest/config';

/** The full calibration: `npm run simulate`. A small part of it is in `npm test`. */
export default defineConfig({
  test: {
    include: ['test/simulation/**/*.run.ts'],
    pool: 'forks',
    maxWorkers: 2,
    testTimeout: 3_600_000,
    disableConsoleIntercept: true,
    allowOnly: false,
  },
});
