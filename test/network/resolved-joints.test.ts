import { describe, expect, it } from 'vitest';
import type { Chip } from '../../src/chip/types.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { reachName } from '../../src/network/names.ts';
import { bendK, crossK, mitreK, stepK, teeEqualK, teeIntoWideK } from '../../src/physics/joints.ts';
import { type ChannelSpec, chipOf, type PortSpec } from './chip-of.ts';

/** Depth of every duct here: 0.1 mm, so a duct 0.1 mm wide has aspect 1. */
const W = 0.1;

function resolved(channels: readonly ChannelSpec[], ports: readonly PortSpec[] = []) {
  const chip: Chip = { ...chipOf(channels, ports), joints: 'resolved' };
  const network = buildNetwork(chip);
  const joint: Record<string, number> = {};
  const duct: Record<string, number> = {};
  const drawn: Record<string, number> = {};
  const bound: Record<string, number> = {};
  for (let r = 0; r < network.reachCount; r++) {
    const name = reachName(network, r);
    joint[name] = network.reachJointMm[r];
    duct[name] = network.reachDuctMm[r];
    drawn[name] = network.reachDrawnMm[r];
    bound[name] = network.reachJointBoundMm[r];
  }
  const kinds = Object.fromEntries(network.joints.map(({ kind, count }) => [kind, count]));
  return { joint, duct, drawn, bound, kinds, network };
}

const corner = (degrees: number, legs = 2): number[] => [
  0,
  0,
  legs,
  0,
  legs + legs * Math.cos((degrees * Math.PI) / 180),
  legs * Math.sin((degrees * Math.PI) / 180),
];

describe('corners', () => {
  for (const degrees of [2, 30, 45, 90, 120]) {
    it(`adds k(${degrees}°) of one width to a mitred corner, drawn in one stroke or two, either way round`, () => {
      const { k } = mitreK(1, (degrees * Math.PI) / 180);
      const line = corner(degrees);
      const one = resolved([{ name: 'a', widthMm: W, lines: [line] }]);
      expect(one.joint.a).toBeCloseTo(k * W, 9);
      expect(one.duct.a - one.joint.a).toBeCloseTo(one.drawn.a, 12);
      const back = resolved([
        { name: 'a', widthMm: W, lines: [[...line.slice(4), ...line.slice(2, 4), ...line.slice(0, 2)]] },
      ]);
      expect(back.joint.a).toBeCloseTo(k * W, 9);
      const two = resolved([
        { name: 'a', widthMm: W, lines: [line.slice(0, 4)] },
        { name: 'b', widthMm: W, lines: [line.slice(2)] },
      ]);
      expect(two.joint.a + two.joint.b).toBeCloseTo(k * W, 9);
    });
  }

  it('leaves a short reach at a corner half its length and hands what is left of the correction on to its neighbours', () => {
    // seams 0.2 w before and after a corner that takes 0.4 w or more
    const { joint, duct, drawn } = resolved([
      { name: 'before', widthMm: W, lines: [[0, 0, 0.98, 0]] },
      { name: 'short', widthMm: W, lines: [[0.98, 0, 1, 0, 1, 0.02]] },
      { name: 'after', widthMm: W, lines: [[1, 0.02, 1, 2]] },
    ]);
    const whole = mitreK(1, Math.PI / 2).k * W;
    expect(whole).toBeLessThan(-0.02);
    expect(duct.short).toBeCloseTo(drawn.short / 2, 12);
    expect(joint.before + joint.short + joint.after).toBeCloseTo(whole, 12);
    // in proportion to what each could still give
    expect(joint.before / joint.after).toBeCloseTo(0.98 / 1.98, 9);
  });

  it('computes nothing beyond 120° and says by how much it could be off', () => {
    const { joint, bound, kinds } = resolved([{ name: 'a', widthMm: W, lines: [corner(130)] }]);
    expect(joint.a).toBe(0);
    expect(bound.a).toBeGreaterThan(0.03);
    expect(kinds).toEqual({ 'corner not computed': 1 });
  });

  it('adds two mitres at 2 w of each other and none at 1.9 w', () => {
    const uTurn = (gap: number): ChannelSpec => ({
      name: 'a',
      widthMm: W,
      lines: [[0, 0, 2, 0, 2, gap, 0, gap]],
    });
    expect(resolved([uTurn(0.2)]).joint.a).toBeCloseTo(2 * mitreK(1, Math.PI / 2).k * W, 9);
    const near = resolved([uTurn(0.19)]);
    expect(near.joint.a).toBe(0);
    expect(near.kinds).toEqual({ 'corner not computed': 2 });
  });

  it('needs room between a corner and a node', () => {
    const side = (length: number): ChannelSpec[] => [
      { name: 'main', widthMm: W, lines: [[-3, 0, 3, 0]] },
      { name: 'side', widthMm: W, lines: [[0, 0, 0, length, 2, length]] },
    ];
    expect(resolved(side(0.2)).kinds).toEqual({ 'T of equal ducts': 1, 'mitred corner': 1 });
    expect(resolved(side(0.15)).kinds).toEqual({
      'corner not computed': 1,
      'junction with short arms not computed': 1,
    });
  });
});

