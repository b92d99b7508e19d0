import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Chip } from '../../src/chip/types.ts';
import { strokeRules } from '../../src/findings/strokes.ts';
import type { Finding } from '../../src/findings/types.ts';
import { wallRules } from '../../src/findings/walls.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { type ChannelSpec, chipOf, type PortSpec, runOf } from '../network/chip-of.ts';

const MIN_WALL_MM = 0.04;

function wallsOf(channels: readonly ChannelSpec[], ports: readonly PortSpec[] = []): readonly Finding[] {
  const plain = chipOf(channels, ports);
  const chip: Chip = {
    ...plain,
    leastWall: { flatM: MIN_WALL_MM / 1e3, perDepth: 0, origin: 'run sheet' },
  };
  const context = { chip, run: runOf(chip), network: buildNetwork(chip), flow: null };
  return [...strokeRules, ...wallRules].flatMap((rule) => rule.run(context).findings);
}

const degrees = (value: number): number => (value * Math.PI) / 180;

/** A straight line of a length from a point at an angle. */
function arm(x: number, y: number, length: number, angleDeg: number): number[] {
  return [x, y, x + length * Math.cos(degrees(angleDeg)), y + length * Math.sin(degrees(angleDeg))];
}

const angle = fc.double({ min: 2, max: 178, noNaN: true });
const width = fc.double({ min: 0.05, max: 0.5, noNaN: true });
const turn = fc.double({ min: 0, max: 360, noNaN: true });
const RUNS = { numRuns: 200, seed: 11 };

describe('walls between channels', () => {
  it('finds nothing between two straight channels that cross, at whatever angle and however wide', () => {
    fc.assert(
      fc.property(angle, turn, width, width, (between, at, w1, w2) => {
        const [, , x1, y1] = arm(0, 0, 30, at);
        const [, , x2, y2] = arm(0, 0, 30, at + between);
        const findings = wallsOf([
          { name: 'one', widthMm: w1, lines: [[-x1, -y1, x1, y1]] },
          { name: 'two', widthMm: w2, lines: [[-x2, -y2, x2, y2]] },
        ]);
        expect(findings).toEqual([]);
      }),
      RUNS,
    );
  });

  it('finds nothing between a channel and a branch drawn to its centreline or to its wall', () => {
    fc.assert(
      fc.property(angle, turn, width, width, fc.boolean(), (between, at, w1, w2, toWall) => {
        const [, , x1, y1] = arm(0, 0, 30, at);
        const start = toWall ? (0.99 * w1) / 2 / Math.sin(degrees(between)) : 0;
        const [, , sx, sy] = arm(0, 0, start, at + between);
        const findings = wallsOf([
          { name: 'main', widthMm: w1, lines: [[-x1, -y1, x1, y1]] },
          { name: 'branch', widthMm: w2, lines: [arm(sx, sy, 25, at + between)] },
        ]);
        expect(findings).toEqual([]);
      }),
      RUNS,
    );
  });

  it('finds nothing between the arms of a Y', () => {
    fc.assert(
      fc.property(angle, turn, width, width, (between, at, w1, w2) => {
        const findings = wallsOf([
          { name: 'stem', widthMm: w1, lines: [arm(0, 0, 20, at + 180)] },
          { name: 'left', widthMm: w1, lines: [arm(0, 0, 30, at + between / 2)] },
          { name: 'right', widthMm: w2, lines: [arm(0, 0, 30, at - between / 2)] },
        ]);
        expect(findings).toEqual([]);
      }),
      RUNS,
    );
  });

  it('finds the wall between two lanes when it is thinner than the limit, once, as thick as it is', () => {
    fc.assert(
      fc.property(
        turn,
        width,
        width,
        fc.double({ min: 0.001, max: 0.08, noNaN: true }).filter((gap) => Math.abs(gap - MIN_WALL_MM) > 1e-6),
        fc.double({ min: 0, max: 5, noNaN: true }),
        (at, w1, w2, gap, shift) => {
          const apart = (w1 + w2) / 2 + gap;
          const [, , nx, ny] = arm(0, 0, apart, at + 90);
          const [, , sx, sy] = arm(0, 0, shift, at);
          const findings = wallsOf([
            { name: 'one', widthMm: w1, lines: [arm(0, 0, 20, at)] },
            { name: 'two', widthMm: w2, lines: [arm(nx + sx, ny + sy, 20, at)] },
          ]).filter(({ rule }) => rule !== 'open-end');
          expect(findings.map(({ rule }) => rule)).toEqual(gap < MIN_WALL_MM ? ['thin-wall'] : []);
          if (findings.length > 0) {
            expect(findings[0].measured).toBeCloseTo(gap / 1e3, 12);
            const { mark } = findings[0];
            expect(Math.hypot(mark!.x2Mm - mark!.x1Mm, mark!.y2Mm - mark!.y1Mm)).toBeCloseTo(gap, 9);
          }
        },
      ),
      RUNS,
    );
  });

  it('finds one wall for each gap of a serpentine, with square turns and with round ones', () => {
    for (const round of [false, true]) {
      const legs = 5;
      const pitch = 0.23;
      const points: number[] = [0, 0];
      for (let k = 0; k < legs; k++) {
        const [from, to] = k % 2 === 0 ? [0, 8] : [8, 0];
        if (k > 0) points.push(from, k * pitch);
        points.push(to, k * pitch);
        if (round && k < legs - 1) {
          for (let a = 5; a < 180; a += 5) {
            const out = (Math.sin(degrees(a)) * pitch) / 2;
            points.push(to === 8 ? 8 + out : -out, k * pitch + (pitch / 2) * (1 - Math.cos(degrees(a))));
          }
        }
      }
      const findings = wallsOf([{ name: 'coil', widthMm: 0.2, lines: [points] }]);
      expect(findings.map(({ rule }) => rule)).toEqual(new Array(legs - 1).fill('thin-wall'));
      for (const { measured } of findings) expect(measured).toBeCloseTo(0.03e-3, 9);
    }
  });

  it('says nothing about legs that are near each other only because the turn is short', () => {
    // 4 × (0.2 + 0.04) = 0.96: from wall to wall over the turn it is never farther than that
    expect(
      wallsOf([{ name: 'hook', widthMm: 0.2, lines: [[0, 0, 10, 0, 10, 0.23, 9.72, 0.23, 9.72, 5]] }]),
    ).toEqual([]);
    expect(
      wallsOf([{ name: 'hook', widthMm: 0.2, lines: [[0, 0, 10, 0, 10, 0.23, 9.5, 0.23, 9.5, 5]] }]).map(
        ({ rule }) => rule,
      ),
    ).toEqual(['thin-wall']);
  });

  it('goes by the layer with the deeper etch where the limit depends on depth', () => {
    const channels: readonly ChannelSpec[] = [
      { name: 'shallow', widthMm: 0.2, depthMm: 0.02, lines: [[0, 0, 10, 0]] },
      { name: 'deep', widthMm: 0.2, depthMm: 0.1, lines: [[0, 0.35, 10, 0.35]] },
    ];
    const plain = chipOf(channels);
    const chip: Chip = {
      ...plain,
      leastWall: { flatM: 50e-6, perDepth: 2, origin: 'typical value, not from your maker' },
    };
    const context = { chip, run: runOf(chip), network: buildNetwork(chip), flow: null };
    const [finding] = wallRules.flatMap((rule) => rule.run(context).findings);
    expect(finding.rule).toBe('thin-wall');
    expect(finding.limit).toBeCloseTo(250e-6, 12);
    expect(finding.measured).toBeCloseTo(150e-6, 12);
  });
});
