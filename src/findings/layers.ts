import { grouped } from '../by-key.ts';
import { type LayerCrossing, layerCrossings } from '../network/layer-crossings.ts';
import { layerKey } from '../runsheet/names.ts';
import { channelOf } from './centrelines.ts';
import type { FindingContext } from './context.ts';
import { type Rule, rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { countText, keyText, placeText } from './words.ts';

/** How the layers of the drawing lie to each other. */
export const layerRules: readonly Rule[] = [rule('layers-cross', layersCross)];

/** One finding per pair of layers of which the run sheet says for neither in which plane it lies. */
function layersCross({ chip, network, run }: FindingContext): Finding[] {
  if (chip.layers.length < 2) return [];
  const { near } = network.trace;
  const crossings = layerCrossings(near, chip.ports, chip.joinWithinMm, layerOf);
  const unplaced = crossings.filter(({ a, b }) => !isPlaced(a) && !isPlaced(b));
  return [...grouped(unplaced, ({ a, b }) => `${a} ${b}`).values()].map(toLayersCross);

  function layerOf(channel: number): number {
    return chip.channels[channel].layer;
  }

  function isPlaced(layer: number): boolean {
    const key = layerKey(chip.layers[layer].name);
    return Object.entries(run.sheet?.layers ?? {}).some(
      ([name, entry]) => layerKey(name) === key && entry.kind === 'etched' && entry.plane !== null,
    );
  }

  function toLayersCross(places: readonly LayerCrossing[]): Finding {
    const [{ a, b, centrelineA, centrelineB, xMm, yMm }] = places;
    const one = chip.layers[a].name;
    const two = chip.layers[b].name;
    const channels = [centrelineA, centrelineB].map((c) => channelOf(network, c).name);
    const first = places.length === 1 ? 'at' : 'first at';
    // Strokes in no layer can't be given a plane.
    const upper = two === '' ? one : two;
    const names = [...new Set([...[one, two].filter((name) => name !== ''), ...channels])];
    return toFinding('layers-cross', 'caution', {
      message: `${layerText(one)} and ${layerText(two)} cross in ${countText(places.length, 'place')}, ${first} ${placeText(xMm, yMm)} (${channels.join(' and ')}), where neither ends; the run sheet gives neither a plane, so they are joined there and fluid passes from one to the other`,
      fix: `if they pass over each other, write layers: { ${keyText(upper)}: { plane: top } } in the run sheet; if all of them are meant to join, accept layers-cross at ${keyText(upper)}`,
      at: { xMm, yMm },
      names,
    });
  }
}

function layerText(name: string): string {
  return name === '' ? 'the strokes in no layer' : `layer ${name}`;
}
