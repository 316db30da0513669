import { defineConfig } from 'vitest/config';

// Pictures of 25 to 250 megapixels: a quarter of an hour, 8 GB of disk. Run by hand: npm run soak:large
export default defineConfig({
  test: {
    root: new URL('../../..', import.meta.url).pathname,
    include: ['test/soak/large/*.test.ts'],
    maxWorkers: 1,
    fileParallelism: false,
    pool: 'forks',
  },
});
