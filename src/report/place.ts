import type { Finding } from '../findings/types.ts';
import { formatNumber } from '../runsheet/shown.ts';
import { niceStep } from './colour-scale.ts';
import { type LabelWish, placeLabels } from './label-placement.ts';
import { labelWish, shortName } from './label-wish.ts';
import { edgeOn, holesOn, type PaperFrame, paperFrame } from './map-frame.ts';
import { type Box, type ChipGeometry, type Line, stripHalfWidthMm } from './map-geometry.ts';
import { paintedWidthMm, RIM_COLOUR } from './map-strokes.ts';
import type { MapHole, MapStroke, Picture, PictureOptions, ScaleBar } from './map-types.ts';

/** A close-up of a finding's place, everything clipped to it. */
export interface PlaceDrawing extends Picture {
  /** Of the picture itself; the scale bar stands below it. */
  readonly viewHeightMm: number;
  /** Channels in view: rim first, then fill; those the finding names are darker. */
  readonly strokes: readonly MapStroke[];
  /** The distance the finding speaks of. */
  readonly mark: Line | null;
  /** The place itself. */
  readonly cross: readonly [number, number];
}

export interface PlaceOptions extends PictureOptions {
  /** Written at the mark. */
  readonly measured: string | null;
}

const NAMED_COLOUR = '#6f8fb8';
const OTHER_COLOUR = '#d4d4d4';
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
  const frame = paperFrame(view, options.widthMm / view.width);
  const named = new Set(finding.names);
  const holes = holesOn(
    frame,
    geometry.chip.ports.filter((port) => touches(port.xMm, port.yMm, port.radiusMm, view)),
  );
  const pieces = geometry
    .piecesIn(view)
    .slice(0, PIECE_BOUND)
    .sort((a, b) => a - b);
  const mark = markLine(finding, frame);
  return {
    widthMm: options.widthMm,
    viewHeightMm: options.heightMm,
    edge: edgeOn(frame, geometry.chip),
    strokes: strokesOf(geometry, pieces, named, frame),
    holes,
    mark,
    cross: [frame.x(xMm), frame.y(yMm)],
    labels: placeLabels(labelWishes(geometry, named, pieces, holes, view, frame, options), {
      area: { x: 0.4, y: 0.4, width: options.widthMm - 0.8, height: options.heightMm - 0.8 },
      geometry,
      frame,
      leastHalfWidthMm: 0.3,
      holes,
      lines: mark === null ? [] : [mark],
    }),
    scaleBar: scaleBarOf(frame.scale, options),
  };
}

/** The distance marked, on paper. */
function markLine({ mark }: Finding, { x, y }: PaperFrame): PlaceDrawing['mark'] {
  return mark === undefined ? null : [x(mark.x1Mm), y(mark.y1Mm), x(mark.x2Mm), y(mark.y2Mm)];
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
  { chip, pieceLine, pieceChannel }: ChipGeometry,
  inView: readonly number[],
  named: ReadonlySet<string>,
  { x, y, scale }: PaperFrame,
): MapStroke[] {
  const runs: { channel: number; points: number[]; last: number }[] = [];
  for (const piece of inView) {
    const [x1, y1, x2, y2] = pieceLine(piece);
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
    widthMm: paintedWidthMm(chip.channels[run.channel], scale) + rim,
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

function labelWishes(
  geometry: ChipGeometry,
  named: ReadonlySet<string>,
  inView: readonly number[],
  holes: readonly MapHole[],
  view: Box,
  frame: PaperFrame,
  options: PlaceOptions,
): LabelWish[] {
  const { measured, widthMm, heightMm, readable } = options;
  const wish = (text: string, anchors: LabelWish['anchors']): LabelWish =>
    labelWish('reach', text, anchors, options);
  const wishes = measured === null ? [] : [wish(measured, [{ x: widthMm / 2, y: heightMm / 2, clear: 0.4 }])];
  for (const [index, piece] of longestPieces(geometry, inView, view)) {
    const channel = geometry.chip.channels[index];
    if (!named.has(channel.name)) continue;
    const clear = Math.max(stripHalfWidthMm(channel) * frame.scale, 0.15) + 0.2;
    const anchors = inViewPoints(geometry.pieceLine(piece), view, frame).map((point) => ({
      ...point,
      clear,
    }));
    wishes.push(wish(shortName(channel.name, readable), anchors));
  }
  for (const { name, x, y, radiusMm } of holes.slice(0, 6)) {
    const anchor = { x: clamp(x, 0, widthMm), y: clamp(y, 0, heightMm), clear: radiusMm };
    wishes.push(wish(shortName(name, readable), [anchor]));
  }
  return wishes;
}

/** Of each channel in view the piece that shows most of its length. */
function longestPieces(
  geometry: ChipGeometry,
  inView: readonly number[],
  view: Box,
): ReadonlyMap<number, number> {
  const best = new Map<number, { piece: number; length: number }>();
  for (const piece of inView) {
    const line = geometry.pieceLine(piece);
    const [x1, y1, x2, y2] = line;
    const [from, to] = visibleShare(line, view);
    const length = (to - from) * Math.hypot(x2 - x1, y2 - y1);
    const channel = geometry.pieceChannel[piece];
    if (length > (best.get(channel)?.length ?? -1)) best.set(channel, { piece, length });
  }
  return new Map([...best].map(([channel, { piece }]) => [channel, piece]));
}

/**
 * Liang–Barsky: from where to where, as shares, a piece lies inside the view; its middle twice when it lies outside. Level and
 * upright pieces just beside the view count as inside: a strip that shows is named though its centreline does not show.
 */
function visibleShare([x1, y1, x2, y2]: Line, view: Box): readonly [number, number] {
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
function inViewPoints(line: Line, view: Box, frame: PaperFrame): { x: number; y: number }[] {
  const [x1, y1, x2, y2] = line;
  const [from, to] = visibleShare(line, view);
  return [0.5, 0.25, 0.75].map((share) => {
    const t = from + (to - from) * share;
    return { x: frame.x(x1 + (x2 - x1) * t), y: frame.y(y1 + (y2 - y1) * t) };
  });
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
