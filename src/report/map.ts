import { reachName } from '../network/names.ts';
import { formatNumber, type Shown, type Unit } from '../runsheet/shown.ts';
import { clippedLine } from './clipped-line.ts';
import {
  COLOUR_STEPS,
  type ColourScale,
  colourScale,
  legendTicks,
  NO_VALUE_COLOUR,
  niceStep,
  PALETTE,
} from './colour-scale.ts';
import { type LabelGround, type LabelWish, type PlacedLabel, placeLabels } from './label-placement.ts';
import { type Box, type ChipGeometry, stripHalfWidthMm } from './map-geometry.ts';
import { hasWindow, type MapQuantity, reachValues } from './reach-values.ts';
import type { ReportedCase } from './report.ts';

/** A polyline to be stroked; paper mm, x0 y0 x1 y1 … */
export interface MapStroke {
  readonly points: readonly number[];
  readonly widthMm: number;
  readonly colour: string;
  readonly cap: 'butt' | 'round' | 'square';
}

export interface MapReach {
  /** Index into the network's reaches. */
  readonly reach: number;
  readonly strokes: readonly MapStroke[];
}

export interface MapHole {
  readonly name: string;
  readonly x: number;
  readonly y: number;
  readonly radiusMm: number;
}

export interface MapUnread {
  /** Lines, cut off at the figure. */
  readonly under: readonly (readonly number[])[];
  /** Rings of what stands in a channel. */
  readonly over: readonly (readonly number[])[];
}

/** Looks of what was not read. */
export const PALE_LINE = '#c4c4c4';
export const PALE_FILL = '#e9e9e9';

export interface MapLabel {
  readonly kind: 'port' | 'reach' | 'finding';
  readonly text: string;
  readonly box: Box;
  readonly sizeMm: number;
  readonly leader: readonly [number, number, number, number] | null;
}

export interface MapLegend {
  /** The bar; the low end on the left. */
  readonly bar: Box;
  readonly colours: readonly string[];
  readonly ticks: readonly { readonly x: number; readonly text: string }[];
  /** "mean floor shear, Pa (logarithmic)" */
  readonly title: string;
  readonly titleAt: readonly [number, number];
  /** "grey: no value"; null when every reach has one. */
  readonly grey: string | null;
  readonly sizeMm: number;
}

export interface ScaleBar {
  readonly x: number;
  readonly y: number;
  readonly lengthMm: number;
  readonly text: string;
  readonly sizeMm: number;
}

/** A map as data: everything in paper millimetres, y down, from the figure's upper left corner. */
export interface MapDrawing {
  readonly quantity: MapQuantity;
  readonly widthMm: number;
  readonly heightMm: number;
  /** Paper mm per drawing mm. */
  readonly scale: number;
  /** Chip edge rings. */
  readonly edge: readonly (readonly number[])[];
  /** The channels as drawn, under the colours: a dark rim, and what is part of no reach. */
  readonly ground: readonly MapStroke[];
  readonly reaches: readonly MapReach[];
  readonly holes: readonly MapHole[];
  /** What is drawn and was not read, pale: under the channels, and (obstacles) on them. */
  readonly unread: MapUnread;
  /** Exact places of findings, numbered from 1 as in the list; the number itself is a label. */
  readonly markers: readonly { readonly number: number; readonly x: number; readonly y: number }[];
  readonly labels: readonly MapLabel[];
  /** How many reaches that have a label of their own found no room or were beyond the bound. */
  readonly unlabelled: number;
  /** How many ports found no room for their name. */
  readonly unnamedPorts: number;
  readonly scaleBar: ScaleBar;
  readonly legend: MapLegend | null;
  /** Stated below: view, scale, least painted width. */
  readonly caption: string;
}

