import type { Closest, Line } from './closest.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { nearMisses, paintedEndOf } from './misses.ts';
import { portsNear } from './near-ports.ts';
import { gapBetween, gapOfEndToHole, gapToEnd, gapToHole, lineOf } from './painted.ts';
import { partsOnDrawing } from './parts.ts';
import { type Tip, tipsOf } from './tips.ts';

/** Where one connected part comes near another without meeting it. */
export interface Gap {
  /** Names of the channel or well on either side, the side of the part asked about first. */
  readonly from: string;
  readonly to: string;
  readonly gapMm: number;
  /** The end that stands at the gap; the middle of the gap where none does. */
  readonly xMm: number;
  readonly yMm: number;
  readonly mark: readonly [number, number, number, number];
  /** The channel whose end stands at the gap, and what it stops short of; null where no end does. */
  readonly stopsShort: { readonly channel: string; readonly of: string } | null;
}

/** A gap between two parts, seen from the first. */
interface PartGap extends Closest {
  readonly part: number;
  readonly other: number;
  readonly from: string;
  readonly to: string;
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
  const atTip = smallestOf(missGaps(context), part) ?? smallestOf(pointed, part) ?? smallestOf(beside, part);
  const gap = atTip ?? leastDistance(context, part);
  return gap === null ? null : toGap(gap, part);
}

function smallestOf(gaps: readonly PartGap[], part: number): PartGap | null {
  let best: PartGap | null = null;
  for (const gap of gaps) {
    if (gap.part !== part && gap.other !== part) continue;
    if (best === null || gap.distanceMm < best.distanceMm - SAME_MM) best = gap;
  }
  return best;
}

function toGap(gap: PartGap, part: number): Gap {
  const { x1, y1, x2, y2, tip } = gap;
  const isFirst = gap.part === part;
  return {
    from: isFirst ? gap.from : gap.to,
    to: isFirst ? gap.to : gap.from,
    gapMm: Math.max(0, gap.distanceMm),
    xMm: tip?.x ?? (x1 + x2) / 2,
    yMm: tip?.y ?? (y1 + y2) / 2,
    mark: [x1, y1, x2, y2],
    stopsShort: tip === null ? null : { channel: gap.from, of: gap.to },
  };
}

/** Near misses between two parts. */
const missGaps = oncePerContext((context): PartGap[] => {
  const { chip } = context;
  const { ofCentreline, ofPort } = partsOnDrawing(context);
  return nearMisses(context).flatMap((miss) => {
    const part = ofCentreline[miss.centreline];
    const other = miss.port >= 0 ? ofPort[miss.port] : ofCentreline[miss.missed];
    if (part === other || part < 0 || other < 0) return [];
    const [x1, y1, x2, y2] = miss.mark;
    const to = miss.port >= 0 ? chip.ports[miss.port].name : channelName(context, miss.missed);
    const from = channelName(context, miss.centreline);
    return [{ part, other, from, to, tip: miss.tip, distanceMm: miss.gapMm, x1, y1, x2, y2 }];
  });
});

/** A dead end further than this from every other part tells of no gap. */
const MOST_TIP_GAP_MM = 3;

const COS_45 = Math.SQRT1_2;

/** For each dead end the nearest thing of another part in its plane, and the nearest well; what it points at goes before. */
const tipGaps = oncePerContext((context) => {
  const pointed: PartGap[] = [];
  const beside: PartGap[] = [];
  for (const tip of tipsOf(context)) {
    if (tip.kind !== 'end') continue;
    const { ahead, any } = tipGap(context, tip);
    if (ahead !== null) pointed.push(ahead);
    if (any !== null) beside.push(any);
  }
  return { pointed, beside };
});

function tipGap(context: FindingContext, tip: Tip) {
  const { ends, x, y, outX, outY } = tip;
  const { chip, network } = context;
  const { pieces, index } = network.trace.near;
  const { ofCentreline, ofPort } = partsOnDrawing(context);
  const c = ends[0] >> 1;
  const part = ofCentreline[c];
  const ahead = new Nearest();
  const any = new Nearest();
  if (part < 0) return { ahead: null, any: null };
  const face = paintedEndOf(network, ends[0]);
  const from = channelName(context, c);
  const plane = pieces.plane[pieces.firstPiece[c]];
  const isOther = (i: number): boolean => isOfAnother(context, i, part, plane);
  const r = MOST_TIP_GAP_MM + pieces.half[pieces.firstPiece[c]];
  for (const i of index.search(x - r, y - r, x + r, y + r, isOther)) {
    const other = pieces.centreline[i];
    offer({
      ...turned(gapToEnd(chip, pieces, i, face)),
      part,
      other: ofCentreline[other],
      from,
      to: channelName(context, other),
      tip,
    });
  }
  for (const p of portsNear(context, x, y, r)) {
    if (ofPort[p] === part) continue;
    const port = chip.ports[p];
    offer({ ...gapOfEndToHole(face, port), part, other: ofPort[p], from, to: port.name, tip });
  }
  return { ahead: ahead.best, any: any.best };

  function offer(gap: PartGap): void {
    if (gap.distanceMm > MOST_TIP_GAP_MM) return;
    any.offer(gap);
    const dx = gap.x2 - x;
    const dy = gap.y2 - y;
    if (dx * outX + dy * outY >= COS_45 * Math.hypot(dx, dy) - 1e-9) ahead.offer(gap);
  }
}

