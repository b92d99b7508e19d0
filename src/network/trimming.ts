import { piecesNear } from '../geometry/near.ts';
import { endPiece, type Pieces, pieceAt } from '../geometry/pieces.ts';
import { type Groups, itemsOf } from '../groups.ts';
import type { Draft } from './draft.ts';
import { isEqualDuct, isEqualSize } from './equal-ducts.ts';
import type { Kept } from './kept.ts';
import { KeptStrips } from './kept-strips.ts';
import type { Stops } from './stops.ts';
import { Strips } from './strips.ts';
import { TRIM_BY_RULE, TRIM_TO_WALL, type Trim, type Trims, toTrims } from './trims.ts';
import type { UnitedStrips } from './united-strips.ts';

/**
 * Rule 5: at a node, the piece of a channel (w, h) from the node to where its centreline first leaves the strip of
 * another channel that meets there (W, H) counts only as p · min(1, w/W) · min(1, h/H)³. Strips of equal width and depth
 * that meet end to end are one strip.
 *
 * Only strips near the piece at the node are asked, so a node where many channels meet costs no more than their pairs.
 */
export function findTrims(
  draft: Draft,
  stops: Stops,
  kept: Kept,
  byNode: Groups,
  strips: UnitedStrips,
  trimming: Uint8Array,
): Trims {
  const { centrelineClosed, centrelineCount } = draft.pieces;
  const trimmer = new Trimmer(draft, kept, strips);
  for (let node = 0; node + 1 < byNode.first.length; node++) {
    const own = itemsOf(byNode, node);
    if (own.length < 2 || areEqual(draft, stops, own)) continue;
    const here = toMeeting(draft, stops, own, strips.group, trimming[node]);
    for (const stop of own) {
      const c = stops.centreline[stop];
      const closed = centrelineClosed[c] === 1;
      if (closed || stops.from[stop] > kept.from[c]) trimmer.trimArm(here, c, stops.from[stop], -1);
      if (closed || stops.to[stop] < kept.to[c]) trimmer.trimArm(here, c, stops.to[stop], 1);
    }
  }
  return toTrims(centrelineCount, trimmer.found);
}

/** A node where unequal channels meet. */
interface Meeting {
  /** The strips that meet there. */
  readonly groups: ReadonlySet<number>;
  readonly isCrowded: boolean;
  /** The end pieces that were carried on to it: the list of near pairs knows them as drawn. */
  readonly grown: readonly number[];
  /** How rule 5 is applied there. */
  readonly trimming: number;
}

function toMeeting(
  { pieces }: Draft,
  stops: Stops,
  own: Int32Array,
  group: Int32Array,
  trimming: number,
): Meeting {
  const groups = new Set<number>();
  const grown: number[] = [];
  for (const stop of own) {
    const c = stops.centreline[stop];
    groups.add(group[c]);
    if (stops.from[stop] < 0) grown.push(endPiece(pieces, 2 * c));
    else if (stops.to[stop] > pieces.centrelineLength[c]) grown.push(endPiece(pieces, 2 * c + 1));
  }
  return { groups, isCrowded: own.length > FEW_STOPS, grown, trimming };
}

/** Up to so many stops at a node the strips of all are asked. */
const FEW_STOPS = 16;

class Trimmer {
  readonly found: Trim[] = [];
  private readonly draft: Draft;
  private readonly kept: Kept;
  private readonly united: UnitedStrips;
  private readonly strips: Strips;

  constructor(draft: Draft, kept: Kept, united: UnitedStrips) {
    this.draft = draft;
    this.kept = kept;
    this.united = united;
    this.strips = new Strips(draft, (c) => united.group[c], new KeptStrips(draft, kept, united.ends));
  }

  /** Trims a centreline from a place at a node on, in one direction, by every strip that meets there. */
  trimArm(here: Meeting, c: number, position: number, direction: 1 | -1): void {
    const { pieces } = this.draft;
    const own = this.united.group[c];
    for (const group of this.groupsAt(here, c, position, direction)) {
      // Channels of two planes meet in a well alone, and share no etched area.
      if (group === own || pieces.plane[pieces.firstPiece[group]] !== pieces.plane[pieces.firstPiece[c]])
        continue;
      const factorByRule = trimFactor(this.draft, c, group);
      if (factorByRule >= 1) continue;
      const factorResolved =
        here.trimming === TRIM_BY_RULE ? factorByRule : here.trimming === TRIM_TO_WALL ? 0 : 1;
      this.trimAlong(here, group, c, position, direction, { factorByRule, factorResolved });
    }
  }

