import { piecesNear } from '../geometry/near.ts';
import { endPiece } from '../geometry/pieces.ts';
import { isInPieceStrip } from '../geometry/strip.ts';
import { itemsOf } from '../groups.ts';
import type { Bundles } from './bundles.ts';
import { type Draft, END_FREE, END_JOINED, endPosition, isFarBack } from './draft.ts';
import { type Kept, stopsByNode, wholeCentrelines } from './kept.ts';
import { findOverlapCut, type Joined } from './overlap.ts';
import { outermostStop, type Stops, stopPosition } from './stops.ts';

/**
 * Rule 4 and the last sentence of rule 6: an end piece that ends dead inside the strip it joined is left out; so is one
 * that runs along another channel's centreline for at most twice the wider width between two joins (of two that overlap
 * so, the narrower channel's, of equal ones the later drawn); so is a stub beyond a rim no longer than the larger of its
 * width and the port's radius.
 */
export function leaveOutEndPieces(draft: Draft, stops: Stops, bundles: Bundles): Kept {
  const { centrelineClosed, centrelineCount } = draft.pieces;
  const whole = wholeCentrelines(draft);
  const joined: Joined = { draft, bundles, stops, whole, byNode: stopsByNode(draft, stops, whole) };
  const kept = {
    from: whole.from.slice(),
    to: whole.to.slice(),
    leftOutMm: new Float64Array(2 * centrelineCount),
  };
  for (let end = 0; end < 2 * centrelineCount; end++) {
    const c = end >> 1;
    if (centrelineClosed[c] === 1 || stops.firstStop[c] === stops.firstStop[c + 1]) continue;
    const position = findCut(joined, end);
    if (position === null) continue;
    kept.leftOutMm[end] = Math.abs(endPosition(draft, end) - position);
    ((end & 1) === 0 ? kept.from : kept.to)[c] = position;
  }
  return kept;
}

/** Where the end piece that is left out begins; null where none is. */
function findCut(joined: Joined, end: number): number | null {
  const state = joined.draft.ends.state[end];
  if (state === END_JOINED) return findOverlapCut(joined, end);
  return state === END_FREE ? findDeadPiece(joined, end) : null;
}

function findDeadPiece({ draft, stops, byNode }: Joined, end: number): number | null {
  const { near, pieces, ends, slackMm } = draft;
  const c = end >> 1;
  const stop = outermostStop(stops, end);
  const position = stopPosition(stops, stop, end);
  const length = Math.abs(endPosition(draft, end) - position);
  if (length <= slackMm) return length > 0 ? position : null;
  const node = draft.nodes.find(stops.node[stop]);
  const piece = endPiece(pieces, end);
  if (stops.isWell[stop] === 1 && node < draft.portCount) {
    const most = Math.max(2 * pieces.half[piece], draft.chip.ports[node].radiusMm) + slackMm;
    if (length <= most) return position;
  }
  const channels = new Set<number>();
  let meetsItself = false;
  for (const other of itemsOf(byNode, node)) {
    const line = stops.centreline[other];
    if (line !== c) channels.add(pieces.centrelineChannel[line]);
    else if (other !== stop) meetsItself = true;
  }
  const endsInside = piecesNear(near, piece).some((other) => {
    const isOwn = pieces.centreline[other] === c;
    const isJoined = isOwn
      ? meetsItself && isFarBack(draft, end, other)
      : channels.has(pieces.channel[other]);
    return isJoined && isInPieceStrip(pieces, other, ends.x[end], ends.y[end], slackMm, null);
  });
  return endsInside ? position : null;
}
