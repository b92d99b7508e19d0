import { remembered } from '../by-key.ts';
import { InputError } from '../errors.ts';
import { layerKey } from '../runsheet/names.ts';
import { quote } from '../runsheet/quote.ts';
import type { LayerEntry, RunSheet } from '../runsheet/types.ts';
import { parseQuantity, QuantityError } from '../runsheet/units.ts';
import { CHIP_PLANE } from './defaults.ts';
import type { ChipLayer, Origin } from './types.ts';

/** Finds the layer of drawn things by their groups; layers are listed in the order in which they are first met. */
export interface LayerFinder {
  /** The run sheet's entry for the layer of things in these groups; null when it has none. */
  readonly entryOf: (groups: readonly string[]) => LayerEntry | null;
  /** Index of the layer of a channel in these groups. */
  readonly indexOf: (groups: readonly string[]) => number;
  readonly layers: readonly ChipLayer[];
  /** `chip` first. */
  readonly planes: readonly string[];
}

/**
 * A layer is the nearest enclosing group whose name is a layer in the run sheet, else the nearest named group, else
 * none (the layer ""). Its depth is the layer's own, else the sheet's, else unknown (NaN).
 */
export function layerFinder(sheet: RunSheet | null): LayerFinder {
  const entries = new Map(
    Object.entries(sheet?.layers ?? {}).map(([name, entry]) => [layerKey(name), entry]),
  );
  const keys = new Map<string, string>();
  const keyOf = (name: string): string => remembered(keys, name, () => layerKey(name));
  // Siblings share their list of groups, so most answers come from the list itself.
  const nameByGroups = new Map<readonly string[], string>();
  const nameOf = (groups: readonly string[]): string =>
    remembered(
      nameByGroups,
      groups,
      () => groups.findLast((group) => entries.has(keyOf(group))) ?? groups.at(-1) ?? '',
    );

  const layers: ChipLayer[] = [];
  const planes: string[] = [CHIP_PLANE];
  const indexByKey = new Map<string, number>();
  const addLayer = (name: string, key: string): number => {
    const entry = entries.get(key);
    const etched = entry?.kind === 'etched' ? entry : null;
    const plane = etched?.plane ?? CHIP_PLANE;
    if (!planes.includes(plane)) planes.push(plane);
    const usual = sheet?.process === 'etched glass' ? 'isotropic' : 'rectangle';
    layers.push({
      name,
      plane: planes.indexOf(plane),
      depthM: etched?.depthM ?? sheet?.depthM ?? Number.NaN,
      depthOrigin: etched?.depthM != null ? 'run sheet' : 'default',
      profile: etched?.profile ?? usual,
    });
    indexByKey.set(key, layers.length - 1);
    return layers.length - 1;
  };
  return {
    entryOf: (groups) => entries.get(keyOf(nameOf(groups))) ?? null,
    indexOf: (groups) => {
      const name = nameOf(groups);
      const key = keyOf(name);
      return indexByKey.get(key) ?? addLayer(name, key);
    },
    layers,
    planes,
  };
}

/**
 * Depth of a channel: its `data-depth`, else its layer's.
 * @throws InputError when `data-depth` is no depth
 */
export function depthOf(
  dataDepth: string | null,
  { depthM: depthOfLayerM, depthOrigin }: ChipLayer,
  channel: string,
  file: string,
): Pick<ChipLayer, 'depthM' | 'depthOrigin'> {
  if (dataDepth === null) return { depthM: depthOfLayerM, depthOrigin };
  let depthM: number;
  try {
    depthM = parseQuantity(dataDepth, 'length');
  } catch (error) {
    if (!(error instanceof QuantityError)) throw error;
    throw new InputError(file, `channel ${quote(channel)}: data-depth: ${error.message}`, { cause: error });
  }
  if (depthM > 0) return { depthM, depthOrigin: 'drawing' };
  throw new InputError(
    file,
    `channel ${quote(channel)}: data-depth: ${quote(dataDepth)}: a depth must be above 0; write for example "50 um"`,
  );
}

/** A layer without a depth of its own has the one that the drawing gives all its channels, if it is one. */
export function withDrawnDepths(
  layers: readonly ChipLayer[],
  channels: readonly { readonly layer: number; readonly depthMm: number; readonly depthOrigin: Origin }[],
): readonly ChipLayer[] {
  const drawn = new Map<number, number>();
  for (const { layer, depthMm, depthOrigin } of channels) {
    const depth = depthOrigin === 'drawing' ? depthMm : Number.NaN;
    const before = drawn.get(layer);
    drawn.set(layer, before === undefined || before === depth ? depth : Number.NaN);
  }
  return layers.map((layer, i) => {
    const depthMm = drawn.get(i) ?? Number.NaN;
    if (layer.depthOrigin === 'run sheet' || Number.isNaN(depthMm)) return layer;
    return { ...layer, depthM: depthMm / 1000, depthOrigin: 'drawing' };
  });
}
