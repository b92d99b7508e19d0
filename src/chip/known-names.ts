import type { Layout } from '../layout/types.ts';
import { isPattern, layerKey, matches } from '../runsheet/names.ts';
import { nearest } from '../runsheet/nearest.ts';
import { type KeyPath, pathText } from '../runsheet/path-text.ts';
import { quote } from '../runsheet/quote.ts';
import type { RunSheet } from '../runsheet/types.ts';
import type { Undrawn } from '../svg/types.ts';
import { refuse } from './complain.ts';
import type { SettingsFinder } from './settings.ts';

/** What the drawing offers to name. */
export interface KnownNames {
  readonly channels: ReadonlySet<string>;
  readonly ports: ReadonlySet<string>;
  /** By layer key, as drawn. */
  readonly layers: ReadonlyMap<string, string>;
  /** Of every stroke, circle and closed shape, also of those not read. */
  readonly shapes: ReadonlySet<string>;
  /** Whether a name was made up here and means nothing in a run sheet. */
  readonly isMade: (name: string) => boolean;
  /** Names drawn but not read, with why. */
  readonly setAside: ReadonlyMap<string, string>;
  /** Named shapes and groups that are not drawn. */
  readonly undrawn: readonly Undrawn[];
}

/** Every named group of the drawing, by layer key. */
export function drawnLayers(layout: Layout): ReadonlyMap<string, string> {
  const layers = new Map<string, string>();
  const seen = new Set<readonly string[]>();
  for (const { groups } of layout.items) {
    if (seen.has(groups)) continue;
    seen.add(groups);
    for (const name of groups) {
      const key = layerKey(name);
      if (!layers.has(key)) layers.set(key, name);
    }
  }
  return layers;
}

/** Names of everything that could be a channel, a port or a chamber. */
export function drawnShapes(layout: Layout): ReadonlySet<string> {
  const names = new Set<string>();
  for (const { kind, name } of layout.items) if (kind !== 'ignored' && name !== null) names.add(name);
  return names;
}

/**
 * Refuses the first name of the run sheet that the drawing lacks, with its line and the nearest right name.
 * Nodes and reaches are named by the network and answered there; `ignore` may name what is not drawn.
 * @param keys what of `channels` and `ports` matched nothing, or only what other entries go before for
 */
export function refuseUnknownNames(
  sheet: RunSheet,
  names: KnownNames,
  keys: {
    readonly channels: Pick<SettingsFinder<unknown>, 'unmatched'>;
    readonly ports: Pick<SettingsFinder<unknown>, 'unmatched' | 'overruled'>;
  },
): void {
  const layerNames = [...names.layers.values()];
  const layer = (path: KeyPath, name: string): void => {
    if (!names.layers.has(layerKey(name))) unknown(sheet, path, 'layer', name, layerNames, names);
  };
  const port = (path: KeyPath, name: string): void => {
    if (!names.ports.has(name)) unknown(sheet, path, 'port', name, names.ports, names);
  };
  if (sheet.portsLayer !== null) layer(['ports_layer'], sheet.portsLayer);
  for (const name of Object.keys(sheet.layers)) layer(['layers', name], name);
  for (const name of keys.ports.unmatched())
    unknown(sheet, ['ports', name], 'port', name, names.ports, names);
  for (const name of keys.ports.overruled()) {
    // In a case the names that it writes may all go before a pattern of the sheet, which then speaks for the other cases.
    if (sheet.changedPorts.some((changed) => changed !== name && matches(name, changed))) continue;
    const path = ['ports', name];
    refuse(
      sheet,
      path,
      `${pathText(path)}: every port that it matches has an entry that goes before it, so it says nothing; take it out, or name the ports in full`,
    );
  }
  const fields = new Set(sheet.fields.map((name) => name.trim()));
  for (const name of keys.channels.unmatched()) {
    if (!fields.has(name.trim())) unknown(sheet, ['channels', name], 'channel', name, names.channels, names);
  }
  for (const { index, on, name, by } of [...sheet.targets, ...sheet.concentrationTargets]) {
    if (on === 'port') port(['targets', index, 'port'], name);
    if (on === 'channel' && !names.channels.has(name))
      unknown(sheet, ['targets', index, 'channel'], 'channel', name, names.channels, names);
    port(['targets', index, 'by'], by);
  }
  for (const [i, name] of sheet.fields.entries()) {
    if (!names.shapes.has(name.trim())) unknown(sheet, ['fields', i], 'shape', name, names.shapes, names);
  }
  for (const [i, name] of sheet.pillars.entries()) layer(['pillars', i], name);
  for (const [i, name] of (sheet.switch?.from ?? []).entries()) port(['switch', 'from', i], name);
  const asked = sheet.switch?.reach ?? null;
  if (asked !== null && !isReachOf(names.channels, asked))
    unknown(sheet, ['switch', 'reach'], 'channel', asked, names.channels, names);
  for (const name of Object.keys(sheet.pumpLimits)) port(['pump_limits', name], name);
  for (const name of Object.keys(sheet.tolerances?.depthByLayer ?? {}))
    layer(['tolerances', 'depth', name], name);
  for (const name of Object.keys(sheet.tolerances?.pressureByPort ?? {}))
    port(['tolerances', 'pressure', name], name);
  for (const name of Object.keys(sheet.tolerances?.flowByPort ?? {}))
    port(['tolerances', 'flow', name], name);
  for (const [i, { at }] of sheet.accept.entries()) {
    if (names.isMade(at)) refuse(sheet, ['accept', i, 'at'], `accept[${i}].at: ${madeUp(at)}`);
  }
}

