import type { Layout } from '../layout/types.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { readChannels } from './channels.ts';
import { DEFAULT_JOIN_WITHIN_MM, DEFAULT_JOINTS } from './defaults.ts';
import { type DrawnEdge, findEdge } from './edge.ts';
import { findFilledOutlines } from './filled.ts';
import { resolveFluid } from './fluid.ts';
import { drawnLayers, drawnShapes, refuseUnknownNames } from './known-names.ts';
import { layerFinder, withDrawnDepths } from './layers.ts';
import { resolveLimits } from './limits.ts';
import { readPorts } from './ports.ts';
import { resolveScale } from './scale.ts';
import { selectItems } from './select.ts';
import { settingsFinder } from './settings.ts';
import { withTargetsNamed } from './targets.ts';
import type { Chip, ChipEdge, ReadingFault } from './types.ts';

export interface ChipInput {
  readonly layout: Layout;
  /** null: without a run sheet; depths are then only those that the drawing gives. */
  readonly sheet: RunSheet | null;
  /** The layout's file name, for messages about the drawing. */
  readonly file: string;
  readonly layoutSha256: string;
}

/**
 * Layout and run sheet as one chip in millimetres: which strokes are channels with which depth, which circles are
 * ports under which conditions, and every limit with where it came from. Faults of the drawing are data in `faults`.
 * Cost: n log n in the number of drawn shapes.
 * @throws InputError for a name that the drawing lacks, a contradiction between the two, or a value nobody can compute with
 */
export function assembleChip({ layout, sheet: written, file, layoutSha256 }: ChipInput): Chip {
  let sheet = written;
  const joints = sheet?.joints ?? DEFAULT_JOINTS;
  const fluid = resolveFluid(sheet);
  const limits = resolveLimits(sheet);
  const joinWithinMm = sheet?.joinWithinMm ?? DEFAULT_JOIN_WITHIN_MM;
  const edge = findEdge(layout, sheet, file);
  const scale = resolveScale(layout, sheet, edge);
  const { unitMm } = scale;

  const finder = layerFinder(sheet);
  const { strokes, holes, outlines, ignored, setAside } = selectItems(layout, sheet, edge, finder);
  const settings = settingsFinder(sheet, 'channels', sheet?.channels ?? {});
  const conditions = settingsFinder(sheet, 'ports', sheet?.ports ?? {});
  const channels = readChannels(strokes, unitMm, finder, settings, file);
  const ports = readPorts(
    holes,
    unitMm,
    sheet,
    limits.portDiameterM.value,
    file,
    ignored,
    setAside,
    conditions,
  );
  if (sheet !== null) {
    sheet = withTargetsNamed(sheet, channels.drawnNames, ports.drawnNames);
    const names = {
      channels: channels.drawnNames,
      ports: ports.drawnNames,
      layers: drawnLayers(layout),
      shapes: drawnShapes(layout),
      isMade: (name: string) => channels.isMade(name) || ports.isMade(name),
      setAside,
    };
    refuseUnknownNames(sheet, names, { channels: settings, ports: conditions });
  }
  const filled = findFilledOutlines(
    outlines,
    ports.unsuitable,
    unitMm,
    channels.channels,
    ports.ports,
    joinWithinMm,
    ignored,
  );
  const assumed: readonly ReadingFault[] = scale.assumed
    ? [{ kind: 'assumed-scale', reason: scale.reason }]
    : [];
  // The drawing's own size follows when the run sheet says how large its unit is.
  const resize = unitMm / layout.unitMm;
  return {
    file,
    layoutSha256,
    unitMm,
    unitReason: scale.reason,
    widthMm: layout.widthMm === null ? null : layout.widthMm * resize,
    heightMm: layout.heightMm === null ? null : layout.heightMm * resize,
    planes: finder.planes,
    layers: withDrawnDepths(finder.layers, channels.channels),
    channels: channels.channels,
    ports: ports.ports,
    edge: edge === null ? null : inMm(edge, unitMm),
    sizeMm: sheet?.sizeMm ?? null,
    ignored: ignored.toRecord(),
    faults: [...assumed, ...channels.faults, ...filled],
    fluid,
    joinWithinMm,
    // Joints one by one are not computed yet: the finding not-computed says what is counted instead.
    joints: joints === 'computed' ? DEFAULT_JOINTS : joints,
    process: sheet?.process ?? null,
    limits,
    accept: sheet?.accept ?? [],
    sheet,
  };
}

function inMm({ name, rings, sides }: DrawnEdge, unitMm: number): ChipEdge {
  return {
    name,
    rings: rings.map((ring) => ring.map((value) => value * unitMm)),
    sidesMm: [sides[0] * unitMm, sides[1] * unitMm],
  };
}
