import { describe, expect, it } from 'vitest';
import { buildNetwork } from '../../src/network/build.ts';
import { nodeName, reachName } from '../../src/network/names.ts';
import { type Network, NODE_KINDS } from '../../src/network/types.ts';
import { type ChannelSpec, chipOf, type PortSpec } from './chip-of.ts';

/** What a network is, free of numbering: each reach by its name with its nodes and lengths. */
function describeNetwork(channels: readonly ChannelSpec[], ports: readonly PortSpec[] = []) {
  return summary(buildNetwork(chipOf(channels, ports)));
}

function summary(network: Network) {
  const reaches: Record<string, { from: string; to: string; drawn: number; duct: number; segments: number }> =
    {};
  for (let r = 0; r < network.reachCount; r++) {
    reaches[reachName(network, r)] = {
      from: nodeName(network, network.reachFrom[r]),
      to: nodeName(network, network.reachTo[r]),
      drawn: network.reachDrawnMm[r],
      duct: network.reachDuctMm[r],
      segments: network.firstSegment[r + 1] - network.firstSegment[r],
    };
  }
  const nodes = Array.from({ length: network.nodeCount }, (_, n) => [
    nodeName(network, n),
    NODE_KINDS[network.nodeKind[n]],
  ]);
  return { reaches, nodes: Object.fromEntries(nodes) as Record<string, string>, network };
}

const MAIN: ChannelSpec = { name: 'main', widthMm: 0.4, lines: [[0, 0, 10, 0]] };
const IN: PortSpec = { name: 'in', x: 0, y: 0, radiusMm: 0.5 };
const OUT: PortSpec = { name: 'out', x: 10, y: 0, radiusMm: 0.5 };

describe('rule 2: meetings', () => {
  it('joins two crossing strokes without a drawn vertex in one junction of four reaches', () => {
    const { reaches, nodes } = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 4, 0]] },
      { name: 'b', widthMm: 0.1, lines: [[1, -2, 1, 3]] },
    ]);
    expect(nodes.J1).toBe('junction');
    expect(Object.keys(reaches)).toEqual(['a:1', 'a:2', 'b:1', 'b:2']);
    expect(reaches['a:1'].duct).toBeCloseTo(1, 12);
    expect(reaches['b:2'].duct).toBeCloseTo(3, 12);
  });

  it('gives the same network whether the crossing has vertices or not', () => {
    const plain = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 4, 0]] },
      { name: 'b', widthMm: 0.3, lines: [[1, -2, 1, 3]] },
    ]);
    const drawn = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 1, 0, 4, 0]] },
      { name: 'b', widthMm: 0.3, lines: [[1, -2, 1, 0, 1, 3]] },
    ]);
    expect(drawn.reaches).toEqual(plain.reaches);
  });

  it('does not join strokes of different planes', () => {
    const { network } = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 4, 0]] },
      { name: 'b', widthMm: 0.1, plane: 1, lines: [[1, -2, 1, 3]] },
    ]);
    expect(network.reachCount).toBe(2);
  });

  it('joins a stroke that crosses itself into a loop and two tails', () => {
    const { reaches } = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 5, 0, 5, 2, 2, 2, 2, -3]] },
    ]);
    expect(Object.keys(reaches)).toEqual(['a:1', 'a:2', 'a:3']);
    expect(reaches['a:2'].from).toBe(reaches['a:2'].to);
    expect(reaches['a:2'].duct).toBeCloseTo(3 + 2 + 3 + 2, 12);
  });

  it('joins three strokes through one point in one node', () => {
    const { nodes } = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[-2, 0, 2, 0]] },
      { name: 'b', widthMm: 0.1, lines: [[0, -2, 0, 2]] },
      { name: 'c', widthMm: 0.1, lines: [[-2, -2, 2, 2]] },
    ]);
    expect(Object.values(nodes).filter((kind) => kind === 'junction')).toHaveLength(1);
  });
});

