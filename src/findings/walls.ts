import { minWallMm } from '../chip/limits.ts';
import type { Channel } from '../chip/types.ts';
import { findNearPairs, type Nearness } from '../geometry/near.ts';
import { closePorts } from './close-ports.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { type UnjoinedArea, unjoinedAreas } from './etched-area.ts';
import { replacesWall } from './misses.ts';
import { doubleStrokes } from './overlaps.ts';
import { byPair, pairKey } from './pairs.ts';
import { found, isBelow, type Rule, toFinding, withoutLimit } from './rule.ts';
import { findThinWalls, type ThinWall } from './thin.ts';
import type { Finding } from './types.ts';
import { findWellWalls } from './well-walls.ts';
import { distanceText, limitText, moveText, sizeAtMostText } from './words.ts';

/** What stands between two channels, and between a channel and a well. */
export const wallRules: readonly Rule[] = [
  {
    names: ['thin-wall', 'merged-walls'],
    run: (context) => {
      const findings = [
        ...wallFaults(context).map((wall) => toWallFinding(context, wall)),
        ...wellFindings(context),
        ...mergedWells(context),
      ];
      return context.chip.channels.length > 0 && minWallMm(context.chip, Number.NaN) === null
        ? { findings, notRun: withoutLimit('thin-wall', 'min_wall', context).notRun }
        : found(findings);
    },
  },
  {
    names: ['slender-wall'],
    run: (context) =>
      context.chip.process === 'cast elastomer'
        ? found(slenderWalls(context).map((wall) => toSlenderFinding(context, wall)))
        : {
            findings: [],
            notRun: [{ rule: 'slender-wall', why: 'only for the process "cast elastomer"' }],
          },
  },
];

/** Walls below min_wall; with no min_wall, only where no material at all is left. */
const wallFaults = oncePerContext((context): readonly ThinWall[] => {
  const { chip, network } = context;
  const doubles = byPair(
    doubleStrokes(context),
    ({ a }) => a,
    ({ b }) => b,
  );
  const limits = new Map<number, number>();
  const limitOfDepth = (depthMm: number): number => {
    let limit = limits.get(depthMm);
    if (limit === undefined) {
      limit = minWallMm(chip, depthMm)?.value ?? 0;
      limits.set(depthMm, limit);
    }
    return limit;
  };
  const limitOf = (a: number, b: number): number => limitOfDepth(deeper(chip.channels[a], chip.channels[b]));
  return withUnjoined(context, findThinWalls(context, network.trace.near, limitOf), limitOf).filter(
    (wall) =>
      !replacesWall(context, wall) &&
      !(doubles.get(pairKey(wall.centrelineA, wall.centrelineB)) ?? []).some(
        ({ from, to }) => from <= wall.toA && to >= wall.fromA,
      ),
  );
});

/** The walls, and the overlaps that nothing joins: these say it where a wall and an overlap are one place. */
function withUnjoined(
  context: FindingContext,
  walls: readonly ThinWall[],
  limitOf: (channelA: number, channelB: number) => number,
): readonly ThinWall[] {
  const areas = unjoinedAreas(context);
  if (areas.length === 0) return walls;
  const { pieces } = context.network.trace.near;
  const wallsOf = byPair(
    walls,
    ({ centrelineA }) => centrelineA,
    ({ centrelineB }) => centrelineB,
  );
  const replaced = new Set<ThinWall>();
  for (const area of areas) {
    for (const wall of wallsOf.get(pairKey(area.centrelineA, area.centrelineB)) ?? []) {
      if (isOnePlace(wall, area)) replaced.add(wall);
    }
  }
  return [
    ...walls.filter((wall) => !replaced.has(wall)),
    ...areas.map((area) => ({
      ...area,
      limitMm: limitOf(pieces.channel[area.pieceA], pieces.channel[area.pieceB]),
    })),
  ];
}

function isOnePlace(wall: ThinWall, area: UnjoinedArea): boolean {
  const turned = wall.centrelineA !== area.centrelineA;
  const [fromA, toA, fromB, toB] = turned
    ? [wall.fromB, wall.toB, wall.fromA, wall.toA]
    : [wall.fromA, wall.toA, wall.fromB, wall.toB];
  return fromA <= area.toA && toA >= area.fromA && fromB <= area.toB && toB >= area.fromB;
}

