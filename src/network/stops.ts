import { firstOfGroups, itemsOf, toGroups } from '../groups.ts';
import { type Draft, END_JOINED, endPosition } from './draft.ts';

/**
 * The nodes along each centreline, in order: places less than the slack apart are one node.
 * A stop at a meeting is a point (from = to, the middle of what was joined, so that no length is gained or lost); a stop
 * at a port is the stretch of open well, to the exact rim.
 */
export interface Stops {
  readonly count: number;
  /** Stops of centreline c are firstStop[c] … firstStop[c + 1] − 1, by position. */
  readonly firstStop: Int32Array;
  readonly centreline: Int32Array;
  readonly from: Float64Array;
  readonly to: Float64Array;
  /** Any node of the stop's set: ask draft.nodes.find. */
  readonly node: Int32Array;
  readonly isWell: Uint8Array;
}

/** The stop nearest to an end of its centreline, which has one. */
export function outermostStop({ firstStop }: Stops, end: number): number {
  return (end & 1) === 0 ? firstStop[end >> 1] : firstStop[(end >> 1) + 1] - 1;
}

/** Where a stop begins, seen from an end of its centreline. */
export function stopPosition({ from, to }: Stops, stop: number, end: number): number {
  return (end & 1) === 0 ? from[stop] : to[stop];
}

/** Sorts the marks of each centreline and unites the nodes of those that lie within slack of each other. */
export function toStops(draft: Draft): Stops {
  const { marks, pieces, nodes, slackMm } = draft;
  const n = marks.node.length;
  const byCentreline = toGroups(pieces.centrelineCount, marks.centreline);
  const centreline = new Int32Array(n);
  const from = new Float64Array(n);
  const to = new Float64Array(n);
  const node = new Int32Array(n);
  const isWell = new Uint8Array(n);
  let count = 0;
  for (let c = 0; c < pieces.centrelineCount; c++) {
    const own = itemsOf(byCentreline, c);
    if (own.length > 1)
      own.sort((a, b) => marks.from[a] - marks.from[b] || marks.to[a] - marks.to[b] || a - b);
    const middle = shortStrokeMiddle(draft, c, own);
    for (let k = 0; k < own.length; ) {
      let low = marks.from[own[k]];
      let high = marks.to[own[k]];
      let wellLow = Number.POSITIVE_INFINITY;
      let wellHigh = Number.NEGATIVE_INFINITY;
      const head = marks.node[own[k]];
      let next = k;
      while (next < own.length && marks.from[own[next]] <= high + slackMm) {
        const m = own[next];
        if (low <= middle && marks.from[m] > middle) break;
        nodes.unite(head, marks.node[m]);
        if (marks.port[m] >= 0) {
          wellLow = Math.min(wellLow, marks.from[m]);
          wellHigh = Math.max(wellHigh, marks.to[m]);
        }
        high = Math.max(high, marks.to[m]);
        low = Math.min(low, marks.from[m]);
        next++;
      }
      const well = wellHigh >= wellLow;
      centreline[count] = c;
      from[count] = well ? wellLow : (low + high) / 2;
      to[count] = well ? wellHigh : (low + high) / 2;
      node[count] = head;
      isWell[count] = well ? 1 : 0;
      count++;
      k = next;
    }
  }
  const firstStop = firstOfGroups(pieces.centrelineCount, centreline.subarray(0, count));
  uniteRoundStart(draft, firstStop, from, to, node);
  return {
    count,
    firstStop,
    centreline: centreline.subarray(0, count),
    from: from.subarray(0, count),
    to: to.subarray(0, count),
    node: node.subarray(0, count),
    isWell: isWell.subarray(0, count),
  };
}

/**
 * The middle of an open centreline so short that its two joined ends lie within slack of each other; NaN for any other.
 * Its ends stay two places: a curve drawn as many strokes shorter than the slack keeps its length.
 */
function shortStrokeMiddle(draft: Draft, c: number, own: Int32Array): number {
  const { marks, pieces, ends, slackMm } = draft;
  if (own.length < 2 || pieces.centrelineClosed[c] === 1) return Number.NaN;
  const start = endPosition(draft, 2 * c);
  const end = endPosition(draft, 2 * c + 1);
  if (end - start > slackMm * (own.length - 1)) return Number.NaN;
  const isJoined = ends.state[2 * c] === END_JOINED && ends.state[2 * c + 1] === END_JOINED;
  const hasWell = own.some((m) => marks.port[m] >= 0);
  return isJoined && !hasWell ? pieces.centrelineLength[c] / 2 : Number.NaN;
}

/** On a closed centreline the last stop and the first may be one place, which is then its first point. */
function uniteRoundStart(
  draft: Draft,
  firstStop: Int32Array,
  from: Float64Array,
  to: Float64Array,
  node: Int32Array,
): void {
  const { pieces, nodes, slackMm } = draft;
  const moveTo = (position: number, stop: number): void => {
    from[stop] = position;
    to[stop] = position;
  };
  for (let c = 0; c < pieces.centrelineCount; c++) {
    if (pieces.centrelineClosed[c] === 0 || firstStop[c + 1] - firstStop[c] < 2) continue;
    const a = firstStop[c];
    const b = firstStop[c + 1] - 1;
    if (from[a] + pieces.centrelineLength[c] - to[b] > slackMm) continue;
    nodes.unite(node[a], node[b]);
    // A well keeps its rim; what lies between is within slack of it.
    if (to[a] === from[a]) moveTo(0, a);
    else from[a] = 0;
    if (to[b] === from[b]) moveTo(pieces.centrelineLength[c], b);
    else to[b] = pieces.centrelineLength[c];
  }
}