describe('rules 3 to 5: branches, overshoot and trimming', () => {
  const depths = [
    ['the wall', 0.2],
    ['half way', 0.1],
    ['the centreline', 0],
    ['past it', -0.15],
  ] as const;
  for (const [where, y] of depths) {
    it(`gives a square branch drawn to ${where} the length to the wall plus the trimmed rest`, () => {
      const { reaches } = describeNetwork(
        [MAIN, { name: 'side', widthMm: 0.1, lines: [[5, 4, 5, y]] }],
        [IN, OUT],
      );
      // p = 0.2 mm inside the main strip, counted with w/W = 1/4
      expect(reaches.side.duct).toBeCloseTo(3.8 + 0.2 / 4, 12);
      expect(reaches['main:1'].duct).toBeCloseTo(4.5, 12);
      expect(reaches['main:2'].duct).toBeCloseTo(4.5, 12);
    });
  }

  for (const [where, y] of depths) {
    it(`gives a branch at 45° drawn to ${where} the same length`, () => {
      const { reaches } = describeNetwork(
        [MAIN, { name: 'side', widthMm: 0.1, lines: [[9, 4, 5 + y, y]] }],
        [IN, OUT],
      );
      expect(reaches.side.duct).toBeCloseTo((3.8 + 0.2 / 4) * Math.SQRT2, 12);
    });
  }

  it('loses nothing between equal ducts', () => {
    const { reaches } = describeNetwork(
      [
        { ...MAIN, widthMm: 0.1 },
        { name: 'side', widthMm: 0.1, lines: [[5, 4, 5, 0]] },
      ],
      [IN, OUT],
    );
    expect(reaches.side.duct).toBeCloseTo(4, 12);
  });

  it('counts depth with its third power', () => {
    const { reaches } = describeNetwork(
      [
        { ...MAIN, depthMm: 0.2 },
        { name: 'side', widthMm: 0.1, depthMm: 0.1, lines: [[5, 4, 5, 0]] },
      ],
      [IN, OUT],
    );
    expect(reaches.side.duct).toBeCloseTo(3.8 + (0.2 / 4) * (1 / 8), 12);
  });

  it('loses nothing at a collinear change of width, and calls the node a step', () => {
    const { reaches, nodes } = describeNetwork([
      { name: 'narrow', widthMm: 0.1, lines: [[0, 0, 5, 0]] },
      { name: 'wide', widthMm: 1, lines: [[5, 0, 9, 0]] },
    ]);
    expect(reaches.narrow.duct).toBeCloseTo(5, 12);
    expect(reaches.wide.duct).toBeCloseTo(4, 12);
    expect(nodes.S1).toBe('step');
  });

  it('trims a feeder to a chamber the same when the chamber is one stroke or two that meet at the feeder', () => {
    const feeder: ChannelSpec = { name: 'feeder', widthMm: 0.1, lines: [[5, 4, 5, 0]] };
    const one = describeNetwork([{ name: 'a', widthMm: 1, lines: [[0, 0, 10, 0]] }, feeder]);
    const two = describeNetwork([
      { name: 'a', widthMm: 1, lines: [[0, 0, 5, 0]] },
      { name: 'b', widthMm: 1, lines: [[5, 0, 10, 0]] },
      feeder,
    ]);
    expect(one.reaches.feeder.duct).toBeCloseTo(3.5 + 0.05, 12);
    expect(two.reaches.feeder.duct).toBeCloseTo(one.reaches.feeder.duct, 12);
  });

  it('trims a feeder that leaves a seam at 45° as if the chamber had no seam', () => {
    const feeder: ChannelSpec = { name: 'feeder', widthMm: 0.1, lines: [[9, 4, 5, 0]] };
    const one = describeNetwork([{ name: 'a', widthMm: 1, lines: [[0, 0, 10, 0]] }, feeder]);
    const two = describeNetwork([
      { name: 'a', widthMm: 1, lines: [[0, 0, 5, 0]] },
      { name: 'b', widthMm: 1, lines: [[5, 0, 10, 0]] },
      feeder,
    ]);
    expect(two.reaches.feeder.duct).toBeCloseTo(one.reaches.feeder.duct, 12);
  });

  it('trims a channel through a wider or deeper one the same when it is drawn in two strokes that meet inside it', () => {
    const main: ChannelSpec = { name: 'main', widthMm: 0.4, depthMm: 0.1, lines: [[0, 0, 10, 0]] };
    const shallow = { widthMm: 0.4, depthMm: 0.05 };
    const one = describeNetwork([main, { name: 'b', ...shallow, lines: [[5, -4, 5, 4]] }]);
    const two = describeNetwork([
      main,
      { name: 'b', ...shallow, lines: [[5, -4, 5, 0.1]] },
      { name: 'c', ...shallow, lines: [[5, 0.1, 5, 4]] },
    ]);
    const sum = (reaches: Record<string, { duct: number }>): number =>
      Object.entries(reaches).reduce(
        (total, [name, { duct }]) => total + (name.startsWith('main') ? 0 : duct),
        0,
      );
    expect(sum(two.reaches)).toBeCloseTo(sum(one.reaches), 12);
    expect(sum(one.reaches)).toBeCloseTo(2 * (3.8 + 0.2 / 8), 12);
  });

  it("trims a ladder's end lane like its brothers", () => {
    const { reaches } = describeNetwork([
      { name: 'top', widthMm: 0.6, lines: [[0, 0, 10, 0]] },
      { name: 'bottom', widthMm: 0.6, lines: [[0, 5, 10, 5]] },
      ...[0, 5, 10].map((x, k) => ({ name: `lane-${k}`, widthMm: 0.1, lines: [[x, 0, x, 5]] })),
    ]);
    for (const name of ['lane-0', 'lane-1', 'lane-2']) {
      expect(reaches[name].duct).toBeCloseTo(4.4 + 0.6 / 6, 12);
    }
  });

  it('counts every bit once where both nodes claim it', () => {
    // The lane lies wholly inside both manifolds' strips in the middle: 0.2 mm between centrelines 0.3 mm wide.
    const { reaches } = describeNetwork([
      { name: 'top', widthMm: 0.3, lines: [[0, 0, 10, 0]] },
      { name: 'bottom', widthMm: 0.2, lines: [[0, 0.2, 10, 0.2]] },
      { name: 'lane', widthMm: 0.1, lines: [[5, 0, 5, 0.2]] },
    ]);
    // 0…0.15 counts 1/3 (top), 0.1…0.2 counts 1/2 (bottom), the overlap 0.1…0.15 the smaller.
    expect(reaches.lane.duct).toBeCloseTo(0.15 / 3 + 0.05 / 2, 12);
  });

  it('leaves out the later end piece of two equal strokes that overlap, once', () => {
    const { reaches, network } = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 5, 0]] },
      { name: 'b', widthMm: 0.1, lines: [[4.85, 0, 10, 0]] },
    ]);
    expect(network.reachCount).toBe(2);
    expect(reaches.a.duct).toBeCloseTo(5, 12);
    expect(reaches.b.duct).toBeCloseTo(5, 12);
  });

  it("leaves out the narrower channel's end piece where a narrow and a wide stroke overlap", () => {
    const { reaches, network } = describeNetwork([
      { name: 'narrow', widthMm: 0.1, lines: [[0, 0, 5, 0]] },
      { name: 'wide', widthMm: 0.4, lines: [[4.5, 0, 10, 0]] },
    ]);
    expect(network.reachCount).toBe(2);
    expect(reaches.narrow.duct).toBeCloseTo(4.5, 12);
    expect(reaches.wide.duct).toBeCloseTo(5.5, 12);
  });

  it('keeps both strokes of an overlap longer than twice the wider width', () => {
    const { network } = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 5, 0]] },
      { name: 'b', widthMm: 0.1, lines: [[4.7, 0, 10, 0]] },
    ]);
    expect(network.reachCount).toBe(4);
  });

  it('leaves an end that stops outside every strip open', () => {
    const { network, nodes } = describeNetwork([
      MAIN,
      { name: 'side', widthMm: 0.1, lines: [[5, 4, 5, 0.21]] },
    ]);
    expect(network.reachCount).toBe(2);
    expect(Object.values(nodes).every((kind) => kind === 'end')).toBe(true);
  });

  it('decides with the slack but measures to the exact centreline', () => {
    const { reaches } = describeNetwork(
      [
        { ...MAIN, widthMm: 0.1 },
        { name: 'side', widthMm: 0.1, lines: [[5, 4, 5, 0.0505]] },
      ],
      [IN, OUT],
    );
    expect(reaches.side.duct).toBeCloseTo(4, 12);
  });

  it('joins a spiral end to its own earlier turn, more than two widths back', () => {
    const { reaches } = describeNetwork([
      { name: 'a', widthMm: 0.2, lines: [[0, 0, 5, 0, 5, 3, 2, 3, 2, 0.05]] },
    ]);
    expect(Object.keys(reaches)).toEqual(['a:1', 'a:2']);
    expect(reaches['a:2'].duct).toBeCloseTo(3 + 3 + 3 + 3, 12);
  });

  it('loses nothing where equal channels part at a small angle', () => {
    const { reaches } = describeNetwork([
      { name: 'stem', widthMm: 0.2, lines: [[0, 0, 5, 0]] },
      { name: 'up', widthMm: 0.2, lines: [[5, 0, 9, 1]] },
      { name: 'down', widthMm: 0.2, lines: [[5, 0, 9, -1]] },
    ]);
    expect(reaches.up.duct).toBeCloseTo(Math.hypot(4, 1), 12);
    expect(reaches.down.duct).toBeCloseTo(Math.hypot(4, 1), 12);
  });
});