/** Walls of soft material that stand, but are thinner than half as thick as they are high. */
function slenderWalls(context: FindingContext): readonly ThinWall[] {
  const { chip } = context;
  const limitOf = (a: number, b: number): number => {
    const depthMm = deeper(chip.channels[a], chip.channels[b]);
    return Number.isNaN(depthMm) ? Number.NaN : depthMm / 2;
  };
  const widest = chip.channels.reduce((most, { depthMm }) => Math.max(most, depthMm / 2 || 0), 0);
  const faults = byPair(
    wallFaults(context),
    ({ centrelineA }) => centrelineA,
    ({ centrelineB }) => centrelineB,
  );
  const { bulge } = context.network.trace.near.pieces;
  return findThinWalls(context, nearPairsWithin(context, widest), limitOf).filter((wall) => {
    const minimum = minWallMm(chip, 2 * wall.limitMm);
    const surelyMm = wall.gapMm + bulge[wall.pieceA] + bulge[wall.pieceB];
    return (
      !(minimum !== null && isBelow(surelyMm, minimum.value)) &&
      wall.gapMm > 0 &&
      !replacesWall(context, wall) &&
      // One fault, one finding: a wall that is too thin somewhere is not slender as well.
      !(faults.get(pairKey(wall.centrelineA, wall.centrelineB)) ?? []).some(
        ({ fromA, toA }) => fromA <= wall.toA && toA >= wall.fromA,
      )
    );
  });
}

/** The network's own list of near pairs; a wider one only where walls half as thick as they are high need it. */
function nearPairsWithin({ chip, network }: FindingContext, withinMm: number): Nearness {
  const { near } = network.trace;
  if (withinMm <= near.withinMm) return near;
  return findNearPairs(near.pieces, withinMm, () => Math.SQRT2, chip.file);
}

function toWallFinding({ chip, network }: FindingContext, wall: ThinWall): Finding {
  const { pieces } = network.trace.near;
  const one = chip.channels[pieces.channel[wall.pieceA]];
  const two = chip.channels[pieces.channel[wall.pieceB]];
  const limit = minWallMm(chip, deeper(one, two));
  const needMm = Math.max(wall.limitMm - wall.gapMm, 0);
  const pair = one === two ? `two stretches of ${one.name}` : `${one.name} and ${two.name}`;
  const along = wall.lengthMm > 0.0005 ? ` along ${distanceText(wall.lengthMm)}` : '';
  const common = {
    at: middleOf(wall),
    names: one === two ? [one.name] : [one.name, two.name],
    mark: markOf(wall),
    measure: { value: wall.gapMm / 1e3, limit: wall.limitMm / 1e3, unit: 'm' },
  };
  if (wall.gapMm <= 1e-9 * (pieces.half[wall.pieceA] + pieces.half[wall.pieceB])) {
    const overlap = wall.gapMm < -0.0005 ? `overlap by ${distanceText(-wall.gapMm)}` : 'touch';
    return toFinding('merged-walls', 'blocker', {
      ...common,
      measure: { ...common.measure, value: Math.min(0, wall.gapMm) / 1e3 },
      message: `${pair} ${overlap}${along} and nothing joins them there: no duct describes the place`,
      fix: `${apart(one, two, needMm, limit === null ? 'more than ' : '')}; if they are meant to be one, draw one channel`,
    });
  }
  const limitWords = limit === null ? '' : `; min_wall is ${limitText(distanceText(limit.value), limit)}`;
  return toFinding('thin-wall', 'blocker', {
    ...common,
    message: `${distanceText(wall.gapMm)} of wall is left between ${pair}${along}${limitWords}`,
    fix: apart(one, two, needMm, ''),
  });
}

function apart(one: Channel, two: Channel, needMm: number, more: string): string {
  if (one === two) {
    const narrower = one.drawnWidthMm - needMm;
    return `move the two stretches of ${one.name} ${more}${moveText(needMm)} further apart${
      narrower > 0 ? `, or narrow it to ${sizeAtMostText(narrower)}` : ''
    }`;
  }
  const narrowOne = one.drawnWidthMm - needMm;
  const narrowTwo = two.drawnWidthMm - needMm;
  const narrow =
    narrowOne > 0 && narrowTwo > 0
      ? `, or narrow ${narrowedText(sizeAtMostText(narrowOne), sizeAtMostText(narrowTwo))}`
      : '';
  return `move ${one.name} ${more}${moveText(needMm)} away from ${two.name}${narrow}`;
}