export interface MapOptions {
  readonly quantity: MapQuantity;
  /** The figure is at most so large; its chip is drawn as large as fits. */
  readonly widthMm: number;
  readonly heightMm: number;
  /** Fixed scale instead of the largest that fits; widthMm and heightMm then only bound the labels. */
  readonly scale?: number;
  readonly labelSizeMm: number;
  /** Width of a text in mm. */
  readonly measure: (text: string, sizeMm: number) => number;
  /** A name as the picture can show it: harmless, and with a code for what the font lacks. */
  readonly readable: (name: string) => string;
  /** Numbers of findings at their places. */
  readonly findingNumbers: boolean;
  readonly reachLabels: boolean;
}

/** Quantities in words, the same on maps, legends and in titles. */
export const QUANTITY_TITLES: Record<MapQuantity, string> = {
  pressure: 'pressure in the chip',
  shear: 'mean wall shear on the floor',
  flow: 'flow',
  residence: 'residence time',
};

export const QUANTITY_SHOWN: Record<MapQuantity, Shown> = {
  pressure: 'pressure',
  shear: 'wall_shear',
  flow: 'flow',
  residence: 'residence_time',
};

const LABEL_BOUND = 160;
const PORT_LABEL_BOUND = 400;
const FINDING_BOUND = 99;

/** Draws one case as a map coloured by a quantity. Time and size grow linearly with the chip; labels are bounded. */
export function drawMap(one: ReportedCase, geometry: ChipGeometry, options: MapOptions): MapDrawing {
  const { network } = one;
  const values = reachValues(one, options.quantity);
  const scaleOfColour = colourScale(
    colourValues(one, options.quantity, values),
    options.quantity === 'pressure' ? 'lowest' : 'zero',
  );
  const frame = frameOf(geometry, options);
  const holes = network.chip.ports.map((port) => ({
    name: port.name,
    x: frame.x(port.xMm),
    y: frame.y(port.yMm),
    radiusMm: port.radiusMm * frame.scale,
  }));
  const unit = one.show.unit(QUANTITY_SHOWN[options.quantity], largestOf(values));
  const markers = options.findingNumbers ? findingMarkers(one, frame) : [];
  const labels = labelsOf(one, geometry, frame, holes, markers, values, unit, options);
  const unread = unreadOf(geometry, frame);
  return {
    quantity: options.quantity,
    widthMm: frame.figureWidthMm,
    heightMm: frame.figureHeightMm,
    scale: frame.scale,
    edge: (network.chip.edge?.rings ?? []).map((ring) => frame.points(ring)),
    ground: groundStrokes(geometry, frame),
    reaches: reachStrokes(one, frame, values, scaleOfColour, options.quantity),
    holes,
    unread,
    markers,
    labels: labels.placed,
    unlabelled: labels.unlabelled,
    unnamedPorts: labels.unnamedPorts,
    scaleBar: scaleBarOf(frame, options),
    legend: scaleOfColour === null ? null : legendOf(scaleOfColour, unit, values, frame, options),
    caption: captionOf(frame, unread),
  };
}

/** Paper frame: paper = (drawing − origin) × scale + margin. */
interface Frame {
  readonly scale: number;
  readonly x: (xMm: number) => number;
  readonly y: (yMm: number) => number;
  readonly points: (points: ArrayLike<number>) => number[];
  readonly toDrawing: (box: Box) => Box;
  readonly chip: Box;
  readonly figureWidthMm: number;
  readonly figureHeightMm: number;
  readonly footMm: number;
}