function isOfAnother(context: FindingContext, i: number, part: number, plane: number): boolean {
  const { pieces } = context.network.trace.near;
  const other = partsOnDrawing(context).ofCentreline[pieces.centreline[i]];
  return other >= 0 && other !== part && pieces.plane[i] === plane;
}

/** gapToEnd and gapToHole measure from the piece; a gap is told from the part's side. */
function turned({ distanceMm, x1, y1, x2, y2 }: Closest): Closest {
  return { distanceMm, x1: x2, y1: y2, x2: x1, y2: y1 };
}

/**
 * The smallest distance between the painted pieces and wells of a part and those of any other.
 * Cost: one query as wide as the smallest distance found so far for each piece and each well of the part.
 */
function leastDistance(context: FindingContext, part: number): PartGap | null {
  const { chip, network, flow } = context;
  const { pieces, index } = network.trace.near;
  const { ofCentreline, ofPort, firstPiece, pieceOf } = partsOnDrawing(context);
  const nearest = new Nearest();
  const emptyPlanes = new Set<number>();
  for (let k = firstPiece[part]; k < firstPiece[part + 1]; k++) {
    const i = pieceOf[k];
    const line = lineOf(pieces, i);
    const margin = Math.SQRT2 * pieces.half[i];
    const plane = pieces.plane[i];
    const from = channelName(context, pieces.centreline[i]);
    const isOther = (j: number): boolean => isOfAnother(context, j, part, plane);
    if (!emptyPlanes.has(plane)) {
      const any = visit(line, margin, isOther, (j) => {
        const other = pieces.centreline[j];
        const names = { from, to: channelName(context, other), tip: null };
        nearest.offer({ ...gapBetween(chip, pieces, i, j), part, other: ofCentreline[other], ...names });
      });
      if (!any) emptyPlanes.add(plane);
    }
    const within = pieces.length[i] / 2 + margin + Math.max(0, nearest.best?.distanceMm ?? Infinity);
    for (const p of portsNear(context, (line[0] + line[2]) / 2, (line[1] + line[3]) / 2, within)) {
      if (ofPort[p] === part) continue;
      const port = chip.ports[p];
      const names = { from, to: port.name, tip: null };
      nearest.offer({ ...gapToHole(chip, pieces, i, port), part, other: ofPort[p], ...names });
    }
  }
  for (const p of flow?.parts[part].ports ?? []) {
    const port = chip.ports[p];
    const isOther = (j: number): boolean => {
      const other = ofCentreline[pieces.centreline[j]];
      return other >= 0 && other !== part;
    };
    visit([port.xMm, port.yMm, port.xMm, port.yMm], port.radiusMm, isOther, (j) => {
      const other = pieces.centreline[j];
      const names = { from: port.name, to: channelName(context, other), tip: null };
      const gap = turned(gapToHole(chip, pieces, j, port));
      nearest.offer({ ...gap, part, other: ofCentreline[other], ...names });
    });
  }
  return nearest.best;

  /** Measures all pieces that may be nearer to a line than what was found; false when there is none to look at. */
  function visit(
    [ax, ay, bx, by]: Line,
    margin: number,
    isWanted: (piece: number) => boolean,
    measure: (piece: number) => void,
  ): boolean {
    if (nearest.best === null) {
      const [first] = index.neighbors((ax + bx) / 2, (ay + by) / 2, 1, Number.POSITIVE_INFINITY, isWanted);
      if (first === undefined) return false;
      measure(first);
    }
    const r = margin + Math.max(0, nearest.best?.distanceMm ?? 0);
    index
      .search(
        Math.min(ax, bx) - r,
        Math.min(ay, by) - r,
        Math.max(ax, bx) + r,
        Math.max(ay, by) + r,
        isWanted,
      )
      .forEach(measure);
    return true;
  }
}

function channelName({ chip, network }: FindingContext, centreline: number): string {
  return chip.channels[network.trace.near.pieces.centrelineChannel[centreline]].name;
}

class Nearest {
  best: PartGap | null = null;

  offer(gap: PartGap): void {
    if (this.best === null || gap.distanceMm < this.best.distanceMm - SAME_MM) this.best = gap;
  }
}

/** Distances that differ by rounding only are equal, so that a turned drawing names the same place. */
const SAME_MM = 1e-9;
