import type { Chip } from '../chip/types.ts';
import { findNearPairs } from '../geometry/near.ts';
import { toPieces } from '../geometry/pieces.ts';
import { layerCrossings } from '../network/layer-crossings.ts';

/** Layer of a stroke that lies in none. */
export const NO_LAYER = -1;

interface ProposedPlanes {
  /** Plane of each layer that is to lie in another than the chip's own. */
  readonly of: ReadonlyMap<number, string>;
  /** Layers that are so taken to pass over each other. */
  readonly passing: readonly LayerPair[];
}

/** Two layers, and in how many places they cross where neither ends. */
export interface LayerPair {
  readonly a: number;
  readonly b: number;
  count: number;
}

/**
 * Planes that keep layers apart which cross where neither ends: the first drawn keeps the chip's own plane, each further
 * one takes the first plane that no layer it crosses has taken.
 *
 * @param mayMove false for a layer that a run sheet can't name, and for the strokes in none: it stays in the chip's plane
 * @throws InputError when the drawing has too many near pairs
 */
export function proposePlanes(
  chip: Chip,
  layerOf: (channel: number) => number,
  mayMove: (layer: number) => boolean,
): ProposedPlanes {
  const layers = [...new Set(chip.channels.map((_, channel) => layerOf(channel)))].sort((a, b) => a - b);
  const counts = layers.length < 2 ? new Map<string, LayerPair>() : countPairs(chip, layerOf);
  const levels = new Map<number, number>();
  for (const layer of layers) if (!mayMove(layer)) levels.set(layer, 0);
  for (const layer of layers) {
    if (levels.has(layer)) continue;
    const taken = new Set<number>();
    for (const { a, b } of counts.values()) {
      if (a === layer) taken.add(levels.get(b) ?? -1);
      if (b === layer) taken.add(levels.get(a) ?? -1);
    }
    let level = 0;
    while (taken.has(level)) level++;
    levels.set(layer, level);
  }
  const of = new Map<number, string>();
  for (const [layer, level] of levels) if (level > 0) of.set(layer, level === 1 ? 'top' : `top-${level}`);
  return { of, passing: [...counts.values()].filter(({ a, b }) => levels.get(a) !== levels.get(b)) };
}

function countPairs(chip: Chip, layerOf: (channel: number) => number): Map<string, LayerPair> {
  const near = findNearPairs(toPieces(chip.channels), chip.joinWithinMm, () => 1, chip.file);
  const counts = new Map<string, LayerPair>();
  for (const { a, b } of layerCrossings(near, chip.ports, chip.joinWithinMm, layerOf)) {
    const known = counts.get(`${a} ${b}`);
    if (known === undefined) counts.set(`${a} ${b}`, { a, b, count: 1 });
    else known.count++;
  }
  return counts;
}
