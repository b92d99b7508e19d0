import { remembered } from '../by-key.ts';
import type { Hole, Ignored, Layout, LayoutItem, Outline, Stroke } from '../layout/types.ts';
import { isPattern, layerKey, matches } from '../runsheet/names.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { CHIP_EDGE_NAME } from './defaults.ts';
import type { DrawnEdge } from './edge.ts';
import type { LayerFinder } from './layers.ts';
import { indexRings, type RingIndex } from './rings.ts';

/** What of a layout is read, in document order, and what was passed over. */
export interface Selection {
  readonly strokes: readonly Stroke[];
  readonly holes: readonly Hole[];
  readonly outlines: readonly Outline[];
  /** Unfilled and not round: no port and no channel, but one may stand in a channel. */
  readonly ellipses: readonly Ignored[];
  readonly ignored: Tally;
  /** Names drawn but not read, with why: for messages about names that are not found. */
  readonly setAside: Map<string, string>;
}

/** Counts by kind. */
export class Tally {
  readonly #counts = new Map<string, number>();

  add(kind: string, count = 1): void {
    this.#counts.set(kind, (this.#counts.get(kind) ?? 0) + count);
  }

  /** Sorted by kind, without a prototype. */
  toRecord(): Readonly<Record<string, number>> {
    const record: Record<string, number> = Object.create(null);
    for (const [kind, count] of [...this.#counts].sort(([a], [b]) => (a < b ? -1 : 1))) record[kind] = count;
    return record;
  }
}

/**
 * Leaves out what the run sheet ignores by name or layer, what lies wholly outside the `outline` that it names, the
 * chip edge itself, and what reading has already set aside.
 */
export function selectItems(
  layout: Layout,
  sheet: RunSheet | null,
  edge: DrawnEdge | null,
  finder: LayerFinder,
): Selection {
  const strokes: Stroke[] = [];
  const holes: Hole[] = [];
  const outlines: Outline[] = [];
  const ellipses: Ignored[] = [];
  const ignored = new Tally();
  const setAside = new Map<string, string>();
  for (const [kind, count] of Object.entries(layout.unread)) ignored.add(kind, count);
  const isIgnored = ignoreTest(sheet?.ignore ?? []);
  const isChamberPart = chamberTest(sheet);
  const inside =
    edge !== null && sheet?.outline != null ? indexRings([edge.rings.map(({ points }) => points)]) : null;

  const note = (item: LayoutItem, why: string): void => {
    if (item.name !== null && !setAside.has(item.name)) setAside.set(item.name, why);
  };
  const leaveOut = (item: LayoutItem, kind: string, why: string): void => {
    ignored.add(kind);
    note(item, why);
  };
  for (const item of layout.items) {
    if (edge?.ordinals.has(item.ordinal) || item.name === CHIP_EDGE_NAME) continue;
    if (isIgnored(item)) {
      leaveOut(item, 'named under ignore', 'the run sheet ignores it');
    } else if (finder.entryOf(item.groups)?.kind === 'ignore') {
      leaveOut(item, 'in an ignored layer', 'its layer is set to ignore');
    } else if (isChamberPart(item)) {
      leaveOut(item, 'chamber or pillar', 'it is named under fields or pillars');
    } else if (item.kind === 'ignored' && item.reason !== 'ellipse') {
      leaveOut(item, item.reason, `it is a ${item.reason}`);
    } else {
      const kept = inside === null ? item : partInside(item, inside);
      if (kept === null) leaveOut(item, 'outside the outline', 'it lies outside the outline');
      else if (kept.kind === 'stroke') strokes.push(kept);
      else if (kept.kind === 'hole') holes.push(kept);
      else if (kept.kind === 'outline') {
        note(kept, 'it is filled, and only a stroke is a centreline');
        outlines.push(kept);
      } else {
        note(kept, 'it is an ellipse that is not round');
        ellipses.push(kept);
      }
    }
  }
  return { strokes, holes, outlines, ellipses, ignored, setAside };
}

/** Elements by their exact name, groups without regard to case; patterns likewise. */
function ignoreTest(ignore: readonly string[]): (item: LayoutItem) => boolean {
  if (ignore.length === 0) return () => false;
  const element = nameTest(ignore);
  const group = nameTest(ignore.map(layerKey));
  const byGroups = new Map<readonly string[], boolean>();
  const groupsIgnored = (groups: readonly string[]): boolean =>
    remembered(byGroups, groups, () => groups.some((name) => group(layerKey(name))));
  return (item) => (item.name !== null && element(item.name)) || groupsIgnored(item.groups);
}

/** Filled shapes that the run sheet calls a chamber or pillars are never ports or outlines, even when round. */
function chamberTest(sheet: RunSheet | null): (item: LayoutItem) => boolean {
  const fields = new Set((sheet?.fields ?? []).map((name) => name.trim()));
  const pillars = new Set((sheet?.pillars ?? []).map(layerKey));
  if (fields.size === 0 && pillars.size === 0) return () => false;
  return (item) => {
    if (item.kind !== 'hole' && item.kind !== 'outline') return false;
    if (item.name !== null && fields.has(item.name)) return true;
    return item.groups.some((group) => pillars.has(layerKey(group)));
  };
}

function nameTest(entries: readonly string[]): (name: string) => boolean {
  const exact = new Set(entries.map((entry) => entry.trim()));
  const patterns = entries.filter(isPattern);
  return (name) => exact.has(name) || patterns.some((pattern) => matches(pattern, name));
}

type Read = Stroke | Hole | Outline | Ignored;

/** The item without its centrelines that lie wholly outside; null when nothing is left. */
function partInside(item: Read, rings: RingIndex): Read | null {
  switch (item.kind) {
    case 'stroke': {
      const centrelines = item.centrelines.filter(({ points }) => pointsMeet(points, rings));
      if (centrelines.length === item.centrelines.length) return item;
      return centrelines.length === 0 ? null : { ...item, centrelines };
    }
    case 'hole': {
      const touched =
        rings.contains(item.x, item.y) || rings.groupsWithin(item.x, item.y, item.radius).length > 0;
      return touched ? item : null;
    }
    case 'outline':
    case 'ignored':
      return item.rings.some((ring) => pointsMeet(ring, rings)) ? item : null;
    default:
      return item satisfies never;
  }
}

function pointsMeet(points: Float64Array, rings: RingIndex): boolean {
  // Most lines have their first point inside; a line with no point inside may still cross.
  for (let i = 0; i < points.length; i += 2) if (rings.contains(points[i], points[i + 1])) return true;
  for (let i = 2; i < points.length; i += 2) {
    if (rings.crosses(points[i - 2], points[i - 1], points[i], points[i + 1])) return true;
  }
  return false;
}
