import {
  Clipper,
  ClipType,
  FillRule,
  type Path64,
  type Paths64,
  PointInPolygonResult,
  type PolyPath64,
  PolyTree64,
  type Rect64,
} from 'clipper2-ts';

/**
 * Strips and wells as polygons in whole nanometres, for a general polygon library: a second opinion on where they
 * overlap, which knows nothing of near pairs. A disc is cut so finely that no point of it is off by more than ARC_MM.
 */

/** Whole units in a millimetre. */
const UNITS_PER_MM = 1e6;

/** Most that a polygon's side may stand off the arc that it replaces, mm. */
const ARC_MM = 2e-4;

/** A connected area with its holes. */
export interface Area {
  readonly paths: Paths64;
  readonly box: Rect64;
}

/** A straight piece of a strip: where it runs and at which of its ends a disc stands. */
export interface StripPart {
  readonly x1: number;
  readonly y1: number;
  readonly x2: number;
  readonly y2: number;
  readonly half: number;
  readonly roundStart: boolean;
  readonly roundEnd: boolean;
}

/** Rectangle and discs of a part, all of them grown by so much on every side (mm; negative: shrunk). */
export function partPaths(part: StripPart, growMm: number): Paths64 {
  const h = part.half + growMm;
  if (h <= 0) return [];
  const paths = rectanglePaths(part, growMm, part.roundStart, part.roundEnd);
  if (part.roundStart) paths.push(discPath(part.x1, part.y1, h, growMm > 0));
  if (part.roundEnd) paths.push(discPath(part.x2, part.y2, h, growMm > 0));
  return paths;
}

interface Straight {
  readonly x1: number;
  readonly y1: number;
  readonly x2: number;
  readonly y2: number;
}

export function rectanglePaths(
  { x1, y1, x2, y2, half }: Straight & { readonly half: number },
  growMm: number,
  roundStart: boolean,
  roundEnd: boolean,
): Paths64 {
  const h = half + growMm;
  const length = Math.hypot(x2 - x1, y2 - y1);
  const before = roundStart ? 0 : growMm;
  const beyond = roundEnd ? 0 : growMm;
  if (h <= 0 || length === 0 || length + before + beyond <= 0) return [];
  const ux = (x2 - x1) / length;
  const uy = (y2 - y1) / length;
  const [ax, ay] = [x1 - ux * before, y1 - uy * before];
  const [bx, by] = [x2 + ux * beyond, y2 + uy * beyond];
  return [
    toPath([
      [ax - uy * h, ay + ux * h],
      [ax + uy * h, ay - ux * h],
      [bx + uy * h, by - ux * h],
      [bx - uy * h, by + ux * h],
    ]),
  ];
}

/** Where one straight piece goes on in another, the sector of the round that neither rectangle holds; none when they are in line. */
export function sectorPaths(
  one: Straight,
  next: Straight,
  radius: number,
  outside: boolean,
  arcMm = ARC_MM,
): Paths64 {
  const from = Math.atan2(one.y2 - one.y1, one.x2 - one.x1);
  let turn = Math.atan2(next.y2 - next.y1, next.x2 - next.x1) - from;
  if (turn > Math.PI) turn -= 2 * Math.PI;
  if (turn < -Math.PI) turn += 2 * Math.PI;
  if (Math.abs(turn) < 1e-9) return [];
  // A left turn (y down: to the right on paper) opens the wedge on the other side; a little more of it overlaps the rectangles.
  const side = turn > 0 ? -1 : 1;
  const start = from + (side * Math.PI) / 2 - Math.sign(turn) * 1e-3;
  const sweep = turn + Math.sign(turn) * 2e-3;
  const count = Math.max(1, Math.ceil(Math.abs(sweep) / (2 * arcStep(radius, arcMm))));
  const r = outside ? radius / Math.cos(Math.abs(sweep) / count / 2) : radius;
  const points = [[one.x2, one.y2]];
  for (let k = 0; k <= count; k++) {
    const angle = start + (sweep * k) / count;
    points.push([one.x2 + r * Math.cos(angle), one.y2 + r * Math.sin(angle)]);
  }
  return [toPath(turn > 0 ? points : points.reverse())];
}

/** Half the angle that one side of a polygon may span. */
function arcStep(radius: number, arcMm: number): number {
  return Math.acos(Math.max(0.5, 1 - arcMm / radius));
}

/** A circle as a polygon that lies inside it, or (outside) holds it. */
export function discPath(x: number, y: number, radius: number, outside: boolean, arcMm = ARC_MM): Path64 {
  const count = Math.max(8, Math.ceil(Math.PI / arcStep(radius, arcMm)));
  const r = outside ? radius / Math.cos(Math.PI / count) : radius;
  return toPath(
    Array.from({ length: count }, (_, k) => {
      const angle = (2 * Math.PI * k) / count;
      return [x + r * Math.cos(angle), y + r * Math.sin(angle)];
    }),
  );
}

