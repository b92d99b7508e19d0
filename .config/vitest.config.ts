import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    root: new URL('..', import.meta.url).pathname,
    include: ['test/**/*.test.ts'],
    exclude: ['test/bench/**', 'test/fuzz/**'],
    testTimeout: 30_000,
    maxWorkers: 2,
    // Files share the modules they import: reading them anew for each of some hundred files cost more than half of the time.
    isolate: false,
  },
});
