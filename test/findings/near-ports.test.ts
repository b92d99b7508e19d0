import { describe, expect, it } from 'vitest';
import { closePorts, portsNear } from '../../src/findings/near-ports.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { chipOf, type PortSpec, runOf } from '../network/chip-of.ts';

function contextOf(places: readonly (readonly [x: number, y: number, radiusMm: number])[]) {
  const ports = places.map(([x, y, radiusMm], p): PortSpec => ({ name: `p${p}`, x, y, radiusMm }));
  const chip = chipOf([{ name: 'lane', widthMm: 0.1, lines: [[0, 50, 9, 50]] }], ports);
  return { chip, run: runOf(chip), network: buildNetwork(chip), flow: null };
}

describe('ports near a place', () => {
  it('are those whose rim comes as near as asked, however large another one is', () => {
    const context = contextOf([
      [8, 0, 5],
      [2, 0, 0.5],
      [-4, 0, 0.5],
      [0, 2, 0.5],
    ]);
    expect(portsNear(context, 0, 0, 1.6).sort()).toEqual([1, 3]);
    expect(portsNear(context, 0, 0, 3.1).sort()).toEqual([0, 1, 3]);
  });
});

describe('ports that crowd', () => {
  it('are told once, with the distance of their rims, in drawn order', () => {
    const context = contextOf([
      [4, 0, 1],
      [0, 0, 0.5],
      [1.4, 0, 0.5],
      [20, 0, 1],
    ]);
    const close = closePorts(context, 1.2);
    expect(close.map(([p, q]) => [p, q])).toEqual([
      [0, 2],
      [1, 2],
    ]);
    expect(close[0][2]).toBeCloseTo(1.1, 12);
    expect(close[1][2]).toBeCloseTo(0.4, 12);
    expect(closePorts(context, 0.4)).toEqual([]);
  });
});
