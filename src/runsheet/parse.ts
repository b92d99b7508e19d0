import * as v from 'valibot';
import { InputError } from '../errors.ts';
import { withDecodedNames } from './decoded-names.ts';
import { keepPorts, mergeCase, portsOf } from './merge.ts';
import { isPattern, layerKey, matches } from './names.ts';
import { nearest } from './nearest.ts';
import { type KeyPath, pathText } from './path-text.ts';
import { quote } from './quote.ts';
import { caseSchema, SHEET_KEYS, type SheetValues, sheetSchema } from './schema.ts';
import { lineAt, type MapEntry, type MapNode, parseTree, type TreeNode, toPlain } from './tree.ts';
import type {
  AcceptEntry,
  ChannelEntry,
  ConcentrationTarget,
  LayerEntry,
  Limits,
  PortEntry,
  PumpLimitEntry,
  RunSheet,
  Solute,
  TargetEntry,
  Tolerances,
  Window,
} from './types.ts';

/**
 * Reads and checks a run sheet: every key, every unit, every window, each case merged and checked as a sheet of its own.
 * An empty file is an empty sheet.
 * @param text the whole file
 * @param file as given on the command line; messages begin with it and a line
 * @returns SI values, with `lineOf` for messages that need the layout
 * @throws InputError with file and line: `culture.run.yaml:14: ports.feed.pressure: "12" has no unit; write for example "12 kPa"`
 */
export function parseRunSheet(text: string, file: string): RunSheet {
  const source: Source = { file, text };
  const root = withDecodedNames(withoutEmpty(parseTree(text, file)), file);
  const values = validate(sheetSchema, root, file, []);
  return { ...toRunSheet(values, root, source, []), cases: parseCases(root, values, source) };
}

interface Source {
  readonly file: string;
  readonly text: string;
}

const MOST_CASES = 100;
const MOST_PATTERNS = 1000;

/** A section with nothing after its colon (all of it commented out) counts as not written. */
function withoutEmpty(root: MapNode): MapNode {
  const entries = new Map<string, MapEntry>();
  for (const [key, entry] of root.entries) {
    if (entry.node.kind === 'text' && entry.node.empty && SHEET_KEYS.has(key)) continue;
    entries.set(key, key === 'cases' ? { ...entry, node: withEmptyCases(entry.node) } : entry);
  }
  return { ...root, entries };
}

/** `culture:` with nothing after it is the sheet as it stands. */
function withEmptyCases(node: TreeNode): TreeNode {
  if (node.kind !== 'map') return node;
  const entries = new Map<string, MapEntry>();
  for (const [name, entry] of node.entries) {
    const empty = entry.node.kind === 'text' && entry.node.empty;
    entries.set(
      name,
      empty ? { ...entry, node: { kind: 'map', entries: new Map(), line: entry.line } } : entry,
    );
  }
  return { ...node, entries };
}

function parseCases(root: MapNode, values: SheetValues, source: Source): RunSheet['cases'] {
  const cases = root.entries.get('cases');
  // sheetSchema has seen that cases is a map of maps.
  if (cases === undefined || cases.node.kind !== 'map') return [];
  if (cases.node.entries.size > MOST_CASES) {
    throw new InputError(
      `${source.file}:${cases.line}`,
      `cases: more than the limit "cases" of ${MOST_CASES}`,
    );
  }
  const base: MapNode = { ...root, entries: new Map([...root.entries].filter(([key]) => key !== 'cases')) };
  return [...cases.node.entries].map(([name, { node, line }]) => {
    if (node.kind !== 'map')
      throw new InputError(`${source.file}:${line}`, `cases.${quote(name)} is not a map of changes`);
    const inner = node.entries.get('cases');
    if (inner !== undefined) {
      throw new InputError(
        `${source.file}:${inner.line}`,
        `${pathText(['cases', name, 'cases'])}: a case can't have cases of its own`,
      );
    }
    const prefix = ['cases', name];
    refuseHiddenPorts(base, node, source.file, prefix);
    const merged = mergeCase(base, node);
    const changed = keepPorts(values, validate(caseSchema, merged, source.file, prefix), base, node);
    const changedPorts = [...portsOf(node).keys()];
    return { name, sheet: { ...toRunSheet(changed, merged, source, prefix), changedPorts } };
  });
}

