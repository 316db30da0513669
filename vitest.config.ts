import { defineConfig } from 'vitest/config';

// Window tests drive a real browser and painting tests start worker threads; on two cores more than
// two test files at once only wait for one another.
export default defineConfig({
  test: {
    include: ['test/**/*.test.ts', 'test/**/*.test.tsx'],
    exclude: ['test/soak/**', 'node_modules/**'],
    testTimeout: 60_000,
    hookTimeout: 120_000,
    // What a test waits for comes sooner or later; one second is little for a browser beside another test.
    expect: { poll: { timeout: 15_000 } },
    maxWorkers: 2,
    pool: 'forks',
  },
});
