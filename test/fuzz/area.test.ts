import { describe, expect, it } from 'vitest';
import { checkedOf } from '../area/checked.ts';
import { checkedFile, drawingFiles } from '../area/drawing-files.ts';
import { randomDrawing } from '../area/drawings.ts';
import { etchedFaults } from '../area/etched.ts';

const DRAWINGS = Number(process.env.RILLCHECK_FUZZ_DRAWINGS ?? 5_000);

describe('one etched area is one network, at length', () => {
  it('holds in every fixture, corpus drawing and demo, however many pieces it has', () => {
    for (const file of drawingFiles()) {
      const checked = checkedFile(file);
      if (checked !== null) expect(etchedFaults(checked.network, checked.report.findings), file).toEqual([]);
    }
  });

  it(`holds in ${DRAWINGS} random drawings`, () => {
    for (let seed = 0; seed < DRAWINGS; seed++) {
      const { svg, sheet } = randomDrawing(seed);
      const { network, report } = checkedOf(svg, sheet);
      expect(etchedFaults(network, report.findings), `seed ${seed}: ${svg}`).toEqual([]);
    }
  });
});