/**
 * A pattern that only the case has says nothing about a port for which the sheet has a name or a longer pattern: those go
 * before. Rather than run such a port as if the case had not been written, stop.
 */
function refuseHiddenPorts(base: MapNode, changes: MapNode, file: string, prefix: KeyPath): void {
  const given = portsOf(base);
  for (const [pattern, { line }] of portsOf(changes)) {
    if (!isPattern(pattern) || given.has(pattern)) continue;
    const hidden = [...given.keys()].find((name) => isHiddenBy(pattern, name));
    if (hidden === undefined) continue;
    throw new InputError(
      `${file}:${line}`,
      `${pathText([...prefix, 'ports', pattern])}: does not change ${quote(hidden)}, which the sheet gives an entry of its own; write in the case the names that the sheet has`,
    );
  }
}

function isHiddenBy(pattern: string, name: string): boolean {
  return matches(pattern, name) && (!isPattern(name) || name.length >= pattern.length);
}

interface Fault {
  readonly line: number;
  readonly path: KeyPath;
  readonly message: string;
  readonly unknown: boolean;
}

/** Checks a tree and throws the first fault, by line. */
function validate<T>(schema: v.GenericSchema<unknown, T>, root: MapNode, file: string, prefix: KeyPath): T {
  const result = v.safeParse(schema, toPlain(root));
  if (result.success) return result.output;
  const faults = result.issues.map((issue) => faultOf(issue, root));
  // On one line the misspelt key explains the missing one.
  const first = faults.reduce((a, b) =>
    b.line < a.line || (b.line === a.line && b.unknown && !a.unknown) ? b : a,
  );
  throw new InputError(`${file}:${first.line}`, `${pathText([...prefix, ...first.path])}: ${first.message}`);
}

function faultOf(issue: v.BaseIssue<unknown>, root: MapNode): Fault {
  const path: (string | number)[] = [];
  for (const { key } of issue.path ?? []) path.push(typeof key === 'number' ? key : String(key));
  let known: KeyPath = path;
  let line = lineAt(root, known);
  while (line === null && known.length > 0) {
    known = known.slice(0, -1);
    line = lineAt(root, known);
  }
  // A missing key is reported at its map: the key is in the message.
  const missing = issue.type === 'strict_object' && issue.expected !== 'never' && path.length > known.length;
  const unknown = issue.type === 'strict_object' && issue.expected === 'never';
  return { line: line ?? 1, path: missing ? known : path, message: issue.message, unknown };
}