function frameOf({ bounds }: ChipGeometry, options: MapOptions): Frame {
  const margin = 1.2 * options.labelSizeMm;
  const footMm = 5.2 * options.labelSizeMm;
  const scale =
    options.scale ??
    Math.min(
      (options.widthMm - 2 * margin) / bounds.width,
      (options.heightMm - footMm - 2 * margin) / bounds.height,
    );
  const chipWidth = bounds.width * scale;
  const chipHeight = bounds.height * scale;
  const figureWidthMm =
    options.scale === undefined ? options.widthMm : Math.max(options.widthMm, chipWidth + 2 * margin);
  const left = (figureWidthMm - chipWidth) / 2;
  const top = margin;
  const x = (xMm: number): number => (xMm - bounds.x) * scale + left;
  const y = (yMm: number): number => (yMm - bounds.y) * scale + top;
  return {
    scale,
    x,
    y,
    points: (points) => Array.from(points, (value, i) => (i % 2 === 0 ? x(value) : y(value))),
    toDrawing: (box) => ({
      x: (box.x - left) / scale + bounds.x,
      y: (box.y - top) / scale + bounds.y,
      width: box.width / scale,
      height: box.height / scale,
    }),
    chip: { x: left, y: top, width: chipWidth, height: chipHeight },
    figureWidthMm,
    figureHeightMm: chipHeight + 2 * margin + footMm,
    footMm,
  };
}

/** Values that the colours must span: for pressures those of the nodes, since a reach runs through them. */
function colourValues(
  { network, flow }: ReportedCase,
  quantity: MapQuantity,
  values: Float64Array,
): Float64Array {
  if (quantity !== 'pressure') return values;
  const ends = new Float64Array(2 * network.reachCount);
  for (let reach = 0; reach < network.reachCount; reach++) {
    ends[2 * reach] = flow.nodePressure[network.reachFrom[reach]];
    ends[2 * reach + 1] = flow.nodePressure[network.reachTo[reach]];
  }
  return ends;
}

function largestOf(values: Float64Array): number {
  let largest = 0;
  for (const value of values) if (Math.abs(value) > largest) largest = Math.abs(value);
  return largest;
}

const RIM_COLOUR = '#303030';

function groundStrokes({ chip }: ChipGeometry, frame: Frame): MapStroke[] {
  const rim = 0.18;
  const least = 0.3;
  return chip.channels.flatMap((channel) =>
    channel.centrelines.map(({ points }) => ({
      points: thinned(frame.points(points)),
      widthMm: Math.max(2 * stripHalfWidthMm(channel) * frame.scale, least) + rim,
      colour: RIM_COLOUR,
      cap: channel.linecap,
    })),
  );
}

/** Points drawn of what was not read: a lavish title block must not make the picture heavy. */
const UNREAD_BOUND = 50_000;

function unreadOf({ chip }: ChipGeometry, frame: Frame): MapUnread {
  const area = { x: 0, y: 0, width: frame.figureWidthMm, height: frame.figureHeightMm - frame.footMm };
  let left = UNREAD_BOUND;
  const fits = (line: Float64Array): boolean => {
    left -= line.length / 2;
    return left >= 0;
  };
  const over = chip.obstacles
    .flatMap(({ rings }) => rings)
    .filter(fits)
    .map((ring) => thinned(frame.points(ring)));
  const under = chip.unreadLines
    .filter(fits)
    .flatMap((line) => clippedLine(frame.points(line), area))
    .map(thinned);
  return { under, over };
}

function reachStrokes(
  one: ReportedCase,
  frame: Frame,
  values: Float64Array,
  scale: ColourScale | null,
  quantity: MapQuantity,
): MapReach[] {
  const { network } = one;
  const reaches: MapReach[] = [];
  // gradients along a reach only while they can be seen and paid for
  const graded = quantity === 'pressure' && network.segmentCount <= 20_000;
  for (let reach = 0; reach < network.reachCount; reach++) {
    const channel = network.chip.channels[network.reachChannel[reach]];
    const widthMm = Math.max(2 * stripHalfWidthMm(channel) * frame.scale, 0.3);
    const pieces = graded
      ? gradedPieces(one, reach, frame, scale)
      : [wholePiece(one, reach, frame, values, scale)];
    reaches.push({
      reach,
      strokes: pieces.map(({ step, points }) => ({
        points: thinned(points),
        widthMm,
        colour: step < 0 ? NO_VALUE_COLOUR : PALETTE[step],
        cap: 'butt',
      })),
    });
  }
  return reaches;
}

interface Piece {
  readonly step: number;
  readonly points: number[];
}

