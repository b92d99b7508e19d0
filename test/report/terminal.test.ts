import { describe, expect, test } from 'vitest';
import { displayWidth } from '../../src/report/plain-text.ts';
import { terminalSummary } from '../../src/report/terminal.ts';
import { sampleCasesReport, sampleReport } from './sample.ts';

const plain = { colour: false, columns: 100, quiet: false };

describe('the terminal summary', () => {
  test('reads at a glance', () => {
    expect(terminalSummary(sampleReport(), plain)).toMatchInlineSnapshot(`
      "sample.svg  hold: 1 blocker, 1 caution, 1 accepted, 1 rule not run

      port   condition  in the chip  at the supply  flow into chip  in tubing
      feed   pressure    0.8402 kPa          1 kPa    70.93 µL/min    49.82 s
      waste  open             0 kPa                  -70.93 µL/min
      spare  sealed      0.4201 kPa                       0 µL/min

      reach             flow  floor shear       peak  residence  window
      lane-1:1   35.2 µL/min    0.3464 Pa  0.3973 Pa    2.966 s  shear 0.05 to 0.5 Pa over 80 %
      lane-1:2   35.2 µL/min    0.3464 Pa  0.3973 Pa    2.966 s  shear 0.05 to 0.5 Pa over 80 %
      lane-2    35.73 µL/min    0.3516 Pa  0.4033 Pa    5.757 s  shear 0.05 to 0.5 Pa over 80 %

      1 blocker thin-wall: 31 µm of material between lane-1 and lane-2 over 8 mm; min_wall is 40 µm (30,
        6 mm)
        → move lane-1 0.009 mm away from lane-2
      2 caution open-end: the end of stub meets no port and no channel (38, 3 mm)
        → carry it on to a port, or name it in ignore
      3 accepted edge-margin: waste lies 1.5 mm from the chip edge; edge_margin is 2 mm (70, 13 mm)
        → the holder has a relief there (AM, 2026-05-04)
      4 note default-depth: layer lanes took the depth of the sheet, 120 µm

      not run: port-grid (no port_grid is given)
      "
    `);
  });

  test('quiet is the verdict with its counts alone', () => {
    expect(terminalSummary(sampleReport(), { ...plain, quiet: true })).toBe(
      'sample.svg  hold: 1 blocker, 1 caution, 1 accepted, 1 rule not run\n',
    );
  });

  test('shows each case and then the verdict over all', () => {
    const report = sampleCasesReport();
    expect(terminalSummary(report, { ...plain, quiet: true })).toBe(
      'sample.svg, case seed  ready: 0 blockers, 0 cautions, 0 accepted, 1 rule not run\n' +
        'sample.svg, case culture  hold: 1 blocker, 1 caution, 1 accepted, 1 rule not run\n' +
        'all 2 cases: hold\n',
    );
  });

  test.each([40, 60, 100, 240])('stays within the terminal and 100 columns at %i columns', (columns) => {
    const long = { lower: '長い名前のチャネル'.repeat(12), feed: '🧪'.repeat(60) };
    for (const line of terminalSummary(sampleReport({ names: long }), {
      ...plain,
      columns,
    }).split('\n')) {
      expect(displayWidth(line)).toBeLessThanOrEqual(Math.min(100, columns));
    }
  });

  test('says in words all that it says in colour', () => {
    const report = sampleReport();
    const coloured = terminalSummary(report, { ...plain, colour: true });
    expect(coloured).toContain('\u001b[');
    expect(coloured.replace(/\u001b\[\d+m/g, '')).toBe(terminalSummary(report, plain));
  });

  test('lets no control character or bidi mark of a name through', () => {
    const names = { lower: 'a\u001b[31m\u202eb\nc\u0007', feed: '\u2066x\u009b2J' };
    expect(terminalSummary(sampleReport({ names }), plain)).not.toMatch(
      /[\u0000-\u0009\u000b-\u001f\u007f-\u009f\u202a-\u202e\u2066-\u2069]/,
    );
  });

  test('uses the units that the run sheet asks for', () => {
    const shown = terminalSummary(
      sampleReport({ show: { pressure: 'mbar', wall_shear: 'dyn/cm^2', flow: 'uL/h' } }),
      plain,
    );
    expect(shown).toContain('mbar');
    expect(shown).toContain('dyn/cm²');
    expect(shown).toContain('µL/h');
  });
});