function toRunSheet(values: SheetValues, root: MapNode, source: Source, prefix: KeyPath): RunSheet {
  const lineOf = (path: KeyPath): number | null => lineAt(root, path);
  const at = (...path: KeyPath): number => lineOf(path) ?? 1;
  const refuse = (path: KeyPath, message: string): never => {
    throw new InputError(
      `${source.file}:${lineOf(path) ?? 1}`,
      `${pathText([...prefix, ...path])}: ${message}`,
    );
  };
  refuseLayerTwins(values, refuse);
  refusePatterns(values, refuse);
  refuseUndeclaredSolutes(values, refuse);
  return {
    ...source,
    title: values.title ?? null,
    drawing: {
      number: values.drawing?.number ?? null,
      revision: values.drawing?.revision ?? null,
      drawnBy: values.drawing?.drawn_by ?? null,
    },
    unitMm: values.unit === undefined ? null : inMm(values.unit),
    sizeMm: values.size === undefined ? null : [inMm(values.size[0]), inMm(values.size[1])],
    outline: values.outline ?? null,
    portsLayer: values.ports_layer ?? null,
    ignore: values.ignore ?? [],
    joinWithinMm: values.join_within === undefined ? null : inMm(values.join_within),
    joints: values.joints ?? null,
    process: values.process ?? null,
    fluid: values.fluid ?? null,
    temperatureK: values.temperature ?? null,
    depthM: values.depth ?? null,
    layers: mapNames(values.layers, (layer, name): LayerEntry => {
      const line = at('layers', name);
      if (layer === 'ignore') return { kind: 'ignore', line };
      const { depth, profile, plane } = layer;
      return { kind: 'etched', depthM: depth ?? null, profile: profile ?? null, plane: plane ?? null, line };
    }),
    ports: mapNames(values.ports, (port, name): PortEntry => {
      const tubing = port.tubing.map((piece) => ({
        boreM: piece.bore,
        lengthM: piece.length,
        temperatureK: piece.temperature ?? null,
      }));
      const { condition, expect, concentration } = port;
      return { condition, tubing, expect, concentration, line: at('ports', name) };
    }),
    channels: mapNames(values.channels, (channel, name): ChannelEntry => {
      const { wall_shear: shear, residence_time: time, flow, walls } = channel;
      return {
        wallShear: shear === undefined ? null : { ...toWindow(shear), over: shear.over ?? null },
        residenceTime: time === undefined ? null : toWindow(time),
        flow: flow === undefined ? null : toWindow(flow),
        walls: walls ?? 'floor',
        even: channel.even ?? null,
        concentration:
          channel.concentration === undefined
            ? null
            : mapNames(channel.concentration, (one) => ({ ...toWindow(one), over: one.over ?? null })),
        mixing: channel.mixing === undefined ? null : mapNames(channel.mixing, ({ min }) => min),
        line: at('channels', name),
      };
    }),
    solutes: mapNames(
      values.solutes,
      ({ diffusion, unit }): Solute => ({ diffusionM2s: diffusion, unit: unit ?? null }),
    ),
    junctions: values.junctions ?? null,
    switch:
      values.switch === undefined
        ? null
        : {
            from: values.switch.from ?? null,
            reach: values.switch.reach ?? null,
            to: values.switch.to ?? null,
            withinS: values.switch.within ?? null,
            line: at('switch'),
          },
    fields: values.fields ?? [],
    pillars: values.pillars ?? [],
    ...toTargets(values, at),
    pumpLimits: mapNames(values.pump_limits, (limit, name): PumpLimitEntry => {
      const line = at('pump_limits', name);
      const { max_pressure, min_pressure, max_flow } = limit;
      return {
        maxPressurePa: max_pressure ?? null,
        minPressurePa: min_pressure ?? null,
        maxFlowM3s: max_flow ?? null,
        line,
      };
    }),
    limits: toLimits(values.limits),
    tolerances: values.tolerances === undefined ? null : toTolerances(values.tolerances),
    cases: [],
    show: toShow(values.show),
    accept: (values.accept ?? []).map((entry, i): AcceptEntry => ({ ...entry, line: at('accept', i) })),
    changedPorts: [],
    lineOf,
  };
}

function toTargets(
  { targets = [] }: SheetValues,
  at: (...path: KeyPath) => number,
): Pick<RunSheet, 'targets' | 'concentrationTargets'> {
  const computed: TargetEntry[] = [];
  const ofConcentration: ConcentrationTarget[] = [];
  for (const [index, target] of targets.entries()) {
    const line = at('targets', index);
    if (target.quantity === 'concentration') ofConcentration.push({ ...target, index, line });
    else computed.push({ ...target, index, line });
  }
  return { targets: computed, concentrationTargets: ofConcentration };
}

type Refuse = (path: KeyPath, message: string) => never;

function refuseLayerTwins(values: SheetValues, refuse: Refuse): void {
  const first = new Map<string, string>();
  for (const name of Object.keys(values.layers ?? {})) {
    const key = layerKey(name);
    const twin = first.get(key);
    if (twin !== undefined)
      refuse(
        ['layers', name],
        `is the same layer as ${quote(twin)}; layer names match without regard to case`,
      );
    first.set(key, name);
  }
}

function refusePatterns(values: SheetValues, refuse: Refuse): void {
  const limit = (path: KeyPath, names: readonly string[]): void => {
    if (names.filter(isPattern).length <= MOST_PATTERNS) return;
    refuse(path, `more than the limit "patterns" of ${MOST_PATTERNS} names with *`);
  };
  const { targets = [], accept = [] } = values;
  limit(['ports'], Object.keys(values.ports ?? {}));
  limit(['channels'], Object.keys(values.channels ?? {}));
  limit(['ignore'], values.ignore ?? []);
  limit(
    ['targets'],
    targets.map(({ name }) => name),
  );
  limit(
    ['accept'],
    accept.map(({ at }) => at),
  );
  for (const [i, { by }] of targets.entries()) {
    if (isPattern(by))
      refuse(['targets', i, 'by'], `${quote(by)} is a pattern; a target is met by one port, named in full`);
  }
}