function wholePiece(
  { network }: ReportedCase,
  reach: number,
  frame: Frame,
  values: Float64Array,
  scale: ColourScale | null,
): Piece {
  const points: number[] = [];
  for (let segment = network.firstSegment[reach]; segment < network.firstSegment[reach + 1]; segment++) {
    addPoint(points, frame.x(network.segmentX1[segment]), frame.y(network.segmentY1[segment]));
    addPoint(points, frame.x(network.segmentX2[segment]), frame.y(network.segmentY2[segment]));
  }
  return { step: scale?.step(values[reach]) ?? -1, points };
}

/** The reach cut where its colour steps, pressure falling evenly with duct length. */
function gradedPieces(
  { network, flow }: ReportedCase,
  reach: number,
  frame: Frame,
  scale: ColourScale | null,
): Piece[] {
  const startPa = flow.nodePressure[network.reachFrom[reach]];
  const dropPa = startPa - flow.nodePressure[network.reachTo[reach]];
  const [first, end] = [network.firstSegment[reach], network.firstSegment[reach + 1]];
  let totalMm = 0;
  for (let segment = first; segment < end; segment++) totalMm += network.segmentDuctMm[segment];
  const pieces: Piece[] = [];
  let doneMm = 0;
  for (let segment = first; segment < end; segment++) {
    const lengthMm = network.segmentDuctMm[segment];
    const at = (share: number): number => startPa - dropPa * ((doneMm + share * lengthMm) / totalMm);
    const steps = scale === null ? 1 : Math.abs(scale.step(at(0)) - scale.step(at(1))) + 1;
    const [x1, y1] = [frame.x(network.segmentX1[segment]), frame.y(network.segmentY1[segment])];
    const [x2, y2] = [frame.x(network.segmentX2[segment]), frame.y(network.segmentY2[segment])];
    const parts = Math.max(1, Math.min(COLOUR_STEPS, steps));
    for (let part = 0; part < parts; part++) {
      const [from, to] = [part / parts, (part + 1) / parts];
      const step = scale?.step(at((from + to) / 2)) ?? -1;
      const ends = [x1 + (x2 - x1) * from, y1 + (y2 - y1) * from, x1 + (x2 - x1) * to, y1 + (y2 - y1) * to];
      let last = pieces.at(-1);
      if (last === undefined || last.step !== step) {
        // the earlier colour runs on under the next, so that no seam shows between them
        if (last !== undefined) addPiece(last.points, ends);
        last = { step, points: [] };
        pieces.push(last);
      }
      addPiece(last.points, ends);
    }
    doneMm += lengthMm;
  }
  return pieces;
}

function addPiece(points: number[], [x1, y1, x2, y2]: readonly number[]): void {
  addPoint(points, x1, y1);
  addPoint(points, x2, y2);
}

function addPoint(points: number[], x: number, y: number): void {
  const n = points.length;
  if (n >= 2 && points[n - 2] === x && points[n - 1] === y) return;
  points.push(x, y);
}

/** Leaves out points nearer than 0.04 mm to the last kept one; keeps both ends. */
function thinned(points: readonly number[]): number[] {
  if (points.length <= 4) return [...points];
  const kept = [points[0], points[1]];
  for (let i = 2; i < points.length - 2; i += 2) {
    const far = Math.hypot(points[i] - kept[kept.length - 2], points[i + 1] - kept[kept.length - 1]) >= 0.04;
    if (far) kept.push(points[i], points[i + 1]);
  }
  kept.push(points[points.length - 2], points[points.length - 1]);
  return kept;
}

