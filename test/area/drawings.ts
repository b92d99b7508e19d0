/**
 * Seeded drawings of strokes at near-coincidences: touching, overlapping by micrometres, sharing ends, ending in strips,
 * forking at small angles, bending tightly, running through chambers, closing loops; in planes and with wells.
 */
export interface RandomDrawing {
  readonly svg: string;
  readonly sheet: string;
}

interface Stroke {
  readonly points: number[];
  readonly width: number;
  readonly layer: number;
  readonly closed: boolean;
  /** Radius of every piece as a share of its chord; 0 for straight ones. */
  readonly bend: number;
}

export function randomDrawing(seed: number): RandomDrawing {
  const random = new Random(seed);
  const strokes: Stroke[] = [];
  const count = 2 + random.below(3);
  const layers = random.chance(0.15) ? 2 : 1;
  // A chamber that the others may feed.
  if (random.chance(0.2)) strokes.push({ points: [-3, 0, 4, 0], width: 3, layer: 0, closed: false, bend: 0 });
  for (let k = 0; k < count; k++)
    strokes.push(nextStroke(random, strokes, k < layers ? k : random.below(layers)));
  const digits = random.pick([3, 3, 4, 6, 9]);
  const text = (value: number): string => String(Number(value.toFixed(digits)));
  const drawn = strokes.map(({ points, width, layer, closed, bend }, k) => {
    const d = [];
    for (let i = 0; i < points.length; i += 2) {
      const chord = Math.hypot(points[i] - points[i - 2], points[i + 1] - points[i - 1]);
      const to =
        i === 0 ? 'M' : bend > 0 ? `A${text(bend * chord)} ${text(bend * chord)} 0 0 ${(i / 2) % 2} ` : 'L';
      d.push(`${to}${text(points[i])} ${text(points[i + 1])}`);
    }
    return {
      layer,
      svg: `<path id="c${k}" d="${d.join('')}${closed ? 'Z' : ''}" stroke-width="${text(width)}"/>`,
    };
  });
  const groups = Array.from({ length: layers }, (_, layer) => {
    const own = drawn.filter((one) => one.layer === layer).map(({ svg }) => svg);
    return `<g id="layer-${layer}" fill="none" stroke="#000">${own.join('')}</g>`;
  });
  const ports = wellsOf(random, strokes).map(
    ({ x, y, r }, k) => `<circle id="p${k}" cx="${text(x)}" cy="${text(y)}" r="${text(r)}"/>`,
  );
  return {
    svg: `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="40mm" viewBox="-20 -20 40 40">${groups.join('')}${ports.join('')}</svg>`,
    sheet:
      layers === 2
        ? 'layers: { layer-0: { depth: 50 um }, layer-1: { depth: 80 um, plane: top } }\n'
        : 'depth: 50 um\n',
  };
}

const WIDTHS = [0.1, 0.2, 0.2, 0.2, 0.3, 0.5, 1, 3];

/** Offsets from an exact coincidence, mm. */
const SLIPS = [0, 0, 0, -0.0003, 0.0003, -0.002, 0.002, -0.003, 0.003, -0.01, 0.01, -0.05, 0.05];

function nextStroke(random: Random, strokes: readonly Stroke[], layer: number): Stroke {
  const width = random.chance(0.2) ? 0.05 + random.next() : random.pick(WIDTHS);
  const start =
    strokes.length === 0
      ? { x: 0, y: 0, angle: random.angle() }
      : startOf(random, random.pick(strokes), width);
  const points = [start.x, start.y];
  let angle = start.angle;
  const bends = random.pick([0, 0, 0, 1, 1, 2, 4]);
  for (let k = 0; k <= bends; k++) {
    const length = random.pick([2 * width, 4 * width, 4 * width, 2, 4, 8]) * (0.3 + random.next());
    points.push(
      points[points.length - 2] + length * Math.cos(angle),
      points[points.length - 1] + length * Math.sin(angle),
    );
    angle += random.pick([90, -90, 90, 45, -60, 120, 150, -170, 175, 20 * random.next()]) * DEGREE;
  }
  const closed = bends > 1 && random.chance(0.08);
  if (!closed && strokes.length > 0 && random.chance(0.35)) {
    // It ends at something too.
    const end = startOf(random, random.pick(strokes), width);
    points.push(end.x, end.y);
  }
  if (random.chance(0.5)) reverse(points);
  return { points, width, layer, closed, bend: random.chance(0.04) ? 0.51 + 2 * random.next() : 0 };
}

