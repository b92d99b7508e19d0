import { describe, expect, it } from 'vitest';
import { reachName } from '../../src/network/names.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { drawing, networkFrom } from '../solve/network-from.ts';
import { findingsOf } from './findings-of.ts';

/** Three inlets feed one lane; a second lane hangs on the first inlet alone. */
const SVG = drawing(
  { lane: 'M20 10H50', 'in-1': 'M5 5L20 10', 'in-2': 'M5 10H20', 'in-3': 'M5 15L20 10', own: 'M5 5V30' },
  { a: [5, 5], b: [5, 10], c: [5, 15], out: [50, 10], drain: [5, 30] },
);

function sheet(ports: Readonly<Record<string, string>>, windowed: readonly string[]): string {
  const lines = Object.entries(ports).map(([name, text]) => `  ${name}: ${text}\n`);
  const windows = windowed.map((name) => `  ${name}: { flow: { min: 0 uL/min } }\n`);
  return `depth: 100 um\nports:\n${lines.join('')}${windows.length > 0 ? `channels:\n${windows.join('')}` : ''}`;
}

const PORTS = {
  a: '{ head: 60 mm }',
  b: '{ pressure: 800 Pa }',
  c: '{ head: 30 mm, tubing: { bore: 0.2 mm, length: 100 mm } }',
  out: 'open',
  drain: 'sealed',
};

function levelFindings(ports: Readonly<Record<string, string>>, windowed: readonly string[]) {
  return findingsOf(SVG, sheet(ports, windowed)).findings.filter(({ rule }) => rule === 'level-sensitive');
}

/** Flow through a channel by a solve of its own. */
function flowOf(channel: string, ports: Readonly<Record<string, string>>): number {
  const { network, run } = networkFrom(SVG, sheet(ports, []));
  const reach = Array.from({ length: network.reachCount }, (_, r) => r).find(
    (r) => reachName(network, r) === channel,
  );
  return solveFlow(network, run).reachFlow[reach ?? -1];
}

describe('level-sensitive', () => {
  it('measures what 5 mm more in the most felt well does to a windowed flow, as solving again with that level does', () => {
    for (const windowed of [['lane'], ['lane', 'in-1', 'in-2', 'in-3']]) {
      // with one watched reach the adjoint is used, with four a solve for each well
      const [finding] = levelFindings(PORTS, windowed).filter(({ names }) => names[0] === 'lane');
      expect(finding).toMatchObject({ severity: 'caution', limit: 0.05, unit: '' });
      const before = flowOf('lane', PORTS);
      const after = [
        { ...PORTS, a: '{ head: 65 mm }' },
        { ...PORTS, c: PORTS.c.replace('30', '35') },
        { ...PORTS, out: '{ head: 5 mm }' },
      ].map((ports) => Math.abs(flowOf('lane', ports) / before - 1));
      expect(Math.abs((finding.measured ?? 0) / Math.max(...after) - 1)).toBeLessThan(1e-9);
      expect(finding.names).toContain('out');
    }
  });

  it('measures the same behind tubing, by either way of computing it', () => {
    const one = {
      a: '{ pressure: 600 Pa }',
      b: '{ head: 80 mm, tubing: { bore: 0.1 mm, length: 300 mm } }',
      c: PORTS.c,
      out: '{ pressure: -100 Pa }',
      drain: 'sealed',
    };
    const after = [
      { ...one, b: one.b.replace('80', '85') },
      { ...one, c: one.c.replace('30', '35') },
    ].map((ports) => Math.abs(flowOf('in-3', ports) / flowOf('in-3', one) - 1));
    for (const windowed of [['in-3'], ['in-3', 'lane', 'in-1', 'in-2']]) {
      const [finding] = levelFindings(one, windowed).filter(({ names }) => names[0] === 'in-3');
      expect(finding.names).toContain('c');
      expect(Math.abs((finding.measured ?? 0) / Math.max(...after) - 1)).toBeLessThan(1e-9);
    }
  });

  it('is content where pressures are high, where pumps give the flow, and where nothing is windowed', () => {
    const high = { ...PORTS, a: '{ head: 1.5 m }', b: '{ pressure: 15 kPa }', c: '{ head: 1.5 m }' };
    expect(levelFindings(high, ['lane'])).toEqual([]);
    const given = { a: '{ flow: 1 uL/min }', b: 'sealed', c: 'sealed', out: 'open', drain: 'sealed' };
    expect(levelFindings(given, ['lane'])).toEqual([]);
    expect(findingsOf(SVG, sheet(PORTS, [])).notRun).toContainEqual({
      rule: 'level-sensitive',
      why: 'no channel is given a window',
    });
  });

  it('speaks of a windowed channel at rest that a level would set flowing', () => {
    const rest = { a: 'open', b: 'sealed', c: 'sealed', out: 'open', drain: 'sealed' };
    const [finding] = levelFindings(rest, ['lane']);
    expect(finding.measured).toBeNull();
    expect(finding.message).toMatch(
      /^5 mm of liquid level at a \(open\) makes .* flow through lane, which is at rest now/,
    );
  });
});