/** What a fluid carries must be one of the sheet's solutes: a name misspelt would be another solute, and nought of the one meant. */
function refuseUndeclaredSolutes(values: SheetValues, refuse: Refuse): void {
  const declared = Object.keys(values.solutes ?? {});
  const known = new Set(declared);
  const look = (path: KeyPath, names: Iterable<string>): void => {
    for (const name of names) {
      if (known.has(name)) continue;
      const near = nearest(name, declared);
      const hint =
        declared.length === 0
          ? `write for example solutes: { ${name}: { diffusion: 5e-10 m^2/s, unit: uM } }`
          : near === null
            ? `known here: ${declared.slice(0, 5).map(quote).join(', ')}`
            : `did you mean ${quote(near)}?`;
      refuse([...path, name], `${quote(name)} is not among the solutes; ${hint}`);
    }
  };
  for (const [name, port] of Object.entries(values.ports ?? {}))
    look(['ports', name, 'concentration'], Object.keys(port.concentration ?? {}));
  for (const [name, { concentration, mixing }] of Object.entries(values.channels ?? {})) {
    look(['channels', name, 'concentration'], Object.keys(concentration ?? {}));
    look(['channels', name, 'mixing'], Object.keys(mixing ?? {}));
  }
  for (const [i, target] of (values.targets ?? []).entries())
    if (target.quantity === 'concentration') look(['targets', i, 'concentration'], [target.solute]);
}

function inMm(metres: number): number {
  return metres * 1000;
}

function toWindow({
  min,
  max,
}: {
  readonly min?: number | undefined;
  readonly max?: number | undefined;
}): Window {
  return { min: min ?? null, max: max ?? null };
}

function toLimits(given: SheetValues['limits']): Limits {
  return {
    minWidthM: given?.min_width ?? null,
    minWallM: given?.min_wall ?? null,
    maxWidthToDepth: given?.max_width_to_depth ?? null,
    maxDepthToWidth: given?.max_depth_to_width ?? null,
    edgeMarginM: given?.edge_margin ?? null,
    portGapM: given?.port_gap ?? null,
    portDiameterM: given?.port_diameter ?? null,
    portGridM: given?.port_grid ?? null,
    maxPressurePa: given?.max_pressure ?? null,
    minPressurePa: given?.min_pressure ?? null,
    maxReynolds: given?.max_reynolds ?? null,
    minCornerAngleRad: given?.min_corner_angle ?? null,
    stiffnessPa: given?.stiffness ?? null,
  };
}

function toTolerances(given: NonNullable<SheetValues['tolerances']>): Tolerances {
  return {
    depth: given.depth?.all ?? null,
    depthByLayer: given.depth?.byName ?? noNames(),
    depthCommon: given.depth_common ?? null,
    width: given.width ?? null,
    widthBias: given.width_bias ?? null,
    widthOwn: given.width_own ?? null,
    temperature: given.temperature ?? null,
    viscosity: given.viscosity ?? null,
    pressure: given.pressure?.all ?? null,
    flow: given.flow?.all ?? null,
    pressureByPort: given.pressure?.byName ?? noNames(),
    flowByPort: given.flow?.byName ?? noNames(),
    bore: given.bore ?? null,
  };
}

function toShow(given: SheetValues['show']): RunSheet['show'] {
  const show: { -readonly [K in keyof RunSheet['show']]: RunSheet['show'][K] } = {};
  for (const key of ['flow', 'pressure', 'wall_shear', 'residence_time', 'velocity'] as const) {
    const unit = given?.[key];
    if (unit !== undefined) show[key] = unit;
  }
  return show;
}

/** Records without a prototype: `ports['toString']` is undefined, whatever a drawing calls its ports. */
function mapNames<A, B>(
  given: Readonly<Record<string, A>> | undefined,
  to: (value: A, name: string) => B,
): Readonly<Record<string, B>> {
  const result: Record<string, B> = noNames();
  for (const [name, value] of Object.entries(given ?? {})) result[name] = to(value, name);
  return result;
}

function noNames<T>(): Record<string, T> {
  return Object.create(null);
}
