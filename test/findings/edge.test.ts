import { describe, expect, it } from 'vitest';
import type { Chip, Run } from '../../src/chip/types.ts';
import { edgeRules } from '../../src/findings/edge.ts';
import type { Finding } from '../../src/findings/types.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { type ChannelSpec, chipOf, type PortSpec, runOf } from '../network/chip-of.ts';

const SQUARE = [0, 0, 20, 0, 20, 20, 0, 20, 0, 0];

function edgeFindings(
  rings: readonly (readonly number[])[],
  channels: readonly ChannelSpec[],
  ports: readonly PortSpec[] = [],
): readonly Finding[] {
  const plain = chipOf(channels, ports);
  const chip: Chip = {
    ...plain,
    edge: { name: 'chip-edge', rings: rings.map((ring) => Float64Array.from(ring)), sidesMm: [20, 20] },
    sizeMm: [20, 20],
  };
  const plainRun = runOf(chip);
  const run: Run = {
    ...plainRun,
    limits: { ...plainRun.limits, edgeMarginM: { value: 1e-3, origin: 'run sheet' } },
  };
  const context = { chip, run, network: buildNetwork(chip), flow: null };
  return edgeRules.flatMap((rule) => rule.run(context).findings);
}

describe('the chip edge', () => {
  it('makes one finding of a channel that leaves the chip and comes back', () => {
    const findings = edgeFindings(
      [SQUARE],
      [{ name: 'loop', widthMm: 0.2, lines: [[5, 10, 5, 19.5, 8, 23, 12, 23, 15, 19.5, 15, 10]] }],
    );
    expect(findings.map(({ rule, names }) => [rule, ...names])).toEqual([['outside-chip', 'loop']]);
    expect(findings[0].measured).toBeCloseTo(-3.1e-3, 12);
    expect([findings[0].xMm, findings[0].yMm]).toEqual([10, 23]);
  });

  it('says how near, and how near it may come', () => {
    const [finding] = edgeFindings([SQUARE], [{ name: 'a', widthMm: 0.2, lines: [[5, 0.5, 15, 0.5]] }]);
    expect(finding.message).toBe('a comes within 400 µm of the chip edge; edge_margin is 1 mm');
    expect(finding.fix).toContain('0.6 mm');
  });

  it('makes two findings of a channel that comes near the edge at two places', () => {
    const findings = edgeFindings(
      [SQUARE],
      [{ name: 'w', widthMm: 0.2, lines: [[3, 10, 5, 19.3, 10, 10, 15, 19.4, 17, 10]] }],
    );
    expect(findings.map(({ rule }) => rule)).toEqual(['edge-margin', 'edge-margin']);
    expect(findings.map(({ measured }) => Math.round(measured! * 1e6))).toEqual(
      [600, 500].sort((a, b) => b - a),
    );
  });

  it('measures a square end to its corner, and does not stop at it a half circle too early', () => {
    const findings = edgeFindings([SQUARE], [{ name: 'wide', widthMm: 2, lines: [[5, 10, 18.9, 10]] }]);
    expect(findings).toEqual([]);
    const slanted = edgeFindings([SQUARE], [{ name: 'wide', widthMm: 2, lines: [[10, 5, 18, 13]] }]);
    expect(slanted).toEqual([]);
    const [near] = edgeFindings([SQUARE], [{ name: 'wide', widthMm: 2, lines: [[10.5, 5, 18.5, 13]] }]);
    expect(near.measured).toBeCloseTo((1.5 - Math.SQRT1_2) * 1e-3, 12);
  });

  it('knows several parts, and what lies between them is outside', () => {
    const parts = [
      [0, 0, 8, 0, 8, 20, 0, 20, 0, 0],
      [12, 0, 20, 0, 20, 20, 12, 20, 12, 0],
    ];
    const findings = edgeFindings(
      parts,
      [
        { name: 'left', widthMm: 0.2, lines: [[4, 4, 4, 16]] },
        { name: 'between', widthMm: 0.2, lines: [[10, 4, 10, 16]] },
        { name: 'right', widthMm: 0.2, lines: [[16, 4, 16, 16]] },
      ],
      [{ name: 'hole', x: 10, y: 18, radiusMm: 0.5 }],
    );
    expect(findings.map(({ names }) => names[0]).sort()).toEqual(['between', 'hole']);
  });

  it('takes what touches the edge from inside as inside', () => {
    const plain = chipOf([{ name: 'flush', widthMm: 0.2, lines: [[5, 10, 20, 10]] }]);
    const chip: Chip = {
      ...plain,
      edge: { name: 'chip-edge', rings: [Float64Array.from(SQUARE)], sidesMm: [20, 20] },
    };
    const context = { chip, run: runOf(chip), network: buildNetwork(chip), flow: null };
    expect(edgeRules.flatMap((rule) => rule.run(context).findings)).toEqual([]);
    expect(edgeRules.flatMap((rule) => rule.run(context).notRun.map(({ rule: name }) => name))).toEqual([
      'edge-margin',
      'wrong-size',
    ]);
  });
});
