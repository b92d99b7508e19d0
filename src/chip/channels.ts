import { InputError } from '../errors.ts';
import { scaledCurves } from '../geometry/curve.ts';
import type { Centreline, Stroke } from '../layout/types.ts';
import type { DuctForm } from '../physics/duct.ts';
import { isotropicSection } from '../physics/section.ts';
import { quote } from '../runsheet/quote.ts';
import { depthOf, type LayerFinder } from './layers.ts';
import { SectionList } from './sections.ts';
import type { Channel, ReadingFault } from './types.ts';
import { UniqueNames } from './unique-names.ts';

export interface ChannelReading {
  readonly channels: readonly Channel[];
  readonly sections: readonly DuctForm[];
  readonly faults: readonly ReadingFault[];
  /** Drawn names of all strokes read, also of those without a width. */
  readonly drawnNames: ReadonlySet<string>;
  /** Whether a name was made up for an unnamed or second stroke. */
  readonly isMade: (name: string) => boolean;
}

/**
 * Strokes as channels: in millimetres, with depth and duct width.
 * A stroke without a width or a depth is a fault; one without a width is no channel.
 * @throws InputError for a `data-depth` that is no depth
 */
export function readChannels(
  strokes: readonly Stroke[],
  unitMm: number,
  finder: LayerFinder,
  file: string,
): ChannelReading {
  const drawnNames = new Set<string>();
  for (const { name } of strokes) if (name !== null) drawnNames.add(name);
  const names = new UniqueNames(drawnNames);
  const channels: Channel[] = [];
  const sections = new SectionList();
  const faults: ReadingFault[] = [];
  for (let i = 0; i < strokes.length; i++) {
    const stroke = strokes[i]!;
    const name = stroke.name === null ? names.ofUnnamed(`channel-${i + 1}`) : names.ofDrawn(stroke.name);
    if (stroke.width === null || !(stroke.width > 0)) {
      faults.push({ kind: 'unsized-stroke', name, ...startOf(stroke, unitMm) });
      continue;
    }
    const layerIndex = finder.indexOf(stroke.groups);
    const layer = finder.layers[layerIndex]!;
    const { depthM, origin } = depthOf(stroke.dataDepth, layer, name, file);
    if (Number.isNaN(depthM)) {
      faults.push({ kind: 'missing-depth', channel: name, layer: layer.name, ...startOf(stroke, unitMm) });
    }
    for (const by of stroke.disguises) {
      faults.push({ kind: 'disguised-stroke', channel: name, by, ...startOf(stroke, unitMm) });
    }
    const drawnWidthMm = withoutRounding(stroke.width * unitMm);
    const depthMm = withoutRounding(depthM * 1000);
    refuseHairline(name, drawnWidthMm, depthMm, layer.profile, file);
    const { ductWidthMm, stripHalfWidthMm } = widthsOf(drawnWidthMm, depthMm, layer.profile);
    channels.push({
      name,
      drawnName: stroke.name,
      ordinal: stroke.ordinal,
      layer: layerIndex,
      plane: layer.plane,
      drawnWidthMm,
      ductWidthMm,
      stripHalfWidthMm,
      depthMm,
      depthOrigin: origin,
      profile: layer.profile,
      section: sections.indexOf(layer.profile, ductWidthMm, depthMm),
      linecap: stroke.linecap,
      centrelines: unitMm === 1 ? stroke.centrelines : stroke.centrelines.map((line) => inMm(line, unitMm)),
      disguises: stroke.disguises,
      dataChannel: stroke.dataChannel,
    });
  }
  return { channels, sections: sections.forms, faults, drawnNames, isMade: (name) => names.isMade(name) };
}

function startOf(stroke: Stroke, unitMm: number): { readonly xMm: number; readonly yMm: number } {
  const points = stroke.centrelines[0]?.points;
  return { xMm: (points?.[0] ?? Number.NaN) * unitMm, yMm: (points?.[1] ?? Number.NaN) * unitMm };
}

/**
 * Widths and depths decide by equality what is one strip and where a step is: 0.7 under `scale(0.1)` as 7, or 65 um beside
 * 0.065 mm, must not differ in the last bit. Twelve digits are far beyond what anyone draws or etches.
 */
function withoutRounding(lengthMm: number): number {
  return Number(lengthMm.toPrecision(12));
}

/** Below it no process makes a channel, and an etched one is all undercut: quotients of its width lose their digits. */
const LEAST_WIDTH_MM = 1e-5;
const LEAST_MASK_TO_DEPTH = 1e-3;

function refuseHairline(
  name: string,
  drawnWidthMm: number,
  depthMm: number,
  profile: Channel['profile'],
  file: string,
): void {
  const least =
    profile === 'isotropic' && depthMm > 0
      ? Math.max(LEAST_WIDTH_MM, LEAST_MASK_TO_DEPTH * depthMm)
      : LEAST_WIDTH_MM;
  if (drawnWidthMm >= least) return;
  throw new InputError(
    file,
    `channel ${quote(name)} is ${Number(drawnWidthMm.toPrecision(4))} mm wide, which no process makes; set its stroke width, or name it under ignore: in the run sheet`,
  );
}

interface Widths {
  readonly ductWidthMm: number;
  readonly stripHalfWidthMm: number;
}

/** The strip of a channel of unknown depth is taken as drawn, so that joins can still be found. */
function widthsOf(drawnWidthMm: number, depthMm: number, profile: Channel['profile']): Widths {
  if (profile === 'rectangle') return { ductWidthMm: drawnWidthMm, stripHalfWidthMm: drawnWidthMm / 2 };
  if (Number.isNaN(depthMm)) return { ductWidthMm: Number.NaN, stripHalfWidthMm: drawnWidthMm / 2 };
  // The section is made of lengths alone, so millimetres serve as well as metres.
  const { ductWidthM, stripWidthM } = isotropicSection(drawnWidthMm, depthMm);
  return { ductWidthMm: ductWidthM, stripHalfWidthMm: stripWidthM / 2 };
}

function inMm({ points, closed, bendRadius, curves }: Centreline, unitMm: number): Centreline {
  return {
    points: scaled(points, unitMm),
    closed,
    bendRadius: scaled(bendRadius, unitMm),
    curves: scaledCurves(curves, unitMm),
  };
}

function scaled(values: Float64Array, factor: number): Float64Array {
  const result = new Float64Array(values.length);
  for (let i = 0; i < values.length; i++) result[i] = values[i]! * factor;
  return result;
}
