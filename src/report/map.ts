import { countText } from '../findings/words.ts';
import { formatNumber } from '../runsheet/shown.ts';
import { clippedLine } from './clipped-line.ts';
import { colourScale, niceStep } from './colour-scale.ts';
import { edgeOn, holesOn, type PaperFrame, paperFrame } from './map-frame.ts';
import type { Box, ChipGeometry } from './map-geometry.ts';
import { mapLabels } from './map-labels.ts';
import { legendOf } from './map-legend.ts';
import { MAP_QUANTITIES } from './map-quantities.ts';
import { groundStrokes, reachStrokes, thinned } from './map-strokes.ts';
import type { MapDrawing, MapOptions, MapUnread, ScaleBar } from './map-types.ts';
import { joined } from './plain-text.ts';
import { type MapQuantity, reachValues } from './reach-values.ts';
import type { ReportedCase } from './report.ts';

const FINDING_BOUND = 99;

/** Draws one case as a map coloured by a quantity. Time and size grow linearly with the chip; labels are bounded. */
export function drawMap(one: ReportedCase, geometry: ChipGeometry, options: MapOptions): MapDrawing {
  const { network } = one;
  const values = reachValues(one, options.quantity);
  const scaleOfColour = colourScale(
    colourValues(one, options.quantity, values),
    options.quantity === 'pressure' ? 'lowest' : 'zero',
  );
  const figure = figureOf(geometry, options);
  const { frame, area } = figure;
  const holes = holesOn(frame, network.chip.ports);
  const unit = one.show.unit(MAP_QUANTITIES[options.quantity].shown, largestOf(values));
  const markers = options.findingNumbers ? findingMarkers(one, frame) : [];
  const unread = unreadOf(geometry, figure);
  return {
    widthMm: area.width,
    heightMm: figure.heightMm,
    scale: frame.scale,
    edge: edgeOn(frame, network.chip),
    ground: groundStrokes(geometry, frame),
    reaches: reachStrokes(one, frame, values, scaleOfColour, options.quantity),
    holes,
    unread,
    markers,
    ...mapLabels({ one, geometry, frame, area, holes, markers, values, unit, options }),
    scaleBar: scaleBarOf(figure, options),
    legend: scaleOfColour === null ? null : legendOf(scaleOfColour, unit, values, area, options),
    caption: captionOf(frame.scale, unread),
  };
}

/** A figure: where the chip stands in it, and below that room for legend and scale bar. */
interface Figure {
  readonly frame: PaperFrame;
  readonly area: Box;
  readonly heightMm: number;
}

function figureOf({ bounds }: ChipGeometry, options: MapOptions): Figure {
  const margin = 1.2 * options.labelSizeMm;
  const footMm = 5.2 * options.labelSizeMm;
  const { widthMm } = options;
  const scale = Math.min(
    (widthMm - 2 * margin) / bounds.width,
    (options.heightMm - footMm - 2 * margin) / bounds.height,
  );
  const heightMm = bounds.height * scale + 2 * margin + footMm;
  return {
    frame: paperFrame(bounds, scale, { x: (widthMm - bounds.width * scale) / 2, y: margin }),
    area: { x: 0, y: 0, width: widthMm, height: heightMm - footMm },
    heightMm,
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

/** Points drawn of what was not read: a lavish title block must not make the picture heavy. */
const UNREAD_BOUND = 50_000;

function unreadOf({ chip }: ChipGeometry, { frame, area }: Figure): MapUnread {
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

function findingMarkers(
  { part }: ReportedCase,
  frame: PaperFrame,
): { number: number; x: number; y: number }[] {
  return part.findings
    .flatMap(({ x_mm, y_mm }, i) =>
      x_mm === null || y_mm === null ? [] : [{ number: i + 1, x: frame.x(x_mm), y: frame.y(y_mm) }],
    )
    .slice(0, FINDING_BOUND);
}

/** 10 mm where that reads well (4 mm to half the figure on paper), else the next of 1, 2, 5 × 10^k. */
function scaleBarOf({ frame, area }: Figure, options: MapOptions): ScaleBar {
  const room = 0.25 * area.width;
  const ten = 10 * frame.scale;
  const drawn = ten >= Math.min(4, room) && ten <= 2 * room ? 10 : niceStep((0.4 * room) / frame.scale);
  return {
    x: area.width - drawn * frame.scale - 1,
    y: area.height + 1.8 * options.labelSizeMm,
    lengthMm: drawn * frame.scale,
    text: `${formatNumber(drawn)} mm`,
    sizeMm: options.labelSizeMm,
  };
}

/** What stands under a map: how it is seen, and how many names found no room. */
export function mapNotes({ caption, unlabelled, unnamedPorts }: MapDrawing): string {
  const ports = unnamedPorts === 0 ? null : countText(unnamedPorts, 'port');
  const reaches = unlabelled === 0 ? null : countText(unlabelled, 'reach', 'reaches');
  const missing = joined([ports, reaches], ' and ');
  return missing === '' ? caption : `${caption} No room for the names of ${missing}.`;
}

function captionOf(scale: number, { under, over }: MapUnread): string {
  const ratio = scale >= 1 ? `${formatNumber(scale, 3)} : 1` : `1 : ${formatNumber(1 / scale, 3)}`;
  return `As drawn, seen from the channel side. Scale ${ratio}; strips thinner than 0.3 mm on paper are drawn 0.3 mm wide.${under.length + over.length === 0 ? '' : ' Pale: drawn, but not read.'}`;
}
