import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    root: new URL('..', import.meta.url).pathname,
    include: ['test/fuzz/**/*.test.ts'],
    testTimeout: 3_600_000,
    maxWorkers: 2,
  },
});
