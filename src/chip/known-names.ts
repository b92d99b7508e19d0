import type { Layout } from '../layout/types.ts';
import { isPattern, layerKey } from '../runsheet/names.ts';
import { nearest } from '../runsheet/nearest.ts';
import { type KeyPath, pathText } from '../runsheet/path-text.ts';
import { quote } from '../runsheet/quote.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { refuse } from './complain.ts';

/** What the drawing offers to name. */
export interface KnownNames {
  readonly channels: ReadonlySet<string>;
  readonly ports: ReadonlySet<string>;
  /** By layer key, as drawn. */
  readonly layers: ReadonlyMap<string, string>;
  /** Whether a name was made up here and means nothing in a run sheet. */
  readonly isMade: (name: string) => boolean;
  /** Names drawn but not read, with why. */
  readonly setAside: ReadonlyMap<string, string>;
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

/**
 * Refuses the first name of the run sheet that the drawing lacks, with its line and the nearest right name.
 * Nodes and reaches are named by the network and answered there; `ignore` may name what is not drawn.
 * @param unmatchedChannels keys of `channels` that matched no channel
 */
export function refuseUnknownNames(
  sheet: RunSheet,
  names: KnownNames,
  unmatchedChannels: readonly string[],
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
  for (const name of Object.keys(sheet.ports)) port(['ports', name], name);
  for (const name of unmatchedChannels)
    unknown(sheet, ['channels', name], 'channel', name, names.channels, names);
  for (const [i, target] of sheet.targets.entries()) {
    if (target.on === 'port') port(['targets', i, 'port'], target.name);
    if (target.on === 'channel' && !names.channels.has(target.name)) {
      unknown(sheet, ['targets', i, 'channel'], 'channel', target.name, names.channels, names);
    }
    port(['targets', i, 'by'], target.by);
  }
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

function unknown(
  sheet: RunSheet,
  path: KeyPath,
  what: 'channel' | 'port' | 'layer',
  name: string,
  candidates: Iterable<string>,
  { isMade, setAside }: KnownNames,
): never {
  const key = pathText(path);
  if (isMade(name)) refuse(sheet, path, `${key}: ${madeUp(name)}`);
  const why = setAside.get(name);
  if (what !== 'layer' && why !== undefined) {
    refuse(sheet, path, `${key}: ${quote(name)} is drawn but is no ${what} here: ${why}`);
  }
  const all = [...candidates];
  const near = nearest(name.replaceAll('*', ''), all);
  const fact =
    isPattern(name) && what === 'channel'
      ? `no channel matches ${quote(name)}`
      : `the drawing has no ${what} ${quote(name)}`;
  refuse(
    sheet,
    path,
    `${key}: ${fact}; ${near === null ? listed(what, all) : `did you mean ${quote(near)}?`}`,
  );
}

function madeUp(name: string): string {
  return `${quote(name)} is only shown for a shape that has no such name; give it a name in the drawing (data-name, label, title or id) and use that`;
}

function listed(what: string, names: readonly string[]): string {
  if (names.length === 0) return `it has no named ${what}s`;
  const first = names.slice(0, 5).map(quote).join(', ');
  return `its ${what}s are ${first}${names.length > 5 ? ` and ${names.length - 5} more` : ''}`;
}