function labelsOf(
  one: ReportedCase,
  geometry: ChipGeometry,
  frame: Frame,
  holes: readonly MapHole[],
  markers: MapDrawing['markers'],
  values: Float64Array,
  unit: Unit,
  options: MapOptions,
): { placed: MapLabel[]; unlabelled: number; unnamedPorts: number } {
  const size = options.labelSizeMm;
  const wish = (text: string, anchors: LabelWish['anchors']): LabelWish => ({
    text,
    widthMm: options.measure(text, size) + 0.5,
    heightMm: 1.25 * size,
    anchors,
  });
  const portWishes = holes.slice(0, PORT_LABEL_BOUND).map((hole, port) => {
    const anchors = [{ x: hole.x, y: hole.y, clear: hole.radiusMm }];
    // a port is named, if need be by the first letters of its name
    const [full, ...shorter] = [
      portText(one, port, options),
      shortName(hole.name, options.readable),
      shortName(hole.name, options.readable, 8),
    ];
    const fallback = shorter.reduceRight<LabelWish | undefined>(
      (next, text) => ({ ...wish(text, anchors), ...(next === undefined ? {} : { shorter: next }) }),
      undefined,
    );
    return { ...wish(full, anchors), ...(fallback === undefined ? {} : { shorter: fallback }) };
  });
  const findingWishes = markers.map(({ number, x, y }) => wish(String(number), [{ x, y, clear: 0.8 }]));
  const reaches = options.reachLabels ? reachesToLabel(one, values) : { chosen: [], of: 0 };
  const reachWishes = reaches.chosen.map((reach) =>
    wish(reachText(one, reach, values, unit, options), reachAnchors(one, reach, frame)),
  );
  const obstacles = holes.map(({ x, y, radiusMm }) => ({
    x: x - radiusMm,
    y: y - radiusMm,
    width: 2 * radiusMm,
    height: 2 * radiusMm,
  }));
  // of very many ports the first are named, then the findings are numbered, then the others take what room is left
  const wishes = [
    ...ofKind('port', portWishes.slice(0, LABEL_BOUND)),
    ...ofKind('finding', findingWishes),
    ...ofKind('port', portWishes.slice(LABEL_BOUND)),
    ...ofKind('reach', reachWishes),
  ];
  const placed = placeLabels(
    wishes.map(({ wish: wanted }) => wanted),
    {
      area: { x: 0, y: 0, width: frame.figureWidthMm, height: frame.figureHeightMm - frame.footMm },
      geometry,
      toDrawing: frame.toDrawing,
      scale: frame.scale,
      leastHalfWidthMm: 0.24,
      obstacles,
      lines: edgeLines(one, frame),
    },
  );
  const labels = placed.flatMap((label, i) =>
    label === undefined ? [] : [mapLabel(label, wishes[i].kind, size)],
  );
  const labelled = labels.filter(({ kind }) => kind === 'reach').length;
  const named = labels.filter(({ kind }) => kind === 'port').length;
  return { placed: labels, unlabelled: reaches.of - labelled, unnamedPorts: holes.length - named };
}

function ofKind(
  kind: MapLabel['kind'],
  wishes: readonly LabelWish[],
): readonly { readonly kind: MapLabel['kind']; readonly wish: LabelWish }[] {
  return wishes.map((wish) => ({ kind, wish }));
}

/** The chip edge's sides; an edge drawn finely is left out, labels may then cross it. */
function edgeLines({ network }: ReportedCase, frame: Frame): LabelGround['lines'] {
  const rings = network.chip.edge?.rings ?? [];
  if (rings.reduce((sum, ring) => sum + ring.length / 2, 0) > 400) return [];
  return rings.flatMap((ring) => {
    const points = frame.points(ring);
    return Array.from(
      { length: points.length / 2 - 1 },
      (_, i) => [points[2 * i], points[2 * i + 1], points[2 * i + 2], points[2 * i + 3]] as const,
    );
  });
}

function mapLabel({ wish, box, leader }: PlacedLabel, kind: MapLabel['kind'], sizeMm: number): MapLabel {
  return { kind, text: wish.text, box, sizeMm, leader };
}

