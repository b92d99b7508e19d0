import { scaledCurves } from '../geometry/curve.ts';
import type { Layout, LayoutItem } from '../layout/types.ts';
import type { PortEntry, RunSheet } from '../runsheet/types.ts';
import { readChannels } from './channels.ts';
import { DEFAULT_JOIN_WITHIN_MM, DEFAULT_JOINTS, OBSTACLE_KIND } from './defaults.ts';
import { type DrawnEdge, findEdge } from './edge.ts';
import { readAreas } from './filled.ts';
import { resolveFluid } from './fluid.ts';
import { drawnLayers, drawnShapes, refuseUnknownNames } from './known-names.ts';
import { layerFinder, withDrawnDepths } from './layers.ts';
import { resolveLeastWall, resolveLimits } from './limits.ts';
import { readPorts } from './ports.ts';
import { circleRing } from './rings.ts';
import { resolveScale } from './scale.ts';
import { selectItems } from './select.ts';
import { type SettingsFinder, settingsFinder } from './settings.ts';
import { withTargetsNamed } from './targets.ts';
import type { Chip, ChipEdge, Port, PortRun, ReadingFault, Run } from './types.ts';

export interface ChipInput {
  readonly layout: Layout;
  /** null: without a run sheet; depths are then only those that the drawing gives. */
  readonly sheet: RunSheet | null;
  /** The layout's file name, for messages about the drawing. */
  readonly file: string;
}

/** A chip and how it is run; both are needed for a flow. */
export interface Assembled {
  readonly chip: Chip;
  readonly run: Run;
}

/**
 * Layout and run sheet as one chip in millimetres (which strokes are channels with which depth, which circles are ports), and as
 * its run: what each port is set to, and every limit with where it came from. Faults of the drawing are data in `faults`.
 * Cost: n log n in the number of drawn shapes.
 * @throws InputError for a name that the drawing lacks, a contradiction between the two, or a value nobody can compute with
 */
export function assembleChip({ layout, sheet: written, file }: ChipInput): Assembled {
  let sheet = written;
  const joints = sheet?.joints ?? DEFAULT_JOINTS;
  const fluid = resolveFluid(sheet);
  const limits = resolveLimits(sheet);
  const joinWithinMm = sheet?.joinWithinMm ?? DEFAULT_JOIN_WITHIN_MM;
  const edge = findEdge(layout, sheet, file);
  const scale = resolveScale(layout, sheet, edge);
  const { unitMm } = scale;

  const finder = layerFinder(sheet);
  const { strokes, holes, outlines, ellipses, ignored, setAside } = selectItems(layout, sheet, edge, finder);
  const settings = settingsFinder(sheet, 'channels', sheet?.channels ?? {});
  const conditions = settingsFinder(sheet, 'ports', sheet?.ports ?? {});
  const drawn = readChannels(strokes, unitMm, finder, file);
  // also of strokes that turn out to be no channel: their keys have matched
  for (const name of drawn.drawnNames) settings.of(name);
  const ports = readPorts(holes, unitMm, sheet, limits.portDiameterM.value, file, setAside, conditions);
  const portRuns = ports.ports.map((port) => portRun(port, conditions));
  if (sheet !== null) {
    sheet = withTargetsNamed(sheet, drawn.drawnNames, ports.drawnNames);
    const names = {
      channels: drawn.drawnNames,
      ports: ports.drawnNames,
      layers: drawnLayers(layout),
      shapes: drawnShapes(layout),
      isMade: (name: string) => drawn.isMade(name) || ports.isMade(name),
      setAside,
      undrawn: layout.undrawn,
    };
    refuseUnknownNames(sheet, names, { channels: settings, ports: conditions });
  }
  const { unsuitable, outside } = ports;
  const areas = readAreas(
    { outlines, unsuitable, outside, ellipses },
    unitMm,
    drawn.channels,
    ports.ports,
    joinWithinMm,
  );
  const { channels, obstacles } = areas;
  for (const kind of areas.counted) ignored.add(kind);
  if (obstacles.length > 0) ignored.add(OBSTACLE_KIND, obstacles.length);
  const outlineNames = new Set(areas.faults.map(({ name }) => name));
  // What a line lacks is of no account once it is no channel.
  const channelFaults = drawn.faults.filter(
    (fault) => !('channel' in fault && outlineNames.has(fault.channel)),
  );
  const assumed: readonly ReadingFault[] = scale.assumed
    ? [{ kind: 'assumed-scale', reason: scale.reason }]
    : [];
  // The drawing's own size follows when the run sheet says how large its unit is.
  const resize = unitMm / layout.unitMm;
  const chip: Chip = {
    file,
    unitMm,
    unitReason: scale.reason,
    widthMm: layout.widthMm === null ? null : layout.widthMm * resize,
    heightMm: layout.heightMm === null ? null : layout.heightMm * resize,
    planes: finder.planes,
    layers: withDrawnDepths(finder.layers, channels),
    channels,
    sections: drawn.sections,
    ports: ports.ports,
    obstacles,
    edge: edge === null ? null : inMm(edge, unitMm),
    sizeMm: sheet?.sizeMm ?? null,
    ignored: ignored.toRecord(),
    unreadLines: unreadLines(layout, edge, unitMm, [...channels, ...ports.ports, ...obstacles]),
    faults: [...assumed, ...channelFaults, ...areas.faults],
    joinWithinMm,
    // Joints one by one are not computed yet: the finding not-computed says what is counted instead.
    joints: joints === 'computed' ? DEFAULT_JOINTS : joints,
    process: sheet?.process ?? null,
    leastWall: resolveLeastWall(sheet),
  };
  const run: Run = {
    fluid,
    ports: portRuns,
    channels: channels.map(({ drawnName }) => (drawnName === null ? null : settings.of(drawnName))),
    limits,
    accept: sheet?.accept ?? [],
    sheet,
  };
  return { chip, run };
}

function portRun({ drawnName }: Port, conditions: SettingsFinder<PortEntry>): PortRun {
  const entry = drawnName === null ? null : conditions.of(drawnName);
  const { condition, tubing, expect } = entry ?? UNSET;
  return { condition, tubing, expect };
}

const UNSET: PortRun = { condition: { kind: 'unset' }, tubing: [], expect: null };

/** Everything drawn with an extent that is none of the things read. */
function unreadLines(
  layout: Layout,
  edge: DrawnEdge | null,
  unitMm: number,
  read: readonly { readonly ordinal: number }[],
): readonly Float64Array[] {
  const known = new Set(read.map(({ ordinal }) => ordinal));
  return layout.items
    .filter(({ ordinal }) => !known.has(ordinal) && !edge?.ordinals.has(ordinal))
    .flatMap((item) => linesOf(item).map((line) => line.map((value) => value * unitMm)));
}

function linesOf(item: LayoutItem): readonly Float64Array[] {
  switch (item.kind) {
    case 'stroke':
      return item.centrelines.map(({ points }) => points);
    case 'outline':
    case 'ignored':
      return item.rings;
    case 'hole':
      return [circleRing(item.x, item.y, item.radius)];
    default:
      return item satisfies never;
  }
}

function inMm({ name, rings, sides }: DrawnEdge, unitMm: number): ChipEdge {
  return {
    name,
    rings: rings.map(({ points }) => points.map((value) => value * unitMm)),
    ringCurves: rings.map(({ curves }) => scaledCurves(curves, unitMm)),
    sidesMm: [sides[0] * unitMm, sides[1] * unitMm],
  };
}
