import { remembered } from '../by-key.ts';
import type { Layout } from '../layout/types.ts';
import { isPattern, layerKey, matches } from '../runsheet/names.ts';
import { didYouMean } from '../runsheet/nearest.ts';
import { type KeyPath, pathText } from '../runsheet/path-text.ts';
import { quote, quoteSome } from '../runsheet/quote.ts';
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
  // siblings share their list of groups
  for (const groups of new Set(layout.items.map((item) => item.groups)))
    for (const name of groups) remembered(layers, layerKey(name), () => name);
  return layers;
}

/** Names of everything that could be a channel, a port or a chamber. */
export function drawnShapes(layout: Layout): ReadonlySet<string> {
  return new Set(layout.items.flatMap(({ kind, name }) => (kind === 'ignored' ? [] : (name ?? []))));
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
  const look = (what: What, path: KeyPath, name: string): void => {
    const key = what === 'layer' ? layerKey(name) : what === 'shape' ? name.trim() : name;
    if (!names[`${what}s`].has(key)) unknown(sheet, path, what, name, names);
  };
  const lookAtKeys = (what: What, path: KeyPath, section: Readonly<Record<string, unknown>> = {}): void => {
    for (const name of Object.keys(section)) look(what, [...path, name], name);
  };
  const lookAtList = (what: What, path: KeyPath, list: readonly string[] | null = null): void => {
    for (const [i, name] of (list ?? []).entries()) look(what, [...path, i], name);
  };
  if (sheet.portsLayer !== null) look('layer', ['ports_layer'], sheet.portsLayer);
  lookAtKeys('layer', ['layers'], sheet.layers);
  for (const name of keys.ports.unmatched()) unknown(sheet, ['ports', name], 'port', name, names);
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
    if (!fields.has(name.trim())) unknown(sheet, ['channels', name], 'channel', name, names);
  }
  for (const { index, on, name, by } of [...sheet.targets, ...sheet.concentrationTargets]) {
    if (on !== 'node') look(on, ['targets', index, on], name);
    look('port', ['targets', index, 'by'], by);
  }
  lookAtList('shape', ['fields'], sheet.fields);
  lookAtList('layer', ['pillars'], sheet.pillars);
  lookAtList('port', ['switch', 'from'], sheet.switch?.from);
  const asked = sheet.switch?.reach ?? null;
  if (asked !== null && !isReachOf(names.channels, asked))
    unknown(sheet, ['switch', 'reach'], 'channel', asked, names);
  lookAtKeys('port', ['pump_limits'], sheet.pumpLimits);
  lookAtKeys('layer', ['tolerances', 'depth'], sheet.tolerances?.depthByLayer);
  lookAtKeys('port', ['tolerances', 'pressure'], sheet.tolerances?.pressureByPort);
  lookAtKeys('port', ['tolerances', 'flow'], sheet.tolerances?.flowByPort);
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

type What = 'channel' | 'port' | 'layer' | 'shape';

function unknown(sheet: RunSheet, path: KeyPath, what: What, name: string, names: KnownNames): never {
  const key = pathText(path);
  if (names.isMade(name)) refuse(sheet, path, `${key}: ${madeUp(name)}`);
  const other = somethingElse(what, name, names);
  if (other !== null) refuse(sheet, path, `${key}: ${other}`);
  const all = [...names[`${what}s`].values()];
  const fact = mayBePattern(what, name)
    ? `no ${what} matches ${quote(name)}`
    : `the drawing has no ${what} ${quote(name)}`;
  const hint = didYouMean(name.replaceAll('*', ''), all) ?? listed(what, all);
  refuse(sheet, path, `${key}: ${fact}; ${hint}`);
}

function mayBePattern(what: What, name: string): boolean {
  return isPattern(name) && (what === 'channel' || what === 'port');
}

/** What goes by the name (or the first that matches the pattern) though it is no channel, port or layer; null when nothing does. */
function somethingElse(
  what: What,
  name: string,
  { channels, ports, layers, setAside, undrawn }: KnownNames,
): string | null {
  const isPatternHere = mayBePattern(what, name);
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
    return shape === undefined ? null : `${quote(shape)} is a shape; a layer is a group of shapes`;
  }
  return [...layers.values()].includes(name)
    ? `${quote(name)} is a group of shapes; a ${what} is one of its shapes`
    : null;
}

function madeUp(name: string): string {
  return `${quote(name)} is only shown for a shape that has no such name; give it a name in the drawing (data-name, label, title or id) and use that`;
}

function listed(what: string, names: readonly string[]): string {
  return names.length === 0 ? `it has no named ${what}s` : `its ${what}s are ${quoteSome(names, 5)}`;
}