function portText(
  { part, show, network }: ReportedCase,
  port: number,
  { quantity, readable }: MapOptions,
): string {
  const name = shortName(network.chip.ports[port].name, readable);
  const { pressure_pa, flow_m3_s } = part.ports[port];
  if (quantity === 'pressure' && pressure_pa !== null) return `${name} ${show.text('pressure', pressure_pa)}`;
  if (quantity === 'flow' && flow_m3_s !== null) return `${name} ${show.text('flow', flow_m3_s)}`;
  return name;
}

function reachText(
  { network }: ReportedCase,
  reach: number,
  values: Float64Array,
  unit: Unit,
  { readable }: MapOptions,
): string {
  const value = values[reach];
  const name = shortName(reachName(network, reach), readable);
  return Number.isNaN(value) ? name : `${name} ${formatNumber(value / unit.si)}`;
}

/** The first characters of a readable name, with an ellipsis where it is longer. A character's code "[U+1F9EA]" is never cut. */
export function shortName(name: string, readable: (name: string) => string, length = 24): string {
  const text = readable(name);
  if ([...text].length <= length) return text;
  let short = '';
  let used = 0;
  for (const [piece] of text.matchAll(/\[U\+[0-9A-F]{4,6}\]|[\s\S]/gu)) {
    used += [...piece].length;
    // a few letters at least, be one a code
    if (used > length - 1 && [...short].length >= length / 2) break;
    short += piece;
  }
  return `${short}…`;
}

function findingMarkers({ part }: ReportedCase, frame: Frame): { number: number; x: number; y: number }[] {
  return part.findings
    .flatMap(({ x_mm, y_mm }, i) =>
      x_mm === null || y_mm === null ? [] : [{ number: i + 1, x: frame.x(x_mm), y: frame.y(y_mm) }],
    )
    .slice(0, FINDING_BOUND);
}

/** Reaches with a window first, then the longest. */
function reachesToLabel(
  { network, run }: ReportedCase,
  values: Float64Array,
): { chosen: readonly number[]; of: number } {
  const windowed: number[] = [];
  const others: number[] = [];
  for (let reach = 0; reach < network.reachCount; reach++) {
    if (hasWindow(run.channels[network.reachChannel[reach]])) windowed.push(reach);
    else if (!Number.isNaN(values[reach])) others.push(reach);
  }
  others.sort((a, b) => network.reachDrawnMm[b] - network.reachDrawnMm[a] || a - b);
  const bound = network.reachCount > 2000 ? 40 : LABEL_BOUND;
  return { chosen: [...windowed, ...others].slice(0, bound), of: windowed.length + others.length };
}

/** The middle of a reach, then a quarter and three quarters along it. */
function reachAnchors({ network }: ReportedCase, reach: number, frame: Frame): LabelWish['anchors'] {
  const channel = network.chip.channels[network.reachChannel[reach]];
  const clear = Math.max(stripHalfWidthMm(channel) * frame.scale, 0.24) + 0.1;
  const [first, end] = [network.firstSegment[reach], network.firstSegment[reach + 1]];
  let totalMm = 0;
  for (let segment = first; segment < end; segment++) totalMm += segmentLength(segment);
  return [0.5, 0.25, 0.75].map((share) => pointAt(share * totalMm));

  function segmentLength(segment: number): number {
    return Math.hypot(
      network.segmentX2[segment] - network.segmentX1[segment],
      network.segmentY2[segment] - network.segmentY1[segment],
    );
  }

  function pointAt(distanceMm: number): { x: number; y: number; clear: number } {
    let leftMm = distanceMm;
    let segment = first;
    while (segment < end - 1 && leftMm > segmentLength(segment)) leftMm -= segmentLength(segment++);
    const share = Math.min(1, leftMm / (segmentLength(segment) || 1));
    const x = network.segmentX1[segment] + share * (network.segmentX2[segment] - network.segmentX1[segment]);
    const y = network.segmentY1[segment] + share * (network.segmentY2[segment] - network.segmentY1[segment]);
    return { x: frame.x(x), y: frame.y(y), clear };
  }
}