function narrowedText(one: string, two: string): string {
  return one === two ? `both to ${one}` : `them to ${one} and ${two}`;
}

function toSlenderFinding({ chip, network }: FindingContext, wall: ThinWall): Finding {
  const { pieces } = network.trace.near;
  const one = chip.channels[pieces.channel[wall.pieceA]];
  const two = chip.channels[pieces.channel[wall.pieceB]];
  const pair = one === two ? `two stretches of ${one.name}` : `${one.name} and ${two.name}`;
  return toFinding('slender-wall', 'caution', {
    message: `the wall between ${pair} is ${distanceText(wall.gapMm)} thick and ${distanceText(2 * wall.limitMm)} high along ${distanceText(wall.lengthMm)}; a soft wall thinner than half its height may lean or not seal`,
    fix: apart(one, two, wall.limitMm - wall.gapMm, ''),
    at: middleOf(wall),
    names: one === two ? [one.name] : [one.name, two.name],
    measure: { value: wall.gapMm / 1e3, limit: wall.limitMm / 1e3, unit: 'm' },
    mark: markOf(wall),
  });
}

function wellFindings(context: FindingContext): Finding[] {
  const { chip } = context;
  return findWellWalls(
    context,
    (channel) => minWallMm(chip, chip.channels[channel].depthMm)?.value ?? null,
  ).map((wall) => {
    const channel = chip.channels[wall.channel];
    const port = chip.ports[wall.port];
    const limit = minWallMm(chip, channel.depthMm);
    const needMm = wall.limitMm - wall.gapMm;
    const limitWords = limit === null ? '' : `; min_wall is ${limitText(distanceText(limit.value), limit)}`;
    return toFinding('thin-wall', 'blocker', {
      message: `${distanceText(wall.gapMm)} of wall is left between ${channel.name} and the well ${port.name}, which it does not meet there${limitWords}`,
      fix: `move ${channel.name} ${moveText(needMm)} away from ${port.name}, or make the well ${moveText(2 * needMm)} smaller`,
      at: middleOf(wall),
      names: [channel.name, port.name],
      measure: { value: wall.gapMm / 1e3, limit: wall.limitMm / 1e3, unit: 'm' },
      mark: markOf(wall),
    });
  });
}

/** Two wells that overlap are one open hole; they are one node only where a centreline passes from one into the other. */
function mergedWells({ chip, network }: FindingContext): Finding[] {
  return closePorts(chip.ports, 0).flatMap(([p, q, gapMm]) => {
    if (-gapMm <= chip.joinWithinMm || network.portNode[p] === network.portNode[q]) return [];
    const [one, two] = [chip.ports[p], chip.ports[q]];
    const share = (one.radiusMm + gapMm / 2) / Math.hypot(two.xMm - one.xMm, two.yMm - one.yMm);
    return [
      toFinding('merged-walls', 'blocker', {
        message: `the wells ${one.name} and ${two.name} overlap by ${distanceText(-gapMm)}: they would be one open hole, but count as two ports`,
        fix: `move ${two.name} more than ${moveText(-gapMm)} away from ${one.name}; if they are meant to be one, draw one port`,
        at: {
          xMm: one.xMm + share * (two.xMm - one.xMm),
          yMm: one.yMm + share * (two.yMm - one.yMm),
        },
        names: [one.name, two.name],
        measure: { value: gapMm / 1e3, limit: 0, unit: 'm' },
      }),
    ];
  });
}

function middleOf({ mark: [x1, y1, x2, y2] }: Pick<ThinWall, 'mark'>) {
  return { xMm: (x1 + x2) / 2, yMm: (y1 + y2) / 2 };
}

function markOf({ mark: [x1Mm, y1Mm, x2Mm, y2Mm] }: Pick<ThinWall, 'mark'>) {
  return { x1Mm, y1Mm, x2Mm, y2Mm };
}

/** The deeper of two channels, mm; NaN only when neither depth is known. */
function deeper(one: Channel, two: Channel): number {
  if (Number.isNaN(one.depthMm)) return two.depthMm;
  return Number.isNaN(two.depthMm) ? one.depthMm : Math.max(one.depthMm, two.depthMm);
}