/** A reach is named for its channel, with a number where the channel has several. */
function isReachOf(channels: ReadonlySet<string>, asked: string): boolean {
  const channel = asked.replace(/:[\d*]*$/, '');
  if (channels.has(asked) || channels.has(channel)) return true;
  return isPattern(asked) && [...channels].some((name) => matches(asked, name) || matches(channel, name));
}

function unknown(
  sheet: RunSheet,
  path: KeyPath,
  what: 'channel' | 'port' | 'layer' | 'shape',
  name: string,
  candidates: Iterable<string>,
  names: KnownNames,
): never {
  const key = pathText(path);
  if (names.isMade(name)) refuse(sheet, path, `${key}: ${madeUp(name)}`);
  const other = somethingElse(what, name, names);
  if (other !== null) refuse(sheet, path, `${key}: ${other}`);
  const all = [...candidates];
  const near = nearest(name.replaceAll('*', ''), all);
  const fact =
    isPattern(name) && (what === 'channel' || what === 'port')
      ? `no ${what} matches ${quote(name)}`
      : `the drawing has no ${what} ${quote(name)}`;
  refuse(
    sheet,
    path,
    `${key}: ${fact}; ${near === null ? listed(what, all) : `did you mean ${quote(near)}?`}`,
  );
}

/** What goes by the name (or the first that matches the pattern) though it is no channel, port or layer; null when nothing does. */
function somethingElse(
  what: 'channel' | 'port' | 'layer' | 'shape',
  name: string,
  { channels, ports, layers, setAside, undrawn }: KnownNames,
): string | null {
  const isPatternHere = isPattern(name) && (what === 'channel' || what === 'port');
  const is =
    what === 'layer'
      ? (other: string): boolean => layerKey(other) === layerKey(name)
      : (other: string): boolean => other === name || (isPatternHere && matches(name, other));
  const whose = (other: string): string =>
    isPatternHere ? `${quote(name)} matches no ${what}: ${quote(other)}` : quote(other);
  if (what !== 'layer') {
    for (const [other, why] of setAside) {
      if (is(other)) return `${whose(other)} is drawn but is no ${what} here: ${why}`;
    }
    const taken = what === 'channel' ? ports : what === 'port' ? channels : [];
    for (const other of taken) {
      const why = what === 'channel' ? 'it is a circle, read as a port' : 'it is a stroke, read as a channel';
      if (is(other)) return `${whose(other)} is drawn but is no ${what} here: ${why}`;
    }
  }
  const hidden = undrawn.find((one) => (one.kind === 'group') === (what === 'layer') && is(one.name));
  if (hidden !== undefined) return `${whose(hidden.name)} is in the drawing but is not drawn: ${hidden.why}`;
  if (what === 'layer') {
    const shape = [...channels, ...ports, ...setAside.keys()].find(is);
    if (shape !== undefined) return `${quote(shape)} is a shape; a layer is a group of shapes`;
    return null;
  }
  for (const layer of layers.values()) {
    if (layer === name) return `${quote(name)} is a group of shapes; a ${what} is one of its shapes`;
  }
  return null;
}

function madeUp(name: string): string {
  return `${quote(name)} is only shown for a shape that has no such name; give it a name in the drawing (data-name, label, title or id) and use that`;
}

function listed(what: string, names: readonly string[]): string {
  if (names.length === 0) return `it has no named ${what}s`;
  const first = names.slice(0, 5).map(quote).join(', ');
  return `its ${what}s are ${first}${names.length > 5 ? ` and ${names.length - 5} more` : ''}`;
}
