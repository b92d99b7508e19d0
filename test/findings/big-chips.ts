import type { Assembled } from '../../src/chip/assemble.ts';
import type { Chip, Run } from '../../src/chip/types.ts';
import { type ChannelSpec, chipOf, runOf } from '../network/chip-of.ts';

/** n × n crossing channels, 0.1 mm wide and 1 mm apart, with a well in two opposite corners: 2n(n − 1) inner segments. */
export function latticeChip(n: number): Assembled {
  const channels: ChannelSpec[] = [];
  for (let i = 0; i < n; i++) {
    channels.push({ name: `h${i}`, widthMm: 0.1, depthMm: 0.05, lines: [[0.5, i + 0.5, n - 0.5, i + 0.5]] });
    channels.push({ name: `v${i}`, widthMm: 0.1, depthMm: 0.05, lines: [[i + 0.5, 0.5, i + 0.5, n - 0.5]] });
  }
  return driven(
    chipOf(channels, [
      { name: 'in', x: 0.5, y: 0.5, radiusMm: 0.2 },
      { name: 'out', x: n - 0.5, y: n - 0.5, radiusMm: 0.2 },
    ]),
  );
}

/** k zigzag lanes of m legs between two manifolds. */
export function lanesChip(k: number, m: number): Assembled {
  const right = 1 + 0.4 * m;
  const bottom = 1 + 2 * (k - 1);
  const manifold = { widthMm: 0.2, depthMm: 0.05 };
  const channels: ChannelSpec[] = [
    { name: 'feed', ...manifold, lines: [[1, 1, 1, bottom]] },
    { name: 'drain', ...manifold, lines: [[right, 1, right, bottom]] },
  ];
  for (let i = 0; i < k; i++) {
    const y = 1 + 2 * i;
    const line = [1, y];
    for (let j = 1; j < m; j++) line.push(1 + 0.4 * j, y + (j % 2 === 1 ? 0.5 : 0));
    line.push(right, y);
    channels.push({ name: `lane${i}`, widthMm: 0.1, depthMm: 0.05, lines: [line] });
  }
  return driven(
    chipOf(channels, [
      { name: 'in', x: 1, y: 1, radiusMm: 0.2 },
      { name: 'out', x: right, y: bottom, radiusMm: 0.2 },
    ]),
  );
}

/** With pressures, every limit and a window on every channel, so that every rule has work to do. */
function driven(chip: Chip): Assembled {
  const limit = <T>(value: T) => ({ value, origin: 'run sheet' as const });
  const plain = runOf(chip);
  const run: Run = {
    ...plain,
    channels: chip.channels.map(() => ({
      line: 1,
      wallShear: { min: 1e-9, max: 10, over: 0.5 },
      residenceTime: { min: 1e-6, max: null },
      flow: { min: null, max: 1e-6 },
      walls: 'all',
      even: null,
      concentration: null,
      mixing: null,
    })),
    ports: plain.ports.map((port, p) => ({
      ...port,
      condition: { kind: 'pressure', pressurePa: p === 0 ? 10e3 : 0 },
      expect: p === 0 ? 'in' : 'out',
    })),
    limits: {
      ...plain.limits,
      minWidthM: limit(40e-6),
      maxWidthToDepth: limit(12),
      maxDepthToWidth: limit(2),
      portGapM: limit(1e-3),
      maxPressurePa: limit(100e3),
      minPressurePa: limit(-30e3),
      minCornerAngleRad: limit(Math.PI / 6),
      stiffnessPa: limit(1.5e6),
    },
  };
  return { chip: { ...chip, leastWall: { flatM: 60e-6, perDepth: 0, origin: 'run sheet' } }, run };
}