describe('bends', () => {
  const arc = (radius: number, degrees: number, chords: number): ChannelSpec => {
    const line = [0, 0, 1, 0];
    const bends = [0];
    for (let k = 1; k <= chords; k++) {
      const t = (k / chords) * ((degrees * Math.PI) / 180);
      line.push(1 + radius * Math.sin(t), radius * (1 - Math.cos(t)));
      bends.push(radius);
    }
    return { name: 'a', widthMm: W, lines: [line] };
  };
  const withBends = (spec: ChannelSpec, radius: number) => {
    const chip = { ...chipOf([spec]), joints: 'resolved' as const };
    const bendRadius = Float64Array.from(chip.channels[0].centrelines[0].bendRadius, (_, k) =>
      k === 0 ? 0 : radius,
    );
    const channels = [
      { ...chip.channels[0], centrelines: [{ ...chip.channels[0].centrelines[0], bendRadius }] },
    ];
    const network = buildNetwork({ ...chip, channels });
    return { joint: network.reachJointMm[0], kinds: network.joints.map(({ kind, count }) => [kind, count]) };
  };
  for (const radius of [0.1, 0.2, 0.5]) {
    it(`adds the k of a 90° bend of radius ${radius / W} w, whatever number of chords it was cut into`, () => {
      const k = bendK(1, radius / W, Math.PI / 2).k;
      for (const chords of [16, 40]) {
        const { joint, kinds } = withBends(arc(radius, 90, chords), radius);
        expect(joint).toBeCloseTo(k * W, 9);
        expect(kinds).toEqual([['bend', 1]]);
      }
    });
  }
  it('computes no bend tighter than its width', () => {
    expect(withBends(arc(0.09, 90, 20), 0.09)).toEqual({ joint: 0, kinds: [['bend not computed', 1]] });
  });
});