/** The connected areas that the paths cover together. */
export function unionAreas(paths: Paths64): Area[] {
  return toAreas(ClipType.Union, paths, []);
}

/** The connected areas that both cover. */
export function commonAreas(one: Paths64, two: Paths64): Area[] {
  const nearOne = within(one, boxOf(two));
  const nearTwo = within(two, boxOf(nearOne));
  return nearOne.length === 0 || nearTwo.length === 0 ? [] : toAreas(ClipType.Intersection, nearOne, nearTwo);
}

/** Paths that all turn one way cover what each of them covers, so those that lie apart may be left away. */
function within(paths: Paths64, box: Rect64): Paths64 {
  if (paths.length === 1) return boxesMeet(boxOf(paths), box) ? paths : [];
  return paths.filter((path) => Clipper.isPositive(path) === false || boxesMeet(boxOfPath(path), box));
}

const pathBoxes = new WeakMap<Path64, Rect64>();

function boxOfPath(path: Path64): Rect64 {
  let box = pathBoxes.get(path);
  if (box === undefined) {
    box = Clipper.getBounds(path);
    pathBoxes.set(path, box);
  }
  return box;
}

export function meet(one: Area, two: Area): boolean {
  return boxesMeet(one.box, two.box) && Clipper.intersect(one.paths, two.paths, FillRule.NonZero).length > 0;
}

/** Whether three areas have a point in common. */
export function allMeet(one: Area, two: Area, three: Area): boolean {
  if (!boxesMeet(one.box, two.box) || !boxesMeet(two.box, three.box) || !boxesMeet(one.box, three.box))
    return false;
  const both = Clipper.intersect(one.paths, two.paths, FillRule.NonZero);
  return both.length > 0 && Clipper.intersect(both, three.paths, FillRule.NonZero).length > 0;
}

export function isWithin(area: Area, paths: Paths64): boolean {
  return Clipper.difference(area.paths, paths, FillRule.NonZero).length === 0;
}

export function holds({ paths, box }: Area, x: number, y: number): boolean {
  const p = { x: Math.round(x * UNITS_PER_MM), y: Math.round(y * UNITS_PER_MM) };
  if (p.x < box.left || p.x > box.right || p.y < box.top || p.y > box.bottom) return false;
  let inside = false;
  for (const path of paths) {
    const at = Clipper.pointInPolygon(p, path);
    if (at === PointInPolygonResult.IsOn) return true;
    if (at === PointInPolygonResult.IsInside) inside = !inside;
  }
  return inside;
}

export function boxesMeet(a: Rect64, b: Rect64): boolean {
  return a.left <= b.right && b.left <= a.right && a.top <= b.bottom && b.top <= a.bottom;
}

export function boxOf(paths: Paths64): Rect64 {
  const box = { left: Infinity, top: Infinity, right: -Infinity, bottom: -Infinity };
  for (const path of paths) {
    const { left, top, right, bottom } = boxOfPath(path);
    box.left = Math.min(box.left, left);
    box.top = Math.min(box.top, top);
    box.right = Math.max(box.right, right);
    box.bottom = Math.max(box.bottom, bottom);
  }
  return box;
}

/** Whether a point lies in an area's box, or no farther from it than so much on either side (mm). */
export function isNearBox({ box }: Area, x: number, y: number, withinMm: number): boolean {
  const [px, py, margin] = [x * UNITS_PER_MM, y * UNITS_PER_MM, withinMm * UNITS_PER_MM];
  return (
    px >= box.left - margin && px <= box.right + margin && py >= box.top - margin && py <= box.bottom + margin
  );
}

/** Middle of an area's box, mm. */
export function middleOf({ box }: Area): { x: number; y: number } {
  return { x: (box.left + box.right) / 2 / UNITS_PER_MM, y: (box.top + box.bottom) / 2 / UNITS_PER_MM };
}

/** Diagonal of an area's box, mm. */
export function sizeMm({ box }: Area): number {
  return Math.hypot(box.right - box.left, box.bottom - box.top) / UNITS_PER_MM;
}

function toPath(points: readonly (readonly number[])[]): Path64 {
  return points.map(([x, y]) => ({ x: Math.round(x * UNITS_PER_MM), y: Math.round(y * UNITS_PER_MM) }));
}

function toAreas(kind: ClipType, one: Paths64, two: Paths64): Area[] {
  const tree = new PolyTree64();
  Clipper.booleanOpWithPolyTree(kind, one, two, tree, FillRule.NonZero);
  const areas: Area[] = [];
  collect(tree, areas);
  return areas;
}

/** Every outer ring with its holes is an area; what lies in a hole is another. */
function collect(parent: PolyPath64, into: Area[]): void {
  for (let k = 0; k < parent.count; k++) {
    const outer = parent.child(k);
    const paths: Paths64 = [outer.poly ?? []];
    for (let m = 0; m < outer.count; m++) {
      const hole = outer.child(m);
      paths.push(hole.poly ?? []);
      collect(hole, into);
    }
    into.push({ paths, box: Clipper.getBounds(paths[0]) });
  }
}
