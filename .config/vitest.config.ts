import { defineConfig } from 'vitest/config';

export default defineConfig({
  test: {
    root: new URL('..', import.meta.url).pathname,
    include: ['test/**/*.test.ts'],
    exclude: ['test/bench/**', 'test/fuzz/**'],
    // Far above what any test takes alone: a machine busy with other work is no fault of the code.
    testTimeout: 120_000,
    maxWorkers: 2,
    // Files share the modules they import: reading them anew for each of some hundred files cost more than half of the time.
    isolate: false,
  },
});
