import { defineConfig } from 'vitest/config';

// Long tests, run by hand: npx vitest run --config test/soak/vitest.config.ts
export default defineConfig({
  test: {
    root: new URL('../..', import.meta.url).pathname,
    include: ['test/soak/*.test.ts'],
    maxWorkers: 1,
    pool: 'forks',
  },
});
