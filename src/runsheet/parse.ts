import * as v from 'valibot';
import { InputError } from '../errors.ts';
import { withDecodedNames } from './decoded-names.ts';
import { keepPorts, mergeCase, portsOf } from './merge.ts';
import { isPattern, layerKey, matches, recordOf } from './names.ts';
import { nearest } from './nearest.ts';
import { type KeyPath, pathText } from './path-text.ts';
import { quote } from './quote.ts';
import { caseSchema, SHEET_KEYS, type SheetValues, sheetSchema } from './schema.ts';
import { isEmpty, lineAt, type MapEntry, type MapNode, mapNodes, parseTree, toPlain } from './tree.ts';
import type { Placed, RunSheet } from './types.ts';

/**
 * Reads and checks a run sheet: every key, every unit, every window, each case merged and checked as a sheet of its own.
 * An empty file is an empty sheet.
 * @param text the whole file
 * @param file as given on the command line; messages begin with it and a line
 * @returns SI values, with the tree as written, for messages that need the layout
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

/** A section with nothing after its colon (all of it commented out) counts as not written; a case, as the sheet as it stands. */
function withoutEmpty(root: MapNode): MapNode {
  const isWritten = ([key, { node }]: [string, MapEntry]): boolean => !isEmpty(node) || !SHEET_KEYS.has(key);
  return mapNodes({ ...root, entries: new Map([...root.entries].filter(isWritten)) }, (node, key) =>
    key === 'cases' && node.kind === 'map'
      ? mapNodes(node, (change) =>
          isEmpty(change) ? { kind: 'map', entries: new Map(), line: change.line } : change,
        )
      : node,
  );
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
  const at = (...path: KeyPath): number => lineAt(root, path) ?? 1;
  const refuse = (path: KeyPath, message: string): never => {
    throw new InputError(`${source.file}:${at(...path)}`, `${pathText([...prefix, ...path])}: ${message}`);
  };
  refuseLayerTwins(values, refuse);
  refusePatterns(values, refuse);
  refuseUndeclaredSolutes(values, refuse);
  const placed = <T>(
    section: string,
    given: Readonly<Record<string, T>>,
  ): Readonly<Record<string, T & Placed>> =>
    recordOf(Object.entries(given).map(([name, entry]) => [name, { ...entry, line: at(section, name) }]));
  const targets = values.targets.map((target, index) => ({ ...target, index, line: at('targets', index) }));
  return {
    ...values,
    ...source,
    layers: placed('layers', values.layers),
    ports: placed('ports', values.ports),
    channels: placed('channels', values.channels),
    pumpLimits: placed('pump_limits', values.pumpLimits),
    switch: values.switch === null ? null : { ...values.switch, line: at('switch') },
    targets: targets.filter((target) => target.quantity !== 'concentration'),
    concentrationTargets: targets.filter((target) => target.quantity === 'concentration'),
    accept: values.accept.map((entry, i) => ({ ...entry, line: at('accept', i) })),
    cases: [],
    changedPorts: [],
    tree: root,
  };
}

type Refuse = (path: KeyPath, message: string) => never;

function refuseLayerTwins(values: SheetValues, refuse: Refuse): void {
  const first = new Map<string, string>();
  for (const name of Object.keys(values.layers)) {
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
  const { targets } = values;
  const ofTargets = targets.map(({ name }) => name);
  const ofAccepted = values.accept.map(({ at }) => at);
  limit(['ports'], Object.keys(values.ports));
  limit(['channels'], Object.keys(values.channels));
  limit(['ignore'], values.ignore);
  limit(['targets'], ofTargets);
  limit(['accept'], ofAccepted);
  for (const [i, { by }] of targets.entries()) {
    if (isPattern(by))
      refuse(['targets', i, 'by'], `${quote(by)} is a pattern; a target is met by one port, named in full`);
  }
}

/** What a fluid carries must be one of the sheet's solutes: a name misspelt would be another solute, and nought of the one meant. */
function refuseUndeclaredSolutes(values: SheetValues, refuse: Refuse): void {
  const declared = Object.keys(values.solutes);
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
  for (const [name, port] of Object.entries(values.ports))
    look(['ports', name, 'concentration'], Object.keys(port.concentration ?? {}));
  for (const [name, { concentration, mixing }] of Object.entries(values.channels)) {
    look(['channels', name, 'concentration'], Object.keys(concentration ?? {}));
    look(['channels', name, 'mixing'], Object.keys(mixing ?? {}));
  }
  for (const [i, target] of values.targets.entries())
    if (target.quantity === 'concentration') look(['targets', i, 'concentration'], [target.solute]);
}
