import { describe, expect, it } from 'vitest';
import { checkedOf } from './checked.ts';
import { checkedFile, drawingFiles } from './drawing-files.ts';
import { randomDrawing } from './drawings.ts';
import { etchedFaults } from './etched.ts';

/** Drawings with more straight pieces than this, demos excepted, are left to `npm run fuzz`: polygons of curves take their time. */
const MOST_PIECES = 30;

/** So many drawings from the seeds here; `npm run fuzz` goes on from there. */
const SEEDS = 40;

describe('one etched area is one network', () => {
  it('holds in every fixture and corpus drawing that is not long, and in the demos', () => {
    let count = 0;
    for (const file of drawingFiles()) {
      const checked = checkedFile(file);
      if (checked === null) continue;
      if (checked.network.trace.near.pieces.count > MOST_PIECES && !file.startsWith('layouts-demo')) continue;
      expect(etchedFaults(checked.network, checked.report.findings), file).toEqual([]);
      count++;
    }
    expect(count).toBeGreaterThan(250);
  });

  it('holds in random drawings of strokes that nearly coincide, or a blocker names both', () => {
    let merged = 0;
    for (let seed = 0; seed < SEEDS; seed++) {
      const { svg, sheet } = randomDrawing(seed);
      const { network, report } = checkedOf(svg, sheet);
      expect(etchedFaults(network, report.findings), `seed ${seed}: ${svg}`).toEqual([]);
      if (report.findings.some(({ rule }) => rule === 'merged-walls')) merged++;
    }
    expect(merged).toBeGreaterThan(5);
  });

  it('is not taken on trust: a finding or a node taken away is missed by the polygons', () => {
    const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="30mm" viewBox="0 0 40 30" fill="none" stroke="#000">
      <path id="lane-1" d="M5 10H35" stroke-width="0.2"/><path id="lane-2" d="M5 16L8 10.19H32L35 16" stroke-width="0.2"/>
      <path id="cross" d="M6 4V20" stroke-width="0.2"/></svg>`;
    const { network, report } = checkedOf(svg, 'depth: 50 um');
    expect(etchedFaults(network, report.findings)).toEqual([]);
    const silent = report.findings.filter(({ rule }) => rule !== 'merged-walls');
    expect(etchedFaults(network, silent).map(({ what, names }) => [what, ...names])).toEqual([
      ['not joined', 'lane-1', 'lane-2'],
    ]);
    const { trace } = network;
    const apart = {
      ...network,
      trace: {
        ...trace,
        placeCentreline: new Int32Array(0),
        firstPlace: new Int32Array(network.nodeCount + 1),
        arcNodeFrom: trace.arcNodeFrom.map((_, a) => a),
        arcNodeTo: trace.arcNodeTo.map((_, a) => a),
      },
    };
    expect(etchedFaults(apart, report.findings).map(({ what, names }) => [what, ...names])).toContainEqual([
      'not joined',
      'lane-1',
      'cross',
    ]);
  });
});