  /** The strips at a node that may hold an arm: where many meet, only those near it can. */
  private groupsAt(here: Meeting, c: number, position: number, direction: 1 | -1): ReadonlySet<number> {
    const { groups } = here;
    if (!here.isCrowded) return groups;
    const { draft, united } = this;
    const near = new Set<number>();
    const add = (line: number): void => {
      if (groups.has(united.group[line])) near.add(united.group[line]);
    };
    const end = position < 0 ? 2 * c : position > draft.pieces.centrelineLength[c] ? 2 * c + 1 : -1;
    if (end >= 0 && draft.ends.joinedTo[end] >= 0) add(draft.ends.joinedTo[end]);
    const piece = pieceOf(draft.pieces, c, position, direction);
    for (const other of piecesNear(draft.near, piece)) add(draft.pieces.centreline[other]);
    return near;
  }

  /** Trims until the strip is left; where the stroke ends at a seam the walk goes on in its other half. */
  private trimAlong(
    { grown }: Meeting,
    group: number,
    c: number,
    position: number,
    direction: 1 | -1,
    factors: Factors,
  ): void {
    const { draft, kept, united, strips } = this;
    let line = c;
    let from = position;
    let way = direction;
    for (;;) {
      const length = strips.reach(line, from, way, group, grown);
      if (length > 0) this.addTrim(line, from, from + way * length, factors);
      if (draft.pieces.centrelineClosed[line] === 1) return;
      const end = way === 1 ? kept.to[line] : kept.from[line];
      const next = united.ends.seamWith[2 * line + (way === 1 ? 1 : 0)];
      if (next < 0 || Math.abs(from + way * length - end) > draft.slackMm || length <= 0) return;
      line = next >> 1;
      if (line === c) return;
      way = (next & 1) === 0 ? 1 : -1;
      from = way === 1 ? kept.from[line] : kept.to[line];
    }
  }

  /** A trim between two positions; on a closed centreline it may go on round its first point. */
  private addTrim(centreline: number, one: number, two: number, factors: Factors): void {
    const { centrelineClosed, centrelineLength } = this.draft.pieces;
    const from = Math.min(one, two);
    const to = Math.max(one, two);
    if (centrelineClosed[centreline] === 0) {
      this.found.push({ centreline, from, to, ...factors });
      return;
    }
    const total = centrelineLength[centreline];
    this.found.push({ centreline, from: Math.max(0, from), to: Math.min(total, to), ...factors });
    if (from < 0) this.found.push({ centreline, from: from + total, to: total, ...factors });
    if (to > total) this.found.push({ centreline, from: 0, to: to - total, ...factors });
  }
}

type Factors = Pick<Trim, 'factorByRule' | 'factorResolved'>;

/** The piece that an arm starts on. */
function pieceOf(pieces: Pieces, c: number, position: number, direction: 1 | -1): number {
  const piece = pieceAt(pieces, c, position);
  const isClosed = pieces.centrelineClosed[c] === 1;
  const isStart = direction === -1 && position === pieces.start[piece];
  if (isStart && piece > pieces.firstPiece[c]) return piece - 1;
  if (isStart && isClosed) return endPiece(pieces, 2 * c + 1);
  const isPastEnd = direction === 1 && position >= pieces.centrelineLength[c];
  return isPastEnd && isClosed ? endPiece(pieces, 2 * c) : piece;
}

function areEqual({ chip, pieces }: Draft, { centreline }: Stops, own: Int32Array): boolean {
  const first = pieces.centrelineChannel[centreline[own[0]]];
  for (const stop of own) {
    const other = pieces.centrelineChannel[centreline[stop]];
    if (other !== first && !isEqualDuct(chip.channels[other], chip.channels[first])) return false;
  }
  return true;
}

/** min(1, w/W) · min(1, h/H)³; a depth that is not known counts as equal. */
function trimFactor(draft: Draft, c: number, group: number): number {
  const own = draft.chip.channels[draft.pieces.centrelineChannel[c]];
  const other = draft.chip.channels[draft.pieces.centrelineChannel[group]];
  return shareOf(own.ductWidthMm, other.ductWidthMm) * shareOf(own.depthMm, other.depthMm) ** 3;
}

/** min(1, a/b); 1 where the two are equal or one is not known. */
function shareOf(a: number, b: number): number {
  return Number.isNaN(a / b) || isEqualSize(a, b) ? 1 : Math.min(1, a / b);
}