describe('junctions', () => {
  const legs = (main: number, side: number, turned: number): ChannelSpec[] => {
    const at = (angle: number): number[] => {
      const rad = ((angle + turned) * Math.PI) / 180;
      return [0, 0, 3 * Math.cos(rad), 3 * Math.sin(rad)];
    };
    return [
      { name: 'a', widthMm: main, lines: [at(0)] },
      { name: 'b', widthMm: main, lines: [at(180)] },
      { name: 'side', widthMm: side, lines: [at(90)] },
    ];
  };

  it('makes a star of a T of equal ducts, whichever leg is drawn as the main', () => {
    const { main, side } = teeEqualK(1);
    const separate = resolved(legs(W, W, 0)).joint;
    expect(separate.a).toBeCloseTo(main * W, 12);
    expect(separate.side).toBeCloseTo(side * W, 12);
    const through = resolved([
      { name: 'main', widthMm: W, lines: [[-3, 0, 3, 0]] },
      { name: 'side', widthMm: W, lines: [[0, 3, 0, 0.02]] },
    ]).joint;
    expect(through['main:1']).toBeCloseTo(main * W, 12);
    expect(through.side).toBeCloseTo(side * W, 12);
    const bent = resolved([
      { name: 'bent', widthMm: W, lines: [[-3, 0, 0, 0, 0, 3]] },
      { name: 'rest', widthMm: W, lines: [[0, 0, 3, 0]] },
    ]).joint;
    expect(bent['bent:1']).toBeCloseTo(main * W, 12);
    expect(bent['bent:2']).toBeCloseTo(side * W, 12);
    expect(bent.rest).toBeCloseTo(main * W, 12);
  });

  it('runs a narrow side to the wall of a wide main', () => {
    const k = teeIntoWideK(1, 4);
    const { joint, duct, drawn } = resolved(legs(4 * W, W, 37));
    expect(joint.a).toBeCloseTo(k.mainHalf * W, 12);
    expect(joint.side).toBeCloseTo(k.side * W, 12);
    expect(duct.side - joint.side).toBeCloseTo(drawn.side - 2 * W, 12);
  });

  it('asks for 1.48 w from the wall of a wide main to the next joint on its side: from its meeting point that of equal ducts is 1.98 w', () => {
    const bent = (fromWall: number) => {
      const y = 2 * W + fromWall * W;
      return resolved([
        { name: 'main', widthMm: 4 * W, lines: [[-3, 0, 3, 0]] },
        { name: 'side', widthMm: W, lines: [[0, 0, 0, y, 3, y]] },
      ]).kinds;
    };
    expect(bent(1.5)).toMatchObject({ 'T into a wider main': 1 });
    expect(bent(1.46)).toMatchObject({ 'junction with short arms not computed': 1 });
  });

  it('computes a T within 5° of square and none beyond', () => {
    const slanted = (degrees: number) =>
      resolved([
        { name: 'main', widthMm: W, lines: [[-3, 0, 3, 0]] },
        {
          name: 'side',
          widthMm: W,
          lines: [[0, 0, 3 * Math.cos((degrees * Math.PI) / 180), 3 * Math.sin((degrees * Math.PI) / 180)]],
        },
      ]).kinds;
    expect(slanted(86)).toEqual({ 'T of equal ducts': 1 });
    expect(slanted(84)).toEqual({ 'junction not computed': 1 });
  });

  it('computes neither unequal depths nor a side wider than the main', () => {
    const deep = legs(W, W, 0).map((spec) => (spec.name === 'side' ? { ...spec, depthMm: 0.2 } : spec));
    expect(resolved(deep).kinds).toEqual({ 'T with a step in depth not computed': 1 });
    expect(resolved(legs(W, 1.1 * W, 0)).kinds).toEqual({ 'T of unequal ducts not computed': 1 });
  });

  it.each([
    [9, 0.62],
    [20, 0.62 + (1.6 / Math.PI) * Math.log(2)],
  ])(
    'bounds what it does not compute by the narrowest width, and more where another is over ten times as wide: %d w',
    (ratio, share) => {
      const { bound, kinds } = resolved([
        { name: 'main', widthMm: W, lines: [[-30, 0, 30, 0]] },
        { name: 'side', widthMm: ratio * W, lines: [[0, 0, 0, 60]] },
      ]);
      expect(kinds).toEqual({ 'T of unequal ducts not computed': 1 });
      expect(bound['main:1']).toBeCloseTo(share * W, 12);
      expect(bound.side).toBeCloseTo(share * W, 12);
    },
  );

  it('passes from a narrow side to an equal one without a jump over 0.01 w', () => {
    const near = resolved(legs(1.0001 * W, W, 0));
    const equal = resolved(legs(W, W, 0));
    for (const name of ['a', 'b', 'side']) {
      expect(Math.abs(near.duct[name] - equal.duct[name])).toBeLessThan(0.01 * W);
    }
  });

  it('adds the step to the narrow duct only', () => {
    const { joint } = resolved([
      { name: 'narrow', widthMm: W, lines: [[0, 0, 5, 0]] },
      { name: 'wide', widthMm: 4 * W, lines: [[5, 0, 9, 0]] },
    ]);
    expect(joint.narrow).toBeCloseTo(stepK(1, 4).k * W, 12);
    expect(joint.wide).toBe(0);
  });

  it('gives each arm of a cross of equal ducts the same', () => {
    const { joint, kinds } = resolved([
      { name: 'a', widthMm: W, lines: [[-3, 0, 3, 0]] },
      { name: 'b', widthMm: W, lines: [[0, -3, 0, 3]] },
    ]);
    for (const name of ['a:1', 'a:2', 'b:1', 'b:2']) expect(joint[name]).toBeCloseTo(crossK(1).arm * W, 12);
    expect(kinds).toEqual({ 'cross of equal ducts': 1 });
  });

  it('treats a dead end shorter than three widths as not computed', () => {
    const stub = (length: number) =>
      resolved([
        { name: 'main', widthMm: W, lines: [[-3, 0, 3, 0]] },
        { name: 'side', widthMm: W, lines: [[0, 0, 0, length]] },
      ]).kinds;
    expect(stub(0.31)).toEqual({ 'T of equal ducts': 1 });
    expect(stub(0.29)).toEqual({ 'junction with short arms not computed': 1 });
  });

  it('counts wells as joints that nobody computed, with a bound and no length', () => {
    const { joint, bound } = resolved(
      [{ name: 'a', widthMm: W, lines: [[0, 0, 5, 0]] }],
      [{ name: 'in', x: 0, y: 0, radiusMm: 0.5 }],
    );
    expect(joint.a).toBe(0);
    expect(bound.a).toBeGreaterThan(0.05);
  });
});

