import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    include: ['test/**/*.test.ts'],
    // Processes, because native addons and signals do not mix with threads.
    pool: 'forks',
    // Many tests wait for processes of their own; one worker would leave a second core idle.
    maxWorkers: 2,
    testTimeout: 20_000,
    hookTimeout: 20_000,
    allowOnly: false,
  },
});