/** 10 mm where that reads well (4 mm to half the figure on paper), else the next of 1, 2, 5 × 10^k. */
function scaleBarOf(frame: Frame, options: MapOptions): ScaleBar {
  const room = 0.25 * frame.figureWidthMm;
  const ten = 10 * frame.scale;
  const drawn = ten >= Math.min(4, room) && ten <= 2 * room ? 10 : niceStep((0.4 * room) / frame.scale);
  return {
    x: frame.figureWidthMm - drawn * frame.scale - 1,
    y: frame.figureHeightMm - frame.footMm + 1.8 * options.labelSizeMm,
    lengthMm: drawn * frame.scale,
    text: `${formatNumber(drawn)} mm`,
    sizeMm: options.labelSizeMm,
  };
}

function legendOf(
  scale: ColourScale,
  unit: Unit,
  values: Float64Array,
  frame: Frame,
  options: MapOptions,
): MapLegend {
  const size = options.labelSizeMm;
  const width = 0.5 * frame.figureWidthMm;
  const bar = {
    x: 0.04 * frame.figureWidthMm,
    y: frame.figureHeightMm - frame.footMm + 1.5 * size,
    width,
    height: 1.2 * size,
  };
  const single = !(scale.high > scale.low);
  const ticks = spacedTicks(
    legendTicks(scale, unit.si).map((value) => ({
      x: bar.x + (single ? 0.5 : scale.offset(value)) * width,
      text: formatNumber(value / unit.si),
    })),
    size,
    options,
  );
  const missing = values.some((value) => scale.step(value) < 0);
  return {
    bar,
    colours: single ? [PALETTE[Math.round(0.5 * (COLOUR_STEPS - 1))]] : PALETTE,
    ticks,
    title: `${QUANTITY_TITLES[options.quantity]}, ${unit.text}${scale.kind === 'log' ? ' (logarithmic)' : ''}`,
    titleAt: [bar.x, bar.y - 1.35 * size],
    grey: missing ? 'grey: no value or no flow' : null,
    sizeMm: size,
  };
}

/** Both ends stay; an inner tick goes when its number would touch its neighbour's or the last one's. */
function spacedTicks(
  ticks: readonly { x: number; text: string }[],
  size: number,
  options: MapOptions,
): { x: number; text: string }[] {
  const half = (text: string): number => options.measure(text, size) / 2 + 0.5;
  const last = ticks[ticks.length - 1];
  const kept: { x: number; text: string }[] = [];
  for (const tick of ticks) {
    const before = kept.at(-1);
    const clearBefore = before === undefined || tick.x - before.x > half(tick.text) + half(before.text);
    const clearAfter = tick === last || last.x - tick.x > half(tick.text) + half(last.text);
    if ((clearBefore && clearAfter) || (kept.length === 0 && tick !== last) || (tick === last && clearBefore))
      kept.push(tick);
  }
  return kept;
}

/** What stands under a map: how it is seen, and how many names found no room. */
export function mapNotes({ caption, unlabelled, unnamedPorts }: MapDrawing): string {
  const missing = [
    unnamedPorts === 0 ? '' : `${unnamedPorts} ${unnamedPorts === 1 ? 'port' : 'ports'}`,
    unlabelled === 0 ? '' : `${unlabelled} ${unlabelled === 1 ? 'reach' : 'reaches'}`,
  ].filter((text) => text !== '');
  return missing.length === 0 ? caption : `${caption} No room for the names of ${missing.join(' and ')}.`;
}

function captionOf(frame: Frame, { under, over }: MapUnread): string {
  const ratio =
    frame.scale >= 1 ? `${formatNumber(frame.scale, 3)} : 1` : `1 : ${formatNumber(1 / frame.scale, 3)}`;
  return `As drawn, seen from the channel side. Scale ${ratio}; strips thinner than 0.3 mm on paper are drawn 0.3 mm wide.${under.length + over.length === 0 ? '' : ' Pale: drawn, but not read.'}`;
}