const DEGREE = Math.PI / 180;

/** A start at or near another stroke, and a direction away from it. */
function startOf(random: Random, other: Stroke, width: number): { x: number; y: number; angle: number } {
  const last = other.points.length - 2;
  const k = 2 * random.below(last / 2);
  const [ax, ay, bx, by] = other.points.slice(k, k + 4);
  const length = Math.hypot(bx - ax, by - ay) || 1;
  const [ux, uy] = [(bx - ax) / length, (by - ay) / length];
  const along = Math.atan2(uy, ux);
  const t = random.pick([0, 1, 0.5, random.next(), random.next()]);
  const side = random.chance(0.5) ? 1 : -1;
  const slip = random.pick(SLIPS);
  const wall = other.width / 2;
  const at = (off: number): { x: number; y: number } => ({
    x: ax + t * (bx - ax) - side * uy * off,
    y: ay + t * (by - ay) + side * ux * off,
  });
  const away = along + side * random.pick([90, 90, 90, 60, 45, 120, 30, 15, 5, 2]) * DEGREE;
  switch (random.below(7)) {
    case 0: // on the centreline, or nearly
      return { ...at(slip), angle: away };
    case 1: // at the wall
      return { ...at(wall + slip), angle: away };
    case 2: // between
      return { ...at(wall * random.next()), angle: away };
    case 3: // beside it, walls in one place or nearly
      return { ...at(wall + width / 2 + slip), angle: along + random.pick([0, 0, Math.PI, 2 * DEGREE]) };
    case 4: // across it
      return { ...at(-2 * (wall + width)), angle: away };
    case 5: {
      // a fork or a seam at its very end
      const [x, y] = random.chance(0.5) ? other.points.slice(0, 2) : other.points.slice(last, last + 2);
      return {
        x: x + slip,
        y,
        angle: along + random.pick([0, Math.PI, 3, 8, 20, 45, 90, 135].map((a) => (a > 4 ? a * DEGREE : a))),
      };
    }
    default: // anywhere near
      return { ...at(4 * wall * (random.next() - 0.5)), angle: random.angle() };
  }
}

function wellsOf(random: Random, strokes: readonly Stroke[]): { x: number; y: number; r: number }[] {
  const wells = [];
  for (const { points, closed } of strokes) {
    const last = points.length - 2;
    if (!closed && random.chance(0.4))
      wells.push({ x: points[0], y: points[1], r: random.pick([0.3, 0.5, 1]) });
    if (!closed && random.chance(0.5))
      wells.push({ x: points[last], y: points[last + 1], r: random.pick([0.3, 0.5, 1]) });
    if (random.chance(0.05))
      wells.push({ x: points[0] + random.next(), y: points[1] + random.next(), r: 0.5 });
  }
  return wells;
}

function reverse(points: number[]): void {
  points.reverse();
  for (let k = 0; k < points.length; k += 2) [points[k], points[k + 1]] = [points[k + 1], points[k]];
}

/** A small generator of its own (mulberry32), so that a seed is a drawing for good. */
class Random {
  private state: number;

  constructor(seed: number) {
    this.state = (seed * 0x9e3779b1) | 0;
  }

  next(): number {
    this.state = (this.state + 0x6d2b79f5) | 0;
    let t = Math.imul(this.state ^ (this.state >>> 15), 1 | this.state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  }

  below(count: number): number {
    return Math.floor(this.next() * count);
  }

  chance(share: number): boolean {
    return this.next() < share;
  }

  pick<T>(list: readonly T[]): T {
    return list[this.below(list.length)];
  }

  angle(): number {
    return 2 * Math.PI * this.next();
  }
}