describe('rule 6: wells', () => {
  it('counts centreline from rim to rim only', () => {
    const { reaches } = describeNetwork([MAIN], [IN, OUT]);
    expect(reaches.main.duct).toBeCloseTo(9, 12);
    expect([reaches.main.from, reaches.main.to]).toEqual(['in', 'out']);
  });

  it('splits a channel that passes through a port', () => {
    const { reaches } = describeNetwork([MAIN], [{ name: 'mid', x: 4, y: 0.3, radiusMm: 0.5 }]);
    expect(reaches['main:1'].duct).toBeCloseTo(4 - 0.4, 12);
    expect(reaches['main:2'].duct).toBeCloseTo(6 - 0.4, 12);
    expect(reaches['main:1'].to).toBe('mid');
  });

  it('lets a channel drawn to the rim touch, also when it is half a slack short', () => {
    for (const x of [0.5, 0.5005]) {
      const { reaches } = describeNetwork([{ name: 'a', widthMm: 0.1, lines: [[x, 0, 5, 0]] }], [IN]);
      expect(reaches.a.from).toBe('in');
      expect(reaches.a.duct).toBeCloseTo(4.5, 12);
    }
  });

  it('joins a circle that overlaps only the strip at the nearest point of the centreline', () => {
    const { reaches } = describeNetwork([MAIN], [{ name: 'mid', x: 4, y: 0.6, radiusMm: 0.5 }]);
    expect(reaches['main:1'].duct).toBeCloseTo(4, 12);
    expect(reaches['main:2'].from).toBe('mid');
  });

  it('does not join a circle that misses the strip', () => {
    const { network } = describeNetwork([MAIN], [{ name: 'mid', x: 4, y: 0.71, radiusMm: 0.5 }]);
    expect(network.reachCount).toBe(1);
  });

  it('leaves out a stub beyond the rim no longer than the larger of width and radius', () => {
    const short = describeNetwork([{ ...MAIN, lines: [[-1, 0, 10, 0]] }], [IN]);
    expect(Object.keys(short.reaches)).toEqual(['main']);
    const long = describeNetwork([{ ...MAIN, lines: [[-1.01, 0, 10, 0]] }], [IN]);
    expect(Object.keys(long.reaches)).toEqual(['main:1', 'main:2']);
  });

  it('opens every plane that the port touches', () => {
    const { reaches } = describeNetwork(
      [MAIN, { name: 'upper', widthMm: 0.2, plane: 1, lines: [[0, 0, 0, 8]] }],
      [IN],
    );
    expect(reaches.main.from).toBe('in');
    expect(reaches.upper.from).toBe('in');
  });

  it('trims a narrow channel beyond the rim where it still runs inside a wide one', () => {
    const { reaches } = describeNetwork(
      [
        { name: 'wide', widthMm: 2, lines: [[0, 0, 10, 0]] },
        { name: 'narrow', widthMm: 0.1, lines: [[0, 0, 0, 6]] },
      ],
      [IN],
    );
    // rim at 0.5, wide strip to 1: half a millimetre counts 1/20
    expect(reaches.narrow.duct).toBeCloseTo(5 + 0.5 / 20, 12);
  });
});

