import { grouped } from '../by-key.ts';
import type { OutlineFault, OutlineReason } from '../chip/types.ts';
import { type FindingContext, oncePerContext } from './context.ts';
import { type Rule, rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { countText, listText } from './words.ts';

/** Channels drawn as outlines: filled, or as a hairline round what would be etched; and drawings without any channel. */
export const outlineRules: readonly Rule[] = [
  { ...rule('filled-outline', filledOutlines), withoutChannels: true },
  rule('no-channel', noChannel),
];

/** Every channel of the drawing is an outline: nothing else can be said of it. */
export function isAllOutlines({ chip }: FindingContext): boolean {
  return chip.channels.length === 0 && chip.faults.some(({ kind }) => kind === 'filled-outline');
}

/** Names of ports that an outline leads to: that no channel does follows from it. */
export const portsOnOutlines = oncePerContext(
  (context): ReadonlySet<string> => new Set(outlinesOf(context).flatMap(({ ports }) => ports)),
);

/** Whether a channel ends on an outline at a place: that it meets nothing there follows from it. */
export const endsOnOutline = oncePerContext((context) => {
  const ends = outlinesOf(context).flatMap((outline) => outline.ends);
  const places = new Set(ends.map(({ xMm, yMm }) => `${xMm} ${yMm}`));
  return ({ x, y }: { readonly x: number; readonly y: number }): boolean => places.has(`${x} ${y}`);
});

/** Connected parts of the network that an outline would join to something. */
export const partsOnOutlines = oncePerContext((context): ReadonlySet<number> => {
  const parts = new Set<number>();
  const { network, flow, chip } = context;
  const outlines = outlinesOf(context);
  if (flow === null || outlines.length === 0) return parts;
  const ports = portsOnOutlines(context);
  const channels = new Set(outlines.flatMap(({ ends }) => ends.map(({ channel }) => channel)));
  chip.ports.forEach(({ name }, p) => {
    if (ports.has(name)) parts.add(flow.nodePart[network.portNode[p]]);
  });
  for (let reach = 0; reach < network.reachCount; reach++) {
    if (channels.has(chip.channels[network.reachChannel[reach]].name)) {
      parts.add(flow.nodePart[network.reachFrom[reach]]);
    }
  }
  return parts;
});

const outlinesOf = oncePerContext(({ chip }: FindingContext): readonly OutlineFault[] =>
  chip.faults.filter((fault) => fault.kind === 'filled-outline'),
);

/** One finding for a drawing of nothing but outlines; else one for each way in which a shape shows that it is one. */
function filledOutlines(context: FindingContext): Finding[] {
  const outlines = outlinesOf(context);
  if (outlines.length === 0) return [];
  if (isAllOutlines(context)) return [allOutlines(outlines)];
  return [...grouped(outlines, ({ reason }) => reason)].map(([reason, group]) => someOutlines(reason, group));
}

function allOutlines(outlines: readonly OutlineFault[]): Finding {
  const lines = outlines.filter(({ reason }) => reason === 'hairline').length;
  const shapes = outlines.length - lines;
  const what = [
    shapes === 0 ? '' : countText(shapes, 'filled shape'),
    lines === 0 ? '' : countText(lines, 'hairline round an area', 'hairlines round areas'),
  ].filter((text) => text !== '');
  const names = namesOf(outlines);
  const named = names.length === 0 ? '' : `: ${listText(names, 8)}`;
  return toFinding('filled-outline', 'blocker', {
    message: `the drawing shows its channels as outlines (${what.join(' and ')}${named}) and has no centreline: nothing could be computed`,
    fix: `draw the centrelines: each channel as one line along its middle, with its width as the stroke width and no fill; name what is no channel under ignore: in the run sheet, and the outline of the part chip-edge`,
    at: outlines[0],
    names,
  });
}

function someOutlines(reason: OutlineReason, outlines: readonly OutlineFault[]): Finding {
  const one = outlines.length === 1;
  const [first] = outlines;
  const it = itText(outlines);
  const redraw = `draw the centreline of ${!one ? 'each' : namesOf(outlines).length === 0 ? 'it' : first.name}: one line along its middle with its width as the stroke width and no fill`;
  return toFinding('filled-outline', 'blocker', {
    message: `${namesText(outlines)} ${one ? 'is' : 'are'} drawn as ${LOOKS[reason](outlines)}; only strokes along a centreline are channels, so ${one ? 'it was' : 'they were'} left out`,
    fix:
      reason === 'hairline'
        ? `${redraw}; if ${one ? 'it is' : 'they are'} the outline of the part, name ${it} chip-edge or under outline: in the run sheet; if a channel runs along ${one ? 'that very line' : 'those very lines'}, give ${it} the attribute data-channel; else name ${it} under ignore:`
        : reason === 'no-stroke'
          ? `${redraw}, or take data-channel off ${it}`
          : `${redraw}, or name ${it} under ignore: in the run sheet if ${one ? 'it is no channel' : 'they are no channels'}`,
    at: first,
    names: namesOf(outlines),
  });
}

const LOOKS: Readonly<Record<OutlineReason, (outlines: readonly OutlineFault[]) => string>> = {
  stroked: (outlines) => `${filledText(outlines)} (stroked too)`,
  end: (outlines) => {
    const ends = [...new Set(outlines.flatMap((outline) => outline.ends.map(({ channel }) => channel)))];
    return `${filledText(outlines)} (${listText(ends)} ${ends.length === 1 ? 'ends' : 'end'} on ${itText(outlines)})`;
  },
  port: (outlines) =>
    `${filledText(outlines)} (the port ${listText(portNames(outlines))} lies on ${itText(outlines)})`,
  hairline: (outlines) => {
    const ports = portNames(outlines);
    const held = ports.length === 0 ? 'other such lines' : listText(ports);
    return `${outlines.length === 1 ? 'a closed hairline' : 'closed hairlines'} round ${held}, with no channel on ${itText(outlines)}`;
  },
  'no-channels': filledText,
  'no-stroke': (outlines) => `${filledText(outlines)} without a stroke, though marked data-channel`,
};

function filledText({ length }: readonly OutlineFault[]): string {
  return length === 1 ? 'a filled outline' : 'filled outlines';
}

function itText({ length }: readonly OutlineFault[]): string {
  return length === 1 ? 'it' : 'them';
}

function portNames(outlines: readonly OutlineFault[]): string[] {
  return [...new Set(outlines.flatMap(({ ports }) => ports))];
}

/** As many names as can be read, and how many have none. */
function namesText(outlines: readonly OutlineFault[]): string {
  const unnamed = outlines.filter(({ name }) => name.startsWith('unnamed ')).length;
  const named = namesOf(outlines);
  if (named.length === 0) return unnamed === 1 ? outlines[0].name : `${unnamed} unnamed shapes`;
  return listText(unnamed === 0 ? named : [...named, countText(unnamed, 'unnamed shape')], 8);
}

/** Without what was made up for shapes that have no name, unless there is no other. */
function namesOf(outlines: readonly OutlineFault[]): string[] {
  const named = outlines.filter(({ name }) => !name.startsWith('unnamed ')).map(({ name }) => name);
  return [...new Set(named)];
}

/** A drawing without channels, or anything that might be one, would otherwise have no fault at all. */
function noChannel({ chip }: FindingContext): Finding[] {
  const isSaid = chip.faults.some(({ kind }) => kind === 'filled-outline' || kind === 'unsized-stroke');
  if (chip.channels.length > 0 || isSaid) return [];
  return [
    toFinding('no-channel', 'blocker', {
      message: 'the drawing has no channel: there is nothing to compute',
      fix: 'draw each channel as a visible stroke along its middle, with its width as the stroke width; look whether their layers are hidden, dashed, or named under ignore: or outside the outline: of the run sheet',
      at: null,
      names: [],
    }),
  ];
}
