import type { Finding } from '../findings/types.ts';
import { formatNumber } from '../runsheet/shown.ts';
import { niceStep } from './colour-scale.ts';
import { type LabelWish, placeLabels } from './label-placement.ts';
import type { MapHole, MapLabel, MapStroke, ScaleBar } from './map.ts';
import { shortName } from './map.ts';
import { type Box, type ChipGeometry, stripHalfWidthMm } from './map-geometry.ts';

/** A close-up of a finding's place as data; paper millimetres from the picture's upper left corner, everything clipped to it. */
export interface PlaceDrawing {
  readonly widthMm: number;
  /** Of the picture itself; the scale bar stands below it. */
  readonly viewHeightMm: number;
  readonly scale: number;
  readonly edge: readonly (readonly number[])[];
  /** Channels in view: rim first, then fill; those the finding names are darker. */
  readonly strokes: readonly MapStroke[];
  readonly holes: readonly MapHole[];
  /** The distance the finding speaks of. */
  readonly mark: readonly [number, number, number, number] | null;
  /** The place itself. */
  readonly cross: readonly [number, number];
  readonly labels: readonly MapLabel[];
  readonly scaleBar: ScaleBar;
}

export interface PlaceOptions {
  readonly widthMm: number;
  readonly heightMm: number;
  readonly labelSizeMm: number;
  readonly measure: (text: string, sizeMm: number) => number;
  readonly readable: (name: string) => string;
  /** Written at the mark. */
  readonly measured: string | null;
}

const NAMED_COLOUR = '#6f8fb8';
const OTHER_COLOUR = '#d4d4d4';
const RIM_COLOUR = '#303030';
/** Pieces painted at most; a place in the middle of a hundred thousand still shows what is next to it. */
const PIECE_BOUND = 3000;

/** Draws the surroundings of a finding to scale; null when it has no place. Bounded whatever the chip's size. */
export function drawPlace(
  geometry: ChipGeometry,
  finding: Finding,
  whole: PlaceOptions,
): PlaceDrawing | null {
  const { xMm, yMm } = finding;
  if (xMm === null || yMm === null) return null;
  // the scale bar's strip is left free at the foot
  const options = { ...whole, heightMm: whole.heightMm - 3 * whole.labelSizeMm };
  const view = viewOf(geometry, finding, xMm, yMm, options);
  const scale = options.widthMm / view.width;
  const x = (value: number): number => (value - view.x) * scale;
  const y = (value: number): number => (value - view.y) * scale;
  const named = new Set(finding.names);
  const holes = geometry.chip.ports
    .filter((port) => touches(port.xMm, port.yMm, port.radiusMm, view))
    .map((port) => ({ name: port.name, x: x(port.xMm), y: y(port.yMm), radiusMm: port.radiusMm * scale }));
  const { mark } = finding;
  const pieces = geometry
    .piecesIn(view)
    .slice(0, PIECE_BOUND)
    .sort((a, b) => a - b);
  return {
    widthMm: options.widthMm,
    viewHeightMm: options.heightMm,
    scale,
    edge: (geometry.chip.edge?.rings ?? []).map((ring) =>
      Array.from(ring, (value, i) => (i % 2 === 0 ? x(value) : y(value))),
    ),
    strokes: strokesOf(geometry, pieces, named, x, y, scale),
    holes,
    mark: mark === undefined ? null : [x(mark.x1Mm), y(mark.y1Mm), x(mark.x2Mm), y(mark.y2Mm)],
    cross: [x(xMm), y(yMm)],
    labels: labelsOf(geometry, finding, pieces, holes, view, scale, options),
    scaleBar: scaleBarOf(scale, options),
  };
}

