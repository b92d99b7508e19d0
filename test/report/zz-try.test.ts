import { readFileSync, writeFileSync, existsSync } from 'node:fs';
import { createHash } from 'node:crypto';
import { test } from 'vitest';
import { analyse } from '../../src/analyse.ts';
import { layOut } from '../../src/layout/layout.ts';
import { readSvg } from '../../src/svg/read.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { buildReport } from '../../src/report/report.ts';
import { svgPicture } from '../../src/report/svg.ts';
import { terminalSummary } from '../../src/report/terminal.ts';
import { writePdf } from '../../src/report/pdf/document.ts';
import { sampleInput } from './sample.ts';
const ttf = 'node_modules/dejavu-fonts-ttf/ttf/';
const fonts = { regular: new Uint8Array(readFileSync(ttf + 'DejaVuSans.ttf')), bold: new Uint8Array(readFileSync(ttf + 'DejaVuSans-Bold.ttf')) };
const options = { fonts, paper: 'a4', date: new Date('2026-05-04T00:00:00Z') } as const;
test('sample', async () => {
  writeFileSync('/tmp/sample.pdf', await writePdf(buildReport(sampleInput()), options));
});
for (const name of ['culture', 'dilution', 'chamber', 'draft']) {
  const path = `layouts-demo/${name}.svg`;
  if (!existsSync(path)) continue;
  test(name, async () => {
    const text = readFileSync(path, 'utf8');
    const sheet = parseRunSheet(readFileSync(`layouts-demo/${name}.run.yaml`, 'utf8'), `${name}.run.yaml`);
    const layoutSha256 = createHash('sha256').update(text).digest('hex');
    const analysis = await analyse({ layout: layOut(readSvg(text, path), path), sheet, file: `${name}.svg`, layoutSha256 });
    const report = buildReport({ tool: { name: 'rillcheck', version: '0.1.0' }, layoutFile: `${name}.svg`, ...analysis });
    console.log(terminalSummary(report, { colour: false, columns: 100, quiet: false }));
    const t = performance.now();
    writeFileSync(`/tmp/${name}.pdf`, await writePdf(report, options));
    console.log('pdf ms', performance.now() - t);
    for (const quantity of ['pressure', 'shear', 'flow', 'residence'] as const)
      writeFileSync(`/tmp/${name}-${quantity}.svg`, svgPicture(report.cases[0], { quantity }));
  });
}
