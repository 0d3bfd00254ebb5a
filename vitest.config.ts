import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    include: ['test/**/*.test.ts'],
    // Processes, because native addons and signals do not mix with threads.
    pool: 'forks',
    testTimeout: 20_000,
    hookTimeout: 20_000,
    allowOnly: false,
  },
});
