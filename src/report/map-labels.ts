import { hasWindow } from '../asked/windows.ts';
import { reachName } from '../network/names.ts';
import { formatNumber, type Unit } from '../runsheet/shown.ts';
import { type LabelGround, type LabelWish, placeLabels } from './label-placement.ts';
import { labelWish, shortName } from './label-wish.ts';
import { edgeOn, type PaperFrame } from './map-frame.ts';
import { type Box, type ChipGeometry, stripHalfWidthMm } from './map-geometry.ts';
import { MAP_QUANTITIES } from './map-quantities.ts';
import type { MapDrawing, MapHole, MapLabel, MapOptions } from './map-types.ts';
import { quantityTexts } from './quantities.ts';
import type { ReportedCase } from './report.ts';
import { portQuantity } from './result-schema.ts';

const LABEL_BOUND = 160;
const PORT_LABEL_BOUND = 400;

/** What the labels of a map stand on, and say. */
interface Labelled {
  readonly one: ReportedCase;
  readonly geometry: ChipGeometry;
  readonly frame: PaperFrame;
  /** Where labels may stand. */
  readonly area: Box;
  readonly holes: readonly MapHole[];
  readonly markers: MapDrawing['markers'];
  /** One a reach, SI. */
  readonly values: Float64Array;
  readonly unit: Unit;
  readonly options: MapOptions;
}

/** Names of ports, numbers of findings and names of reaches with their values; how many found no room. */
export function mapLabels(map: Labelled): {
  readonly labels: readonly MapLabel[];
  readonly unlabelled: number;
  readonly unnamedPorts: number;
} {
  const { one, geometry, frame, area, holes, markers, values, options } = map;
  const ports = holes.slice(0, PORT_LABEL_BOUND).map((hole, port) => portWish(map, hole, port));
  const findings = markers.map(({ number, x, y }) =>
    labelWish('finding', String(number), [{ x, y, clear: 0.8 }], options),
  );
  const reaches = options.reachLabels ? reachesToLabel(one, values) : { chosen: [], of: 0 };
  const labels = placeLabels(
    [
      // of very many ports the first are named, then the findings are numbered, then the others take what room is left
      ...ports.slice(0, LABEL_BOUND),
      ...findings,
      ...ports.slice(LABEL_BOUND),
      ...reaches.chosen.map((reach) =>
        labelWish('reach', reachText(map, reach), reachAnchors(one, reach, frame), options),
      ),
    ],
    { area, geometry, frame, leastHalfWidthMm: 0.24, holes, lines: edgeLines(one, frame) },
  );
  const placed = (wanted: MapLabel['kind']): number => labels.filter(({ kind }) => kind === wanted).length;
  return {
    labels,
    unlabelled: reaches.of - placed('reach'),
    unnamedPorts: holes.length - placed('port'),
  };
}

/** A port is named, if need be by the first letters of its name. */
function portWish({ one, options }: Labelled, { name, x, y, radiusMm }: MapHole, port: number): LabelWish {
  const short = shortName(name, options.readable);
  const row = one.part.ports[port];
  const { atPort } = MAP_QUANTITIES[options.quantity];
  const full =
    atPort === null || row[atPort] === null
      ? short
      : `${short} ${quantityTexts(portQuantity, row, one.show)(atPort)}`;
  const wish = (text: string): LabelWish => labelWish('port', text, [{ x, y, clear: radiusMm }], options);
  return {
    ...wish(full),
    shorter: { ...wish(short), shorter: wish(shortName(name, options.readable, 8)) },
  };
}

function reachText({ one, values, unit, options }: Labelled, reach: number): string {
  const value = values[reach];
  const name = shortName(reachName(one.network, reach), options.readable);
  return Number.isNaN(value) ? name : `${name} ${formatNumber(value / unit.si)}`;
}

/** The chip edge's sides; an edge drawn finely is left out, labels may then cross it. */
function edgeLines({ network }: ReportedCase, frame: PaperFrame): LabelGround['lines'] {
  const rings = network.chip.edge?.rings ?? [];
  if (rings.reduce((sum, ring) => sum + ring.length / 2, 0) > 400) return [];
  return edgeOn(frame, network.chip).flatMap((points) =>
    Array.from(
      { length: points.length / 2 - 1 },
      (_, i) => [points[2 * i], points[2 * i + 1], points[2 * i + 2], points[2 * i + 3]] as const,
    ),
  );
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
function reachAnchors({ network }: ReportedCase, reach: number, frame: PaperFrame): LabelWish['anchors'] {
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
