import { endPiece } from '../geometry/pieces.ts';
import { type Closest, type Line, lineBetween, middleOf, type Place, turned } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { nearMisses, sidesOf } from './misses.ts';
import { portsNear } from './near-ports.ts';
import { gapBetween, gapOf, gapTo, gapToHole, lineOf, paintedEnd, paintedHole } from './painted.ts';
import { channelMember, type PartMember, partsOnDrawing, portMember } from './parts.ts';
import { type Tip, tipsOf } from './tips.ts';

/** Where one connected part comes near another without meeting it: the end that stands there, else the middle. */
export interface Gap extends Place {
  /** Names of the channel or well on either side, the side of the part asked about first. */
  readonly from: string;
  readonly to: string;
  readonly gapMm: number;
  readonly mark: Line;
  /** The channel whose end stands at the gap, and what it stops short of; null where no end does. */
  readonly stopsShort: { readonly channel: string; readonly of: string } | null;
}

/** A gap between members of two parts, seen from the first. */
interface PartGap extends Closest {
  readonly from: PartMember;
  readonly to: PartMember;
  /** The tip that stands there, if one does: an end of `from`. */
  readonly tip: Tip | null;
}

/**
 * The gap that most likely cuts a part off: the smallest near miss between it and another part; else the smallest
 * distance from an end of either that stands dead; else the smallest distance between it and any other part. Null when
 * there is no other part.
 */
export function nearestGap(context: FindingContext, part: number): Gap | null {
  const { pointed, beside } = tipGaps(context);
  const gap =
    smallestOf(missGaps(context), part) ??
    smallestOf(pointed, part) ??
    smallestOf(beside, part) ??
    leastDistance(context, part);
  return gap === null ? null : toGap(gap, part);
}

function smallestOf(gaps: readonly PartGap[], part: number): PartGap | null {
  const smallest = new Smallest();
  for (const gap of gaps) if (gap.from.part === part || gap.to.part === part) smallest.offer(gap);
  return smallest.gap;
}

function toGap(gap: PartGap, part: number): Gap {
  const { tip } = gap;
  const mark = lineBetween(gap);
  const [own, other] = gap.from.part === part ? [gap.from, gap.to] : [gap.to, gap.from];
  return {
    from: own.name,
    to: other.name,
    gapMm: Math.max(0, gap.distanceMm),
    ...(tip === null ? middleOf(mark) : { xMm: tip.x, yMm: tip.y }),
    mark,
    stopsShort: tip === null ? null : { channel: gap.from.name, of: gap.to.name },
  };
}

/** Near misses between two parts. */
const missGaps = oncePerContext((context): PartGap[] =>
  nearMisses(context).flatMap((miss) => {
    const [from, to] = sidesOf(context, miss);
    if (from.part === to.part || from.part < 0 || to.part < 0) return [];
    const [x1, y1, x2, y2] = miss.mark;
    return [{ from, to, tip: miss.tip, distanceMm: miss.gapMm, x1, y1, x2, y2 }];
  }),
);

/** A dead end further than this from every other part tells of no gap. */
const MOST_TIP_GAP_MM = 3;

const COS_45 = Math.SQRT1_2;

/** For each dead end the nearest thing of another part in its plane, and the nearest well; what it points at goes before. */
const tipGaps = oncePerContext((context) => {
  const gaps = tipsOf(context)
    .filter(({ kind }) => kind === 'end')
    .map((tip) => tipGap(context, tip));
  return {
    pointed: gaps.flatMap(({ ahead }) => ahead.gap ?? []),
    beside: gaps.flatMap(({ any }) => any.gap ?? []),
  };
});

