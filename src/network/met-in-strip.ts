import { piecesNear } from '../geometry/near.ts';
import { distanceToPiece } from '../geometry/on-piece.ts';
import { endPiece } from '../geometry/pieces.ts';
import { type Groups, itemsOf, toGroups } from '../groups.ts';
import { type Draft, drawnPosition, endPosition } from './draft.ts';
import { Strips } from './strips.ts';

/** Answers for drawn ends, before any is carried on, whether their strokes have met a centreline inside its strip (rule 3). */
export class StripMeetings {
  private readonly draft: Draft;
  /** The marks on each centreline that are meetings. */
  private readonly marks: Groups;
  private readonly strips: Strips;

  constructor(draft: Draft) {
    const { centreline, port } = draft.marks;
    this.draft = draft;
    this.marks = toGroups(
      draft.pieces.centrelineCount,
      centreline.map((c, mark) => (port[mark] < 0 ? c : -1)),
    );
    this.strips = new Strips(draft, (c) => draft.pieces.centrelineChannel[c], null);
  }

  /**
   * Position at which the end's channel met a centreline since it entered that strip; null when it did not. Its other end,
   * if that lies on the centreline within the slack, has met it there (rule 2).
   */
  placeOf(end: number, centreline: number): number | null {
    const { draft } = this;
    const last =
      this.lastMeeting(end, centreline) ??
      (isOnCentreline(draft, end ^ 1, centreline) && !isOnCentreline(draft, end, centreline)
        ? drawnPosition(draft, end ^ 1)
        : null);
    return last !== null && this.hasStayedInside(end, last, centreline) ? last : null;
  }

  /** Position on the end's centreline of its meeting with another centreline nearest to the end; null when they never met. */
  private lastMeeting(end: number, other: number): number | null {
    const { marks } = this.draft;
    const position = endPosition(this.draft, end);
    let best: number | null = null;
    for (const mark of itemsOf(this.marks, end >> 1)) {
      // Both marks of one meeting are added one after the other.
      const partner = marks.node[mark ^ 1] === marks.node[mark] ? mark ^ 1 : -1;
      if (partner < 0 || marks.centreline[partner] !== other) continue;
      const from = marks.from[mark];
      if (best === null || Math.abs(from - position) < Math.abs(best - position)) best = from;
    }
    return best;
  }

  private hasStayedInside(end: number, from: number, other: number): boolean {
    const { draft, strips } = this;
    const length = Math.abs(endPosition(draft, end) - from);
    if (length <= draft.slackMm) return true;
    const direction = (end & 1) === 0 ? -1 : 1;
    const channel = draft.pieces.centrelineChannel[other];
    return strips.reach(end >> 1, from, direction, channel) >= length - draft.slackMm;
  }
}

/** Whether a drawn end lies within the slack of another centreline. */
function isOnCentreline({ near, pieces, ends, slackMm }: Draft, end: number, centreline: number): boolean {
  if (centreline === end >> 1) return false;
  return piecesNear(near, endPiece(pieces, end)).some(
    (i) =>
      pieces.centreline[i] === centreline && distanceToPiece(pieces, i, ends.x[end], ends.y[end]) <= slackMm,
  );
}