describe('rule 7: reaches', () => {
  it('makes one reach of subpaths of one channel that meet end to end', () => {
    const { reaches } = describeNetwork([
      {
        name: 'a',
        widthMm: 0.1,
        lines: [
          [0, 0, 5, 0],
          [5, 0, 5, 4],
        ],
      },
    ]);
    expect(reaches.a.duct).toBeCloseTo(9, 12);
    expect(reaches.a.segments).toBe(2);
  });

  it('starts a closed channel that no node interrupts at its first point', () => {
    const { reaches, network } = describeNetwork([
      { name: 'ring', widthMm: 0.1, closed: true, lines: [[0, 0, 3, 0, 3, 3, 0, 3, 0, 0]] },
    ]);
    expect(reaches.ring.from).toBe(reaches.ring.to);
    expect(reaches.ring.duct).toBeCloseTo(12, 12);
    expect([network.nodeX[0], network.nodeY[0]]).toEqual([0, 0]);
  });

  it('cuts a closed channel at its nodes and joins what meets at its first point', () => {
    const { reaches } = describeNetwork([
      { name: 'ring', widthMm: 0.1, closed: true, lines: [[0, 0, 3, 0, 3, 3, 0, 3, 0, 0]] },
      { name: 'x', widthMm: 0.1, lines: [[1.5, -4, 1.5, 9]] },
    ]);
    expect(reaches['ring:1'].duct + reaches['ring:2'].duct).toBeCloseTo(12, 12);
    expect(Object.keys(reaches).filter((name) => name.startsWith('ring'))).toHaveLength(2);
  });

  it('joins collinear pieces into one segment', () => {
    const { reaches } = describeNetwork([{ name: 'a', widthMm: 0.1, lines: [[0, 0, 1, 0, 2, 0, 2, 2]] }]);
    expect(reaches.a.segments).toBe(2);
  });

  it('keeps strokes drawn in two as two reaches of the same total length', () => {
    const { reaches, nodes } = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 2, 0]] },
      { name: 'b', widthMm: 0.1, lines: [[2, 0, 5, 0]] },
    ]);
    expect(reaches.a.duct + reaches.b.duct).toBeCloseTo(5, 12);
    expect(nodes.J1).toBe('junction');
  });
});

