/**
 * Random chips that are whole by construction, and the same with one gap cut into them: at any place of a channel, also
 * where it is drawn twice, or between a main and the fork that begins at its wall.
 */
export interface CutChip {
  readonly svg: string;
  readonly sheet: string;
  /** Where the gap is (mm) and how wide; null in a whole chip. */
  readonly gap: { readonly x: number; readonly y: number; readonly sizeMm: number } | null;
  /** The gap is narrower than a near miss may be. */
  readonly isNarrow: boolean;
}

/** A seeded sequence of numbers in [0, 1) (mulberry32). */
export function randomOf(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

type Point = readonly [number, number];

interface Stroke {
  readonly points: readonly Point[];
  readonly widthMm: number;
}

const PITCH_MM = 6;

/** A tree or a net over a grid of places that were moved a little, a port at each place with one channel. */
export function netChip(random: () => number, isCut: boolean): CutChip {
  const columns = 2 + Math.floor(random() * 4);
  const rows = 2 + Math.floor(random() * 3);
  const places = Array.from(
    { length: columns * rows },
    (_, k): Point => [
      (k % columns) * PITCH_MM + random() - 0.5,
      Math.floor(k / columns) * PITCH_MM + random() - 0.5,
    ],
  );
  const pairs: [number, number][] = [];
  for (let k = 0; k < places.length; k++) {
    if ((k + 1) % columns !== 0) pairs.push([k, k + 1]);
    if (k + columns < places.length) pairs.push([k, k + columns]);
  }
  shuffle(pairs, random);
  const part = places.map((_, k) => k);
  const find = (k: number): number => (part[k] === k ? k : find(part[k]));
  const loops = random() < 0.5 ? 0.4 : 0;
  const edges = pairs.filter(([a, b]) => {
    if (find(a) === find(b)) return random() < loops;
    part[find(a)] = find(b);
    return true;
  });
  const degree = places.map((_, k) => edges.filter((edge) => edge.includes(k)).length);
  const leaves = places.flatMap((_, k) => (degree[k] === 1 ? [k] : []));
  // Every end needs a port; a net with fewer than two ends gets more where channels meet.
  const inner = places.flatMap((_, k) => (degree[k] > 1 ? [k] : []));
  const ports = [...leaves, ...inner.slice(0, Math.max(0, 2 - leaves.length))];
  const widthMm = 0.1 + 0.3 * random();
  const strokes: Stroke[] = [];
  const cut = isCut ? Math.floor(random() * edges.length) : -1;
  let gap: CutChip['gap'] = null;
  edges.forEach(([a, b], e) => {
    const from = places[a];
    const to = places[b];
    if (e !== cut) {
      strokes.push(...drawn(random, from, to, widthMm));
      return;
    }
    // The holes at both ends keep clear of the gap; at a junction it may begin at the very place.
    const length = Math.hypot(to[0] - from[0], to[1] - from[1]);
    const sizeMm = random() < 0.5 ? widthMm * (0.1 + 0.8 * random()) : 0.5 + 1.5 * random();
    const low = ports.includes(a) ? 1 : 0;
    const high = length - (ports.includes(b) ? 1 : 0) - sizeMm;
    const atEnd = random() < 0.3 && low === 0;
    const s = atEnd ? 0 : Math.max(low, 0.6) + random() * (high - 0.6 - Math.max(low, 0.6));
    const near = along(from, to, s);
    const far = along(from, to, s + sizeMm + (atEnd ? widthMm : 0));
    if (s > 0) strokes.push(...doubled(random, from, near, widthMm));
    strokes.push(...doubled(random, to, far, widthMm));
    const at = along(from, to, s + sizeMm / 2 + (atEnd ? widthMm : 0));
    gap = { x: at[0], y: at[1], sizeMm };
  });
  shuffle(strokes, random);
  const marks = ports.map((k, p) => ({ name: `p${p}`, at: places[k] }));
  return toChip(random, strokes, marks, gap, (gap as CutChip['gap'])?.sizeMm ?? 0, widthMm);
}

/** A main, and a fork of several branches that begins on it, or off its wall by a gap; some branches meet again. */
export function forkChip(random: () => number, isCut: boolean): CutChip {
  const widthMm = 0.1 + 0.3 * random();
  const sizeMm = isCut ? widthMm * (0.05 + 0.6 * random()) : 0;
  const start: Point = [0, isCut ? widthMm / 2 + sizeMm : 0];
  const count = 2 + Math.floor(random() * 3);
  const strokes: Stroke[] = [
    {
      points: [
        [-8, 0],
        [8, 0],
      ],
      widthMm,
    },
  ];
  const marks: { name: string; at: Point }[] = [
    { name: 'in', at: [-8, 0] },
    { name: 'thru', at: [8, 0] },
  ];
  const isLooped = random() < 0.3;
  const ends: Point[] = [];
  for (let k = 0; k < count; k++) {
    const angle = ((35 + (110 * (k + 0.3 + 0.4 * random())) / count) * Math.PI) / 180;
    const end: Point = [start[0] + 9 * Math.cos(angle), start[1] + 9 * Math.sin(angle)];
    ends.push(end);
    strokes.push(...drawn(random, start, end, widthMm));
    marks.push({ name: `p${k}`, at: end });
  }
  // A way round from the last branch to the main: cut or not, all is one part then.
  if (isLooped) strokes.push({ points: [ends[0], [14, ends[0][1]], [14, 4], [8, 0]], widthMm });
  shuffle(strokes, random);
  const gap = isCut ? { x: 0, y: widthMm / 2 + sizeMm / 2, sizeMm } : null;
  return toChip(random, strokes, marks, gap, sizeMm, widthMm);
}

/** A straight channel as one stroke or several end to end, drawn either way. */
function drawn(random: () => number, from: Point, to: Point, widthMm: number): Stroke[] {
  const strokes: Stroke[] = [];
  const middle = random() < 0.3 ? [along(from, to, 2 + random())] : [];
  const points = [from, ...middle, to];
  for (let k = 0; k + 1 < points.length; k++) {
    const pair = [points[k], points[k + 1]];
    strokes.push({ points: random() < 0.5 ? pair : pair.reverse(), widthMm });
  }
  return strokes;
}

/** A channel that stops at a gap, sometimes with its last piece drawn once more, long or short. */
function doubled(random: () => number, from: Point, to: Point, widthMm: number): Stroke[] {
  const strokes = [{ points: random() < 0.5 ? [from, to] : [to, from], widthMm }];
  const length = Math.hypot(to[0] - from[0], to[1] - from[1]);
  if (random() < 0.3 && length > 0.5) {
    const again = along(to, from, Math.min(length, random() < 0.5 ? widthMm : length * random()));
    strokes.push({ points: random() < 0.5 ? [again, to] : [to, again], widthMm });
  }
  return strokes;
}

function along(from: Point, to: Point, s: number): Point {
  const length = Math.hypot(to[0] - from[0], to[1] - from[1]);
  return [from[0] + (s / length) * (to[0] - from[0]), from[1] + (s / length) * (to[1] - from[1])];
}

const CONDITIONS = [
  'open',
  'open',
  '{ pressure: 3 kPa }',
  '{ pressure: 0 Pa }',
  '{ flow: 1 uL/min }',
  '{ head: 20 mm }',
  'sealed',
];

function toChip(
  random: () => number,
  strokes: readonly Stroke[],
  marks: readonly { name: string; at: Point }[],
  gap: CutChip['gap'],
  sizeMm: number,
  widthMm: number,
): CutChip {
  const turn = random() * 2 * Math.PI;
  const place = ([x, y]: Point): Point => [
    30 + x * Math.cos(turn) - y * Math.sin(turn),
    30 + x * Math.sin(turn) + y * Math.cos(turn),
  ];
  const text = (point: Point): string =>
    place(point)
      .map((v) => v.toFixed(6))
      .join(' ');
  const paths = strokes.map(
    ({ points, widthMm: width }, k) =>
      `<path id="c${k}" d="M${points.map(text).join('L')}" stroke-width="${width.toFixed(6)}"/>`,
  );
  const holes = marks.map(({ name, at }) => {
    const [x, y] = place(at);
    return `<circle id="${name}" cx="${x.toFixed(6)}" cy="${y.toFixed(6)}" r="0.4" fill="black" stroke="none"/>`;
  });
  // The first drives and the second is open, so that a whole chip has a way for its fluid.
  const conditions = marks.map((_, k) =>
    k === 0 ? '{ pressure: 5 kPa }' : k === 1 ? 'open' : CONDITIONS[Math.floor(random() * CONDITIONS.length)],
  );
  shuffle(conditions, random);
  const at = gap === null ? null : place([gap.x, gap.y]);
  return {
    svg: `<svg xmlns="http://www.w3.org/2000/svg" width="60mm" height="60mm" viewBox="0 0 60 60" fill="none" stroke="black">${paths.join('')}${holes.join('')}</svg>`,
    sheet: `fluid: water\ndepth: 50 um\nports:\n${marks.map(({ name }, k) => `  ${name}: ${conditions[k]}\n`).join('')}`,
    gap: at === null || gap === null ? null : { x: at[0], y: at[1], sizeMm: gap.sizeMm },
    isNarrow: sizeMm < 0.95 * widthMm,
  };
}

function shuffle<T>(items: T[], random: () => number): void {
  for (let k = items.length - 1; k > 0; k--) {
    const m = Math.floor(random() * (k + 1));
    [items[k], items[m]] = [items[m], items[k]];
  }
}