/** Round the place: some widths of the widest channel concerned, and all of the distance marked. */
function viewOf(
  { chip, bounds }: ChipGeometry,
  finding: Finding,
  xMm: number,
  yMm: number,
  options: PlaceOptions,
): Box {
  const named = new Set(finding.names);
  const widths = chip.channels
    .filter(({ name }) => named.has(name))
    .map((channel) => 2 * stripHalfWidthMm(channel));
  const rims = chip.ports.filter(({ name }) => named.has(name)).map(({ radiusMm }) => 2 * radiusMm);
  const { mark } = finding;
  const marked = mark === undefined ? 0 : Math.hypot(mark.x2Mm - mark.x1Mm, mark.y2Mm - mark.y1Mm);
  const wanted = Math.max(
    5 * widths.reduce((widest, width) => Math.max(widest, width), 0),
    3 * rims.reduce((widest, rim) => Math.max(widest, rim), 0),
    3 * marked,
  );
  const width = Math.min(wanted > 0 ? wanted : bounds.width / 8, 2 * Math.max(bounds.width, bounds.height));
  const height = width * (options.heightMm / options.widthMm);
  return { x: xMm - width / 2, y: yMm - height / 2, width, height };
}

function touches(x: number, y: number, radius: number, box: Box): boolean {
  return (
    x + radius >= box.x &&
    x - radius <= box.x + box.width &&
    y + radius >= box.y &&
    y - radius <= box.y + box.height
  );
}

function strokesOf(
  { chip, pieces, pieceChannel }: ChipGeometry,
  inView: readonly number[],
  named: ReadonlySet<string>,
  x: (value: number) => number,
  y: (value: number) => number,
  scale: number,
): MapStroke[] {
  const runs: { channel: number; points: number[]; last: number }[] = [];
  for (const piece of inView) {
    const [x1, y1, x2, y2] = pieces.subarray(4 * piece, 4 * piece + 4);
    const run = runs.at(-1);
    const follows =
      run !== undefined &&
      run.last === piece - 1 &&
      run.channel === pieceChannel[piece] &&
      joins(run.points, x(x1), y(y1));
    if (follows) {
      run.points.push(x(x2), y(y2));
      run.last = piece;
    } else {
      runs.push({ channel: pieceChannel[piece], points: [x(x1), y(y1), x(x2), y(y2)], last: piece });
    }
  }
  const stroke = (run: (typeof runs)[number], rim: number, colour: string): MapStroke => ({
    points: run.points,
    widthMm: Math.max(2 * stripHalfWidthMm(chip.channels[run.channel]) * scale, 0.3) + rim,
    colour,
    cap: chip.channels[run.channel].linecap,
  });
  return [
    ...runs.map((run) => stroke(run, 0.3, RIM_COLOUR)),
    ...runs.map((run) =>
      stroke(run, 0, named.has(chip.channels[run.channel].name) ? NAMED_COLOUR : OTHER_COLOUR),
    ),
  ];
}

function joins(points: readonly number[], x: number, y: number): boolean {
  return Math.abs(points[points.length - 2] - x) < 1e-6 && Math.abs(points[points.length - 1] - y) < 1e-6;
}

function labelsOf(
  geometry: ChipGeometry,
  finding: Finding,
  inView: readonly number[],
  holes: readonly MapHole[],
  view: Box,
  scale: number,
  options: PlaceOptions,
): MapLabel[] {
  const size = options.labelSizeMm;
  const wish = (text: string, anchors: LabelWish['anchors']): LabelWish => ({
    text,
    widthMm: options.measure(text, size) + 0.5,
    heightMm: 1.25 * size,
    anchors,
  });
  const centre = { x: options.widthMm / 2, y: options.heightMm / 2 };
  const wishes: LabelWish[] = [];
  if (options.measured !== null) wishes.push(wish(options.measured, [{ ...centre, clear: 0.4 }]));
  const named = new Set(finding.names);
  for (const [index, piece] of longestPieces(geometry, inView, view)) {
    const channel = geometry.chip.channels[index];
    if (!named.has(channel.name)) continue;
    const clear = Math.max(stripHalfWidthMm(channel) * scale, 0.15) + 0.2;
    const anchors = inViewPoints(geometry, piece, view, scale).map((point) => ({ ...point, clear }));
    wishes.push(wish(shortName(channel.name, options.readable), anchors));
  }
  for (const hole of holes.slice(0, 6)) {
    const anchor = {
      x: clamp(hole.x, 0, options.widthMm),
      y: clamp(hole.y, 0, options.heightMm),
      clear: hole.radiusMm,
    };
    wishes.push(wish(shortName(hole.name, options.readable), [anchor]));
  }
  const placed = placeLabels(wishes, {
    area: { x: 0.4, y: 0.4, width: options.widthMm - 0.8, height: options.heightMm - 0.8 },
    geometry,
    toDrawing: (box) => ({
      x: view.x + box.x / scale,
      y: view.y + box.y / scale,
      width: box.width / scale,
      height: box.height / scale,
    }),
    scale,
    leastHalfWidthMm: 0.3,
    obstacles: holes.map(({ x, y, radiusMm }) => ({
      x: x - radiusMm,
      y: y - radiusMm,
      width: 2 * radiusMm,
      height: 2 * radiusMm,
    })),
    lines: markLine(finding, view, scale),
  });
  return placed.flatMap((label) =>
    label === undefined
      ? []
      : [{ kind: 'reach', text: label.wish.text, box: label.box, sizeMm: size, leader: label.leader }],
  );
}