describe('awkward drawings', () => {
  it('leaves out the end piece that overshoots an earlier turn of its own channel', () => {
    const { reaches, nodes } = describeNetwork([
      { name: 'a', widthMm: 0.2, lines: [[0, 0, 5, 0, 5, 3, 2, 3, 2, -0.05]] },
    ]);
    expect(Object.keys(reaches)).toEqual(['a:1', 'a:2']);
    expect(reaches['a:2'].duct).toBeCloseTo(12, 12);
    expect(Object.values(nodes).sort()).toEqual(['end', 'junction']);
  });

  it('joins an end that overshoots a centreline to no farther strip that also holds it', () => {
    const others: ChannelSpec[] = [
      { name: 'main', widthMm: 0.1, lines: [[0, 0, 10, 0]] },
      { name: 'chamber', widthMm: 2, lines: [[5.5, 0, 5.5, -9]] },
    ];
    const past = describeNetwork([...others, { name: 'side', widthMm: 0.1, lines: [[5, 4, 5, -0.02]] }]);
    const exact = describeNetwork([...others, { name: 'side', widthMm: 0.1, lines: [[5, 4, 5, 0]] }]);
    expect(past.reaches).toEqual(exact.reaches);
  });

  it('joins two ends that miss each other sideways by one piece, of the wider channel or else the first drawn', () => {
    const equal = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 5, 0]] },
      { name: 'b', widthMm: 0.1, lines: [[5, 0.03, 9, 0.03]] },
    ]).reaches;
    expect(Object.keys(equal)).toEqual(['a', 'b']);
    expect(equal.a.duct).toBeCloseTo(5.03, 12);
    expect(equal.b.duct).toBeCloseTo(4, 12);
    const wider = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[0, 0, 5, 0]] },
      { name: 'b', widthMm: 0.2, lines: [[5, 0.03, 9, 0.03]] },
    ]).reaches;
    expect(wider.a.duct).toBeCloseTo(5, 12);
    expect(wider.b.duct).toBeCloseTo(4.03, 12);
  });

  it('keeps the whole length of a ring that another stroke meets within slack of its first point', () => {
    for (const line of [
      [0.0005, -4, 0.0005, 0],
      [-4, 0.0005, 0, 0.0005],
      [0, -4, 0, 0],
    ]) {
      const { reaches } = describeNetwork([
        { name: 'ring', widthMm: 0.1, closed: true, lines: [[0, 0, 3, 0, 3, 3, 0, 3, 0, 0]] },
        { name: 'x', widthMm: 0.1, lines: [line] },
      ]);
      expect(Object.keys(reaches)).toEqual(['ring', 'x']);
      expect(reaches.ring.duct).toBeCloseTo(12, 12);
    }
  });

  it('keeps the length of a channel drawn as many strokes shorter than the slack', () => {
    const strokes = Array.from({ length: 1000 }, (_, k) => ({
      name: `s${k}`,
      widthMm: 0.1,
      lines: [[k * 0.0008, 0, (k + 1) * 0.0008, 0]],
    }));
    const { network } = describeNetwork([
      { name: 'a', widthMm: 0.1, lines: [[-3, 0, 0, 0]] },
      ...strokes,
      { name: 'b', widthMm: 0.1, lines: [[0.8, 0, 5, 0]] },
    ]);
    expect(network.reachCount).toBe(1002);
    expect(network.reachDuctMm.reduce((sum, length) => sum + length, 0)).toBeCloseTo(8, 9);
  });

  for (const [what, branch] of [
    ['a deeper', { widthMm: 0.1, depthMm: 0.2 }],
    ['a wider', { widthMm: 0.6 }],
  ] as const) {
    for (const [how, slant] of [
      ['square', 0],
      ['at 45°', 1],
    ] as const) {
      it(`trims the channel that ${what} branch meets ${how} the same, however far the branch was drawn`, () => {
        const ductsFor = (y: number) => {
          const line = [5 + slant * 4, 4, 5 + slant * y, y];
          const { reaches } = describeNetwork([MAIN, { name: 'side', ...branch, lines: [line] }], [IN, OUT]);
          return ['main:1', 'main:2', 'side'].map((name) => reaches[name].duct);
        };
        const exact = ductsFor(0);
        expect(exact[0] + exact[1]).toBeLessThan(9 - 0.04);
        for (const y of [0.2, 0.1, 0.05, -0.15]) {
          ductsFor(y).forEach((duct, k) => {
            expect(duct).toBeCloseTo(exact[k], 9);
          });
        }
      });
    }
  }

  it('joins a circle over the walls of two subpaths to both, as over two strokes', () => {
    const lines = [
      [0, 0, 10, 0],
      [0, 1, 10, 1],
    ];
    const { reaches } = describeNetwork(
      [{ name: 'a', widthMm: 0.4, lines }],
      [{ name: 'p', x: 5, y: 0.5, radiusMm: 0.35 }],
    );
    expect(Object.values(reaches).map(({ from, to }) => from === 'p' || to === 'p')).toEqual([
      true,
      true,
      true,
      true,
    ]);
  });

  it('loses nothing where a circle touches the wall near a seam', () => {
    const { reaches } = describeNetwork(
      [
        { name: 'a', widthMm: 0.4, lines: [[0, 0, 5, 0]] },
        { name: 'b', widthMm: 0.4, lines: [[5, 0, 10, 0]] },
      ],
      [{ name: 'p', x: 5.1, y: 0.45, radiusMm: 0.3 }],
    );
    expect(reaches.a.duct + reaches['b:1'].duct).toBeCloseTo(5.1, 12);
    expect(reaches['b:2'].duct).toBeCloseTo(4.9, 12);
  });
});

