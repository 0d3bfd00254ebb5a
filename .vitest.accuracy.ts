import { defineConfig } from 'vitest/config';

/** Tails and tables against R and mpmath: `npm run accuracy`. A sample of it is in `npm test`. */
export default defineConfig({
  test: {
    include: ['test/accuracy/**/*.run.ts'],
    pool: 'forks',
    maxWorkers: 1,
    testTimeout: 60_000,
    hookTimeout: 600_000,
    disableConsoleIntercept: true,
    allowOnly: false,
  },
});
