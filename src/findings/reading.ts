import { grouped } from '../by-key.ts';
import { OBSTACLE_KIND } from '../chip/defaults.ts';
import { sizesByPixel } from '../chip/pixel-sizes.ts';
import type { Port, ReadingFault } from '../chip/types.ts';
import { UNUSABLE_KEYS } from '../runsheet/names.ts';
import { middleOfChannel } from './centrelines.ts';
import type { FindingContext } from './context.ts';
import { type Rule, rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { countText, distanceText, keyText, listText, unreadText } from './words.ts';

/** Also said of a drawing of nothing but outlines. */
const ALONE = { withoutChannels: true } as const;

/** What the drawing or the run sheet left open, or said in a way that cannot be read for sure. */
export const readingRules: readonly Rule[] = [
  {
    ...rule('unsized-stroke', (context) => faultsOf(context, 'unsized-stroke').map(unsizedStroke)),
    ...ALONE,
  },
  { ...rule('assumed-scale', assumedScale), ...ALONE },
  rule('missing-depth', (context) => missingDepths(faultsOf(context, 'missing-depth'))),
  rule('disguised-stroke', (context) => faultsOf(context, 'disguised-stroke').map(disguisedStroke)),
  rule('unset-port', unsetPorts),
  rule('default-depth', defaultDepths),
  { ...rule('ignored-shapes', ignoredShapes), ...ALONE },
];

type FaultOf<K extends ReadingFault['kind']> = Extract<ReadingFault, { readonly kind: K }>;

function faultsOf<K extends ReadingFault['kind']>({ chip }: FindingContext, kind: K): FaultOf<K>[] {
  return chip.faults.filter((fault): fault is FaultOf<K> => fault.kind === kind);
}

function unsizedStroke({ name, xMm, yMm }: FaultOf<'unsized-stroke'>): Finding {
  return toFinding('unsized-stroke', 'blocker', {
    message: `the stroke of ${name} is stretched or skewed by its transform, so it has no one width; the channel was left out`,
    fix: `take the uneven scaling off ${name} or its group (apply the transform to the path) and set its stroke width again`,
    at: { xMm, yMm },
    names: [name],
  });
}

function assumedScale(context: FindingContext): Finding[] {
  return faultsOf(context, 'assumed-scale').map(({ reason }) =>
    toFinding('assumed-scale', 'blocker', {
      message: `the drawing states no physical size (${reason}); it was read at 96 pixels per inch, which is a guess: ${sizesByPixel(context.chip)}`,
      fix: 'give the drawing its width and height in mm, or write in the run sheet unit: 1 mm (what one drawing unit is: one of the two above, or 1 mm where it was drawn in mm) or size: [76 mm, 26 mm] (the sides of the chip edge)',
      at: null,
      names: [],
    }),
  );
}

/** One finding per layer: the layer's depth is what is missing. */
function missingDepths(faults: readonly FaultOf<'missing-depth'>[]): Finding[] {
  return [...grouped(faults, ({ layer }) => layer)].map(([layer, group]) => {
    const [first] = group;
    const channels = [...new Set(group.map(({ channel }) => channel))];
    const who = `${listText(channels)} ${channels.length === 1 ? 'has' : 'have'} no depth`;
    const said =
      layer === ''
        ? {
            message: `${who} and no layer to take one from`,
            fix: 'write depth: 50 um in the run sheet (with the depth that is etched)',
            names: channels,
          }
        : {
            message: `${who}: layer ${layer} was given none`,
            fix: `write in the run sheet layers: { ${keyText(layer)}: { depth: 50 um } } (with the depth that is etched), or depth: for all layers`,
            names: [...new Set([first.channel, layer, ...channels])],
          };
    return toFinding('missing-depth', 'blocker', { ...said, at: first });
  });
}

function disguisedStroke({ channel, by, xMm, yMm }: FaultOf<'disguised-stroke'>): Finding {
  return toFinding('disguised-stroke', 'caution', {
    message: `${channel} carries ${by}, so it looks other than it is read: the whole stroke counts as etched`,
    fix: `take ${by} off ${channel}, or name it under ignore: in the run sheet if it is not to be etched`,
    at: { xMm, yMm },
    names: [channel],
  });
}

function unsetPorts({ chip, run }: FindingContext): Finding[] {
  const unset = chip.ports.filter((_, p) => run.ports[p].condition.kind === 'unset');
  return unset.map((port) =>
    toFinding('unset-port', 'blocker', {
      message: `port ${port.name} (${distanceText(2 * port.radiusMm)} hole) has no condition; it was computed as sealed`,
      fix: conditionFix(port),
      at: port,
      names: [port.name],
    }),
  );
}

function conditionFix({ name, drawnName }: Port): string {
  if (drawnName === null)
    return 'give the circle a name in the drawing and its pressure, flow or head in the run sheet (or open, or sealed); name it or its layer under ignore: if it is no port, or name the layer of the ports under ports_layer:';
  if (UNUSABLE_KEYS.has(drawnName))
    return `give the circle another name than ${name}, which no run sheet can hold, and its condition in the run sheet`;
  return `write in the run sheet ports: { ${keyText(name)}: { pressure: 10 kPa } } (or flow or head, or just open or sealed)`;
}

/** Strokes in no layer have only the sheet's depth to take; a named layer may have been forgotten. */
function defaultDepths({ chip }: FindingContext): Finding[] {
  const defaulted = chip.channels.filter(
    ({ layer, depthOrigin, depthMm }) =>
      depthOrigin === 'default' && !Number.isNaN(depthMm) && chip.layers[layer].name !== '',
  );
  return [...grouped(defaulted, ({ layer }) => layer)].map(([layer, [channel]]) => {
    const { name } = chip.layers[layer];
    const depth = distanceText(channel.depthMm);
    return toFinding('default-depth', 'note', {
      message: `layer ${name} is not named in the run sheet and took its depth of ${depth} for all layers`,
      fix: `write layers: { ${keyText(name)}: { depth: ${depth.replace('µ', 'u')} } } in the run sheet to say that this is meant`,
      at: middleOfChannel(channel),
      names: [name],
    });
  });
}

function ignoredShapes({ chip, network }: FindingContext): Finding[] {
  const leftOut = leftOutWhole({ chip, network });
  const { [OBSTACLE_KIND]: _, ...ignored } = chip.ignored;
  const kinds = Object.entries({ ...ignored, 'stroke along another': leftOut.length })
    .filter(([, count]) => count > 0)
    .sort(([a], [b]) => (a < b ? -1 : 1));
  if (kinds.length === 0) return [];
  const total = kinds.reduce((sum, [, count]) => sum + count, 0);
  const all = kinds.map(([kind, count]) => {
    const named = kind === 'stroke along another' ? ` (${listText(leftOut, 8)})` : '';
    return `${unreadText(kind, count)}${named}`;
  });
  return [
    toFinding('ignored-shapes', 'note', {
      message: `${countText(total, 'drawn thing was', 'drawn things were')} not read as part of the chip: ${all.join(', ')}`,
      fix: 'check on the picture that no channel is missing',
      at: null,
      names: leftOut,
    }),
  ];
}

/** Strokes that the joining rules left out whole, as an end piece along another channel: drawn, and in no reach. */
function leftOutWhole({ chip, network }: Pick<FindingContext, 'chip' | 'network'>): string[] {
  const { near, endFate, firstArc } = network.trace;
  const kept = new Set<number>();
  const cut = new Set<number>();
  for (let c = 0; c < near.pieces.centrelineCount; c++) {
    const channel = near.pieces.centrelineChannel[c];
    if (firstArc[c + 1] > firstArc[c]) kept.add(channel);
    else if (endFate[2 * c] === 'left out' || endFate[2 * c + 1] === 'left out') cut.add(channel);
  }
  return [...cut].filter((channel) => !kept.has(channel)).map((channel) => chip.channels[channel].name);
}