describe('what nobody computed', () => {
  it('is bounded by no less than the jump, as an angle, width or depth passes the edge of a case', () => {
    const two = (width: number, degrees: number, depthMm = W): ChannelSpec[] => {
      const rad = (degrees * Math.PI) / 180;
      return [
        { name: 'a', widthMm: W, lines: [[-40, 0, 0, 0]] },
        { name: 'b', widthMm: width, depthMm, lines: [[0, 0, 40 * Math.cos(rad), 40 * Math.sin(rad)]] },
      ];
    };
    const withSide = (main: number, side: number, degrees: number): ChannelSpec[] => {
      const rad = (degrees * Math.PI) / 180;
      return [
        { name: 'main', widthMm: main, lines: [[-40, 0, 40, 0]] },
        { name: 'b', widthMm: side, lines: [[0, 0, 40 * Math.cos(rad), 40 * Math.sin(rad)]] },
      ];
    };
    const edges: [ChannelSpec[], ChannelSpec[]][] = [
      [two(10 * W, 4.99), two(10 * W, 5.01)],
      [two(10 * W, 0), two(10 * W, 0, 1.0001 * W)],
      [two(W, 90), two(1.0001 * W, 90)],
      [two(W, 119.9), two(W, 120.1)],
      [[bent(119.9)], [bent(120.1)]],
      [withSide(W, W, 85.01), withSide(W, W, 84.99)],
      [withSide(10 * W, W, 85.01), withSide(10 * W, W, 84.99)],
      [withSide(W, W, 90), withSide(W, 1.0001 * W, 90)],
    ];
    for (const [inside, outside] of edges) {
      const [computed, counted] = [resolved(inside), resolved(outside)];
      for (const [name, length] of Object.entries(computed.duct)) {
        const jump = Math.abs(length - counted.duct[name]);
        if (jump <= 0.01 * W) continue;
        expect(counted.bound[name], `${name}: ${Object.keys(counted.kinds)}`).toBeGreaterThanOrEqual(jump);
      }
    }
  });

  it('passes through 1.98 w between corners, and one width of a bend’s radius, only with a bound above the jump', () => {
    const uTurn = (gap: number): ChannelSpec => ({
      name: 'a',
      widthMm: W,
      lines: [[0, 0, 2, 0, 2, gap * W, 0, gap * W]],
    });
    const [apart, near] = [resolved([uTurn(1.9801)]), resolved([uTurn(1.9799)])];
    expect(near.bound.a).toBeGreaterThan(Math.abs(near.duct.a - apart.duct.a));
  });

  it('is bounded by the overlap of the legs, the sharper they meet the more', () => {
    // By conformal mapping the shallow limit is −2.94 w at 150° and −10.6 w at 170°.
    for (const [degrees, least] of [
      [150, 2.94],
      [170, 10.5],
    ]) {
      expect(resolved([bent(degrees)]).bound.a).toBeGreaterThan(least * W);
      const line = bent(degrees).lines[0];
      const { bound } = resolved([
        { name: 'a', widthMm: W, lines: [line.slice(0, 4)] },
        { name: 'b', widthMm: W, lines: [line.slice(2)] },
      ]);
      expect(bound.a + bound.b).toBeGreaterThan(least * W);
    }
    const oblique = resolved([
      { name: 'main', widthMm: W, lines: [[-4, 0, 4, 0]] },
      { name: 'side', widthMm: W, lines: [[0, 0, 4 * Math.cos(0.5), 4 * Math.sin(0.5)]] },
    ]);
    expect(oblique.bound.side).toBeGreaterThan((0.5 / Math.tan(0.25)) * W);
  });

  it('never reaches beyond the legs of a hairpin that doubles back', () => {
    const { bound } = resolved([{ name: 'a', widthMm: W, lines: [[0, 0, 1, 0, 0, 1e-9]] }]);
    expect(bound.a).toBeLessThan(2.1);
  });

  it('takes a tight bend for a joint that needs room beside a corner and a T, and a gentle one not', () => {
    const bend = (straight: number, radius: number): { line: number[]; bends: number[] } => {
      const line = [0, 0, 0, straight];
      const bends = [0];
      for (let k = 1; k <= 24; k++) {
        const t = (k / 24) * (Math.PI / 2);
        line.push(radius * (1 - Math.cos(t)), straight + radius * Math.sin(t));
        bends.push(radius);
      }
      line.push(line[line.length - 2] + 3, line[line.length - 1]);
      bends.push(0);
      return { line, bends };
    };
    const kinds = (corner: boolean, straight: number, radius: number) => {
      const { line, bends } = bend(straight, radius);
      const main: ChannelSpec = { name: 'main', widthMm: W, lines: [[-9, 0, 9, 0]] };
      const side: ChannelSpec = { name: 'side', widthMm: W, lines: [corner ? [-9, 0, ...line] : line] };
      const chip: Chip = { ...chipOf(corner ? [side] : [main, side]), joints: 'resolved' };
      const channels = chip.channels.map((channel) =>
        channel.name === 'side'
          ? {
              ...channel,
              centrelines: [
                {
                  ...channel.centrelines[0],
                  bendRadius: Float64Array.from(corner ? [0, ...bends] : bends),
                },
              ],
            }
          : channel,
      );
      return buildNetwork({ ...chip, channels }).joints.map(({ kind }) => kind);
    };
    expect(kinds(false, 1.5 * W, W)).toEqual(['bend', 'T of equal ducts']);
    expect(kinds(false, 1.2 * W, W)).toEqual(['bend', 'junction with short arms not computed']);
    expect(kinds(false, 1.2 * W, 20 * W)).toEqual(['bend', 'T of equal ducts']);
    expect(kinds(true, 1.5 * W, W)).toEqual(['mitred corner', 'bend']);
    expect(kinds(true, 1.2 * W, W)).toEqual(['bend', 'corner not computed']);
    expect(kinds(true, 1.2 * W, 20 * W)).toEqual(['mitred corner', 'bend']);
  });

  it('looks for room beyond a vertex on a straight leg', () => {
    const corner = resolved([{ name: 'a', widthMm: W, lines: [[0, 0, 1.9, 0, 2, 0, 2, 1.9, 2, 2]] }]);
    expect(corner.kinds).toEqual({ 'mitred corner': 1 });
  });
});

const bent = (degrees: number): ChannelSpec => ({ name: 'a', widthMm: W, lines: [corner(degrees, 8)] });
