// Checks every demo layout into reports/demo/ and ends 0 whatever the verdicts. The date is fixed, so that running it again
// leaves the committed reports as they are.
import { spawnSync } from 'node:child_process';
import { readdirSync, rmSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const env = { SOURCE_DATE_EPOCH: '1767225600', ...process.env };
// a report of an earlier name must not stay beside the new one
rmSync(join(root, 'reports/demo'), { recursive: true, force: true });
for (const file of readdirSync(join(root, 'layouts-demo'))
  .filter((name) => name.endsWith('.svg'))
  .sort()) {
  const args = [
    'dist/bin.js',
    'check',
    `layouts-demo/${file}`,
    '--out',
    'reports/demo',
    '--formats',
    'pdf,svg,csv,json',
  ];
  console.log(`$ rillcheck ${args.slice(1).join(' ')}`);
  const { status } = spawnSync(process.execPath, args, { cwd: root, env, stdio: 'inherit' });
  // 0 is ready and 1 is hold: both are verdicts. Anything else means that the demo is broken.
  if (status !== 0 && status !== 1) process.exit(status ?? 70);
}
console.log('The reports are in reports/demo/.');