/** Of each channel in view the piece that shows most of its length. */
function longestPieces(
  geometry: ChipGeometry,
  inView: readonly number[],
  view: Box,
): ReadonlyMap<number, number> {
  const best = new Map<number, { piece: number; length: number }>();
  for (const piece of inView) {
    const [x1, y1, x2, y2] = geometry.pieces.subarray(4 * piece, 4 * piece + 4);
    const [from, to] = visibleShare(x1, y1, x2, y2, view);
    const length = (to - from) * Math.hypot(x2 - x1, y2 - y1);
    const channel = geometry.pieceChannel[piece];
    if (length > (best.get(channel)?.length ?? -1)) best.set(channel, { piece, length });
  }
  return new Map([...best].map(([channel, { piece }]) => [channel, piece]));
}

/** Liang–Barsky: from where to where, as shares, a piece lies inside the view; its middle twice when it lies outside. */
function visibleShare(x1: number, y1: number, x2: number, y2: number, view: Box): readonly [number, number] {
  let [from, to] = [0, 1];
  for (const [start, delta, low, high] of [
    [x1, x2 - x1, view.x, view.x + view.width],
    [y1, y2 - y1, view.y, view.y + view.height],
  ]) {
    if (delta === 0) continue;
    const [a, b] = [(low - start) / delta, (high - start) / delta];
    from = Math.max(from, Math.min(a, b));
    to = Math.min(to, Math.max(a, b));
  }
  return from > to ? [0.5, 0.5] : [from, to];
}

/** Points of a piece inside the view, in paper mm: the middle of what shows, then its quarters. */
function inViewPoints(
  { pieces }: ChipGeometry,
  piece: number,
  view: Box,
  scale: number,
): { x: number; y: number }[] {
  const [x1, y1, x2, y2] = pieces.subarray(4 * piece, 4 * piece + 4);
  const [from, to] = visibleShare(x1, y1, x2, y2, view);
  return [0.5, 0.25, 0.75].map((share) => {
    const t = from + (to - from) * share;
    return { x: (x1 + (x2 - x1) * t - view.x) * scale, y: (y1 + (y2 - y1) * t - view.y) * scale };
  });
}

/** The distance marked, so that no label lies on it. */
function markLine({ mark }: Finding, view: Box, scale: number): [number, number, number, number][] {
  if (mark === undefined) return [];
  return [
    [
      (mark.x1Mm - view.x) * scale,
      (mark.y1Mm - view.y) * scale,
      (mark.x2Mm - view.x) * scale,
      (mark.y2Mm - view.y) * scale,
    ],
  ];
}

function clamp(value: number, low: number, high: number): number {
  return Math.min(Math.max(value, low), high);
}

function scaleBarOf(scale: number, options: PlaceOptions): ScaleBar {
  const drawn = niceStep((0.18 * options.widthMm) / scale);
  return {
    x: options.widthMm - drawn * scale - 1.5,
    y: options.heightMm + 0.6 * options.labelSizeMm,
    lengthMm: drawn * scale,
    text: drawn >= 1 ? `${formatNumber(drawn)} mm` : `${formatNumber(drawn * 1000)} µm`,
    sizeMm: options.labelSizeMm,
  };
}
