import { OBSTACLE_KIND } from '../chip/defaults.ts';
import { sizesByPixel } from '../chip/pixel-sizes.ts';
import type { Chip, ReadingFault } from '../chip/types.ts';
import { UNUSABLE_KEYS } from '../runsheet/names.ts';
import { middleOfChannel } from './centrelines.ts';
import type { FindingContext } from './context.ts';
import { found, type Rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { countText, distanceText, keyText, listText, unreadText } from './words.ts';

/** What the drawing or the run sheet left open, or said in a way that cannot be read for sure. */
export const readingRules: readonly Rule[] = [
  {
    names: ['unsized-stroke'],
    withoutChannels: true,
    run: ({ chip }) => found(chip.faults.filter(isOf('unsized-stroke')).map(unsizedStroke)),
  },
  {
    names: ['assumed-scale'],
    withoutChannels: true,
    run: ({ chip }) =>
      found(chip.faults.filter(isOf('assumed-scale')).map((fault) => assumedScale(fault, chip))),
  },
  {
    names: ['missing-depth'],
    run: ({ chip }) => found(missingDepths(chip.faults.filter(isOf('missing-depth')))),
  },
  {
    names: ['disguised-stroke'],
    run: ({ chip }) => found(chip.faults.filter(isOf('disguised-stroke')).map(disguisedStroke)),
  },
  { names: ['unset-port'], run: (context) => found(unsetPorts(context)) },
  { names: ['default-depth'], run: (context) => found(defaultDepths(context)) },
  { names: ['ignored-shapes'], withoutChannels: true, run: (context) => found(ignoredShapes(context)) },
];

type FaultOf<K extends ReadingFault['kind']> = Extract<ReadingFault, { readonly kind: K }>;

function isOf<K extends ReadingFault['kind']>(kind: K) {
  return (fault: ReadingFault): fault is FaultOf<K> => fault.kind === kind;
}

function unsizedStroke({ name, xMm, yMm }: FaultOf<'unsized-stroke'>): Finding {
  return toFinding('unsized-stroke', 'blocker', {
    message: `the stroke of ${name} is stretched or skewed by its transform, so it has no one width; the channel was left out`,
    fix: `take the uneven scaling off ${name} or its group (apply the transform to the path) and set its stroke width again`,
    at: { xMm, yMm },
    names: [name],
  });
}

function assumedScale({ reason }: FaultOf<'assumed-scale'>, chip: Chip): Finding {
  return toFinding('assumed-scale', 'blocker', {
    message: `the drawing states no physical size (${reason}); it was read at 96 pixels per inch, which is a guess: ${sizesByPixel(chip)}`,
    fix: 'give the drawing its width and height in mm, or write in the run sheet unit: 1 mm (what one drawing unit is: one of the two above, or 1 mm where it was drawn in mm) or size: [76 mm, 26 mm] (the sides of the chip edge)',
    at: null,
    names: [],
  });
}

/** One finding per layer: the layer's depth is what is missing. */
function missingDepths(faults: readonly FaultOf<'missing-depth'>[]): Finding[] {
  const byLayer = new Map<string, FaultOf<'missing-depth'>[]>();
  for (const fault of faults) {
    const group = byLayer.get(fault.layer);
    if (group === undefined) byLayer.set(fault.layer, [fault]);
    else group.push(fault);
  }
  return [...byLayer].map(([layer, group]) => {
    const [first] = group;
    const channels = [...new Set(group.map(({ channel }) => channel))];
    const who = `${listText(channels)} ${channels.length === 1 ? 'has' : 'have'} no depth`;
    return toFinding('missing-depth', 'blocker', {
      message:
        layer === '' ? `${who} and no layer to take one from` : `${who}: layer ${layer} was given none`,
      fix:
        layer === ''
          ? 'write depth: 50 um in the run sheet (with the depth that is etched)'
          : `write in the run sheet layers: { ${keyText(layer)}: { depth: 50 um } } (with the depth that is etched), or depth: for all layers`,
      at: { xMm: first.xMm, yMm: first.yMm },
      names: layer === '' ? channels : [...new Set([first.channel, layer, ...channels])],
    });
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
  return chip.ports
    .filter((_, p) => run.ports[p].condition.kind === 'unset')
    .map(({ name, drawnName, xMm, yMm, radiusMm }) =>
      toFinding('unset-port', 'blocker', {
        message: `port ${name} (${distanceText(2 * radiusMm)} hole) has no condition; it was computed as sealed`,
        fix:
          drawnName === null
            ? 'give the circle a name in the drawing and its pressure, flow or head in the run sheet (or open, or sealed); name it or its layer under ignore: if it is no port, or name the layer of the ports under ports_layer:'
            : UNUSABLE_KEYS.has(drawnName)
              ? `give the circle another name than ${name}, which no run sheet can hold, and its condition in the run sheet`
              : `write in the run sheet ports: { ${keyText(name)}: { pressure: 10 kPa } } (or flow or head, or just open or sealed)`,
        at: { xMm, yMm },
        names: [name],
      }),
    );
}

/** Strokes in no layer have only the sheet's depth to take; a named layer may have been forgotten. */
function defaultDepths({ chip }: FindingContext): Finding[] {
  const firstOfLayer = new Map<number, (typeof chip.channels)[number]>();
  for (const channel of chip.channels) {
    const tookDefault = channel.depthOrigin === 'default' && !Number.isNaN(channel.depthMm);
    if (tookDefault && !firstOfLayer.has(channel.layer)) {
      firstOfLayer.set(channel.layer, channel);
    }
  }
  return [...firstOfLayer]
    .filter(([layer]) => chip.layers[layer].name !== '')
    .map(([layer, channel]) => {
      const { name } = chip.layers[layer];
      return toFinding('default-depth', 'note', {
        message: `layer ${name} is not named in the run sheet and took its depth of ${distanceText(channel.depthMm)} for all layers`,
        fix: `write layers: { ${keyText(name)}: { depth: ${distanceText(channel.depthMm).replace('µ', 'u')} } } in the run sheet to say that this is meant`,
        at: middleOfChannel(channel),
        names: [name],
      });
    });
}

function ignoredShapes({ chip, network }: FindingContext): Finding[] {
  const leftOut = leftOutWhole({ chip, network });
  const { [OBSTACLE_KIND]: _, ...ignored } = chip.ignored;
  const counts = {
    ...ignored,
    ...(leftOut.length > 0 ? { 'stroke along another': leftOut.length } : {}),
  };
  const kinds = Object.entries(counts)
    .filter(([, count]) => count > 0)
    .sort(([a], [b]) => (a < b ? -1 : 1));
  if (kinds.length === 0) return [];
  const total = kinds.reduce((sum, [, count]) => sum + count, 0);
  const named = leftOut.length === 0 ? '' : ` (${listText(leftOut, 8)})`;
  return [
    toFinding('ignored-shapes', 'note', {
      message: `${countText(total, 'drawn thing was', 'drawn things were')} not read as part of the chip: ${kinds.map(([kind, count]) => `${unreadText(kind, count)}${kind === 'stroke along another' ? named : ''}`).join(', ')}`,
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