function tipGap(context: FindingContext, tip: Tip) {
  const { ends, x, y, outX, outY } = tip;
  const { chip, network } = context;
  const { pieces, index } = network.trace.near;
  const ahead = new Smallest();
  const any = new Smallest();
  const from = channelMember(context, ends[0] >> 1);
  if (from.part < 0) return { ahead, any };
  const face = paintedEnd(network, ends[0]);
  const piece = endPiece(pieces, ends[0]);
  const r = MOST_TIP_GAP_MM + pieces.half[piece];
  const isOther = otherTest(context, from.part, pieces.plane[piece]);
  for (const i of index.search(x - r, y - r, x + r, y + r, isOther)) {
    offer(turned(gapTo(chip, pieces, i, face)), channelMember(context, pieces.centreline[i]));
  }
  for (const p of portsNear(context, x, y, r)) {
    offer(gapOf(face, paintedHole(chip.ports[p])), portMember(context, p));
  }
  return { ahead, any };

  function offer(closest: Closest, to: PartMember): void {
    if (to.part === from.part || closest.distanceMm > MOST_TIP_GAP_MM) return;
    const gap = { ...closest, from, to, tip };
    any.offer(gap);
    const dx = gap.x2 - x;
    const dy = gap.y2 - y;
    if (dx * outX + dy * outY >= COS_45 * Math.hypot(dx, dy) - 1e-9) ahead.offer(gap);
  }
}

/** Tells pieces of other parts, in a plane or (null) in any. */
function otherTest(context: FindingContext, part: number, plane: number | null): (piece: number) => boolean {
  const { pieces } = context.network.trace.near;
  const { ofCentreline } = partsOnDrawing(context);
  return (i) => {
    const other = ofCentreline[pieces.centreline[i]];
    return other >= 0 && other !== part && (plane === null || pieces.plane[i] === plane);
  };
}

/**
 * The smallest distance between the painted pieces and wells of a part and those of any other.
 * Cost: one query as wide as the smallest distance found so far for each piece and each well of the part.
 */
function leastDistance(context: FindingContext, part: number): PartGap | null {
  const { chip, network, flow } = context;
  const { pieces, index } = network.trace.near;
  const { ofPort, firstPiece, pieceOf } = partsOnDrawing(context);
  const smallest = new Smallest();
  const emptyPlanes = new Set<number>();
  for (let k = firstPiece[part]; k < firstPiece[part + 1]; k++) {
    const i = pieceOf[k];
    const line = lineOf(pieces, i);
    const margin = Math.SQRT2 * pieces.half[i];
    const plane = pieces.plane[i];
    const from = channelMember(context, pieces.centreline[i]);
    if (!emptyPlanes.has(plane)) {
      const any = visit(line, margin, plane, (j) => offer(from, j, gapBetween(chip, pieces, i, j)));
      if (!any) emptyPlanes.add(plane);
    }
    const within = pieces.length[i] / 2 + margin + Math.max(0, smallest.gap?.distanceMm ?? Infinity);
    for (const p of portsNear(context, (line[0] + line[2]) / 2, (line[1] + line[3]) / 2, within)) {
      if (ofPort[p] === part) continue;
      const gap = gapToHole(chip, pieces, i, chip.ports[p]);
      smallest.offer({ ...gap, from, to: portMember(context, p), tip: null });
    }
  }
  for (const p of flow?.parts[part].ports ?? []) {
    const port = chip.ports[p];
    const from = portMember(context, p);
    visit([port.xMm, port.yMm, port.xMm, port.yMm], port.radiusMm, null, (j) =>
      offer(from, j, turned(gapToHole(chip, pieces, j, port))),
    );
  }
  return smallest.gap;

  function offer(from: PartMember, piece: number, gap: Closest): void {
    smallest.offer({ ...gap, from, to: channelMember(context, pieces.centreline[piece]), tip: null });
  }

  /** Measures all pieces that may be nearer to a line than what was found; false when there is none to look at. */
  function visit(
    [ax, ay, bx, by]: Line,
    margin: number,
    plane: number | null,
    measure: (piece: number) => void,
  ): boolean {
    const isOther = otherTest(context, part, plane);
    if (smallest.gap === null) {
      const [first] = index.neighbors((ax + bx) / 2, (ay + by) / 2, 1, Infinity, isOther);
      if (first === undefined) return false;
      measure(first);
    }
    const r = margin + Math.max(0, smallest.gap?.distanceMm ?? 0);
    index
      .search(Math.min(ax, bx) - r, Math.min(ay, by) - r, Math.max(ax, bx) + r, Math.max(ay, by) + r, isOther)
      .forEach(measure);
    return true;
  }
}

class Smallest {
  gap: PartGap | null = null;

  offer(gap: PartGap): void {
    if (this.gap === null || gap.distanceMm < this.gap.distanceMm - SAME_MM) this.gap = gap;
  }
}

/** Distances that differ by rounding only are equal, so that a turned drawing names the same place. */
const SAME_MM = 1e-9;
