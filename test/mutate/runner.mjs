// Keeps one vitest at work in the copy that it lies in, so that each mutation pays only for the modules it changes.
// Asked by its parent with { files, changed, collect }; answers { failed, seconds: file → seconds }.
import { join } from 'node:path';
import { createVitest } from 'vitest/node';

const root = join(import.meta.dirname, '../..');
const [mode] = process.argv.slice(2);
const isMap = mode === 'map';

const vitest = await createVitest(
  'test',
  {
    config: false,
    root,
    watch: false,
    isolate: false,
    pool: 'threads',
    maxWorkers: 1,
    fileParallelism: false,
    include: ['test/**/*.test.ts'],
    testTimeout: 120_000,
    hookTimeout: 120_000,
    bail: isMap ? 0 : 1,
    reporters: [{}],
    silent: true,
    setupFiles: isMap ? [join(root, 'test/mutate/functions-run.mjs')] : [],
  },
  { cacheDir: join(root, '.cache'), logLevel: 'silent' },
);
const project = vitest.getRootProject();

process.on('message', async ({ files, changed }) => {
  for (const file of changed) vitest.invalidateFile(join(root, file));
  const specifications = files.map((file) => project.createSpecification(join(root, file)));
  const { testModules, unhandledErrors } = await vitest.runTestSpecifications(specifications);
  const failed = testModules.filter((module) => !module.ok()).map((module) => module.relativeModuleId);
  const seconds = Object.fromEntries(
    testModules.map((module) => {
      const { duration, collectDuration } = module.diagnostic();
      return [module.relativeModuleId, (duration + collectDuration) / 1000];
    }),
  );
  process.send({ failed, seconds, hasErrors: unhandledErrors.length > 0 });
});
// Whoever asked is gone.
process.on('disconnect', () => process.exit());
process.send('ready');