describe('the drawing turned, mirrored and shifted', () => {
  const channels: ChannelSpec[] = [
    { name: 'main', widthMm: 0.4, lines: [[0, 0, 10, 0]] },
    { name: 'side', widthMm: 0.1, lines: [[5, 4, 5, 0.1]] },
    { name: 'slant', widthMm: 0.2, lines: [[1, -3, 4, 0.05]] },
    { name: 'chamber', widthMm: 1.5, depthMm: 0.2, lines: [[5, 4, 9, 4, 9, 8]] },
  ];
  const ports: PortSpec[] = [IN, OUT, { name: 'top', x: 9, y: 8, radiusMm: 0.9 }];
  const moved = (map: (x: number, y: number) => readonly [number, number]) =>
    describeNetwork(
      channels.map((spec) => ({
        ...spec,
        lines: spec.lines.map((line) => {
          const out: number[] = [];
          for (let k = 0; k < line.length; k += 2) out.push(...map(line[k], line[k + 1]));
          return out;
        }),
      })),
      ports.map((port) => {
        const [x, y] = map(port.x, port.y);
        return { ...port, x, y };
      }),
    ).reaches;
  const angle = (37 * Math.PI) / 180;
  const maps: Record<string, (x: number, y: number) => readonly [number, number]> = {
    turned: (x, y) => [x * Math.cos(angle) - y * Math.sin(angle), x * Math.sin(angle) + y * Math.cos(angle)],
    mirrored: (x, y) => [-x, y],
    'shifted by 1e6 mm': (x, y) => [x + 1e6, y - 1e6],
  };
  for (const [name, map] of Object.entries(maps)) {
    it(`has the same reaches ${name}`, () => {
      const still = moved((x, y) => [x, y]);
      const after = moved(map);
      expect(Object.keys(after)).toEqual(Object.keys(still));
      for (const [reach, one] of Object.entries(still)) {
        expect(after[reach].from).toBe(one.from);
        expect(after[reach].to).toBe(one.to);
        expect(Math.abs(after[reach].duct / one.duct - 1)).toBeLessThan(1e-9);
      }
    });
  }
});
