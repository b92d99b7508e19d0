import { assembleChip } from '../chip/assemble.ts';
import { DEFAULT_MAX_REYNOLDS } from '../chip/defaults.ts';
import { sizesByPixel } from '../chip/pixel-sizes.ts';
import type { Channel, Chip, Port } from '../chip/types.ts';
import type { Layout } from '../layout/types.ts';
import { isPattern, layerKey } from '../runsheet/names.ts';
import { formatMm } from '../runsheet/shown.ts';
import { utf8Length } from '../utf8-length.ts';
import { type PillarField, pillarFields } from './pillars.ts';
import { type LayerPair, NO_LAYER, proposePlanes } from './planes.ts';
import { commentText, isDraftable, keyText } from './yaml-text.ts';

export interface DraftInput {
  readonly layout: Layout;
  /** The layout's file name, without folders. */
  readonly file: string;
  /** Name and version of this program. */
  readonly tool: string;
}

/** A run sheet larger than 1 MB is not read, so a draft is not made that large. */
const MOST_BYTES = 900_000;

/**
 * A first run sheet for a layout: every layer, port and channel found, what must be filled in marked "fill in", a comment for each key.
 * Valid as it stands: a check answers it with what is still missing. Names are quoted where they need be; those that no run sheet can hold are left as comments.
 * @throws InputError as assembleChip, for a layout that nothing can be made of
 */
export function draftRunSheet({ layout, file, tool }: DraftInput): string {
  const { chip } = assembleChip({ layout, sheet: null, file });
  const fields = pillarFields(chip);
  const pillars = new Set(fields.flatMap((field) => field.pillars));
  const ports = chip.ports.filter((port) => !pillars.has(port));
  const drawn: Drawn = { chip, groupsOf: groupsByOrdinal(layout), fields, pillars, ports };
  const before = [...head(drawn, layout, tool), ...layerLines(drawn), ...portLines(drawn)];
  const after = rest(drawn);
  const whole = [...before, ...channelLines(drawn), ...after].join('\n');
  if (utf8Length(whole) <= MOST_BYTES) return `${whole}\n`;
  const short = [
    ...before,
    'channels: # the drawing has too many to list here; give windows to those that need them, * matches any run of characters',
    ...WINDOW_EXAMPLE,
    ...after,
  ].join('\n');
  return `${short}\n`;
}

/** What was drawn, with circles that look like pillars apart from ports. */
interface Drawn {
  readonly chip: Chip;
  readonly groupsOf: GroupsOf;
  readonly fields: readonly PillarField[];
  /** All pillars of the fields. */
  readonly pillars: ReadonlySet<Port>;
  readonly ports: readonly Port[];
}

/** Named groups round the drawn thing of that ordinal, outermost first. */
type GroupsOf = (ordinal: number) => readonly string[];

/** By ordinal, not by place in the list: shapes that draw nothing have an ordinal too, and no item. */
function groupsByOrdinal({ items }: Layout): GroupsOf {
  const byOrdinal = new Map(items.map(({ ordinal, groups }) => [ordinal, groups]));
  return (ordinal) => byOrdinal.get(ordinal) ?? [];
}

function head(drawn: Drawn, layout: Layout, tool: string): string[] {
  const { chip } = drawn;
  const { edge } = chip;
  const unit = layout.unitStated
    ? `# unit: 1 mm # size of one unit of the drawing; not needed, the drawing says it (${commentText(layout.unitReason)})`
    : `unit: # fill in: size of one unit of the drawing, for example 1 mm; the drawing does not say it: ${sizesByPixel(chip)}`;
  const sides =
    edge === null || !layout.unitStated
      ? '# size: [76 mm, 26 mm] # outer size of the chip, checked against the chip edge'
      : `# size: [${formatMm(edge.sidesMm[0])} mm, ${formatMm(edge.sidesMm[1])} mm] # as drawn; with it the scale is checked`;
  return [
    `# Run sheet of ${commentText(chip.file)}, drafted by ${commentText(tool)}.`,
    '# Lines that say "fill in" wait for a value; a line that begins with # is not read.',
    '# Every quantity has a unit: 50 um, 12 kPa, 2 uL/min, 0.3 Pa, 37 degC, 5 %.',
    '',
    'title: # fill in: what the report is headed with',
    'drawing: # printed, not interpreted',
    '#  number: C-114',
    '#  revision: A',
    '#  drawn_by: AM',
    '',
    unit,
    sides,
    edge === null
      ? 'outline: # fill in: name of the shape that is the chip edge; without one the edge rules are not run'
      : `# outline: ${edgeName(edge.name)} # the chip edge found; when given here, only what lies inside it is read`,
    portsLayerLine(drawn),
    '# ignore: ["dim-*"] # names of elements or layers that are not read; * matches any run of characters',
    '# join_within: 1 um # slack of every "on" and "inside" when channels are joined',
    '# joints: resolved # corners and junctions add resistance of their own; or centreline: they do not',
    '',
    'process: # fill in: cast elastomer, etched glass, etched silicon, milled thermoplastic or moulded thermoplastic; gives usual limits',
    'fluid: water # or { viscosity: 0.94 mPa s, density: 1003 kg/m^3 }, or { glycerol: 30 % by mass }',
    'temperature: 25 degC # of the chip; fill in: the one it is run at',
    '',
  ];
}

function edgeName(name: string): string {
  return isDraftable(name) ? keyText(name) : '…';
}

function portsLayerLine({ groupsOf, fields, pillars, ports }: Drawn): string {
  const names = new Set(ports.map(({ ordinal }) => groupsOf(ordinal).at(-1) ?? ''));
  const [only] = names;
  if (names.size !== 1 || only === undefined || only === '' || !isDraftable(only)) {
    return '# ports_layer: holes # only circles of this layer are ports';
  }
  const isApart = [...pillars].every(({ ordinal }) =>
    groupsOf(ordinal).every((group) => layerKey(group) !== layerKey(only)),
  );
  if (pillars.size > 0 && isApart) {
    const where = fields.map(({ channel }) => commentText(channel.name)).join(', ');
    return `ports_layer: ${keyText(only)} # only circles of this layer are ports; assumed, for the ${pillars.size} circles within ${where} look like pillars`;
  }
  const all = pillars.size > 0 ? 'all that look like ports' : 'all that were found';
  return `# ports_layer: ${keyText(only)} # only circles of this layer are ports; ${all} lie in it`;
}

/** A layer as drawn: the outermost named group round its channels. */
interface DrawnLayer {
  readonly name: string;
  readonly inner: Set<string>;
  channels: number;
  /** Channels whose depth the drawing gives. */
  withDepth: number;
}

function layerLines({ chip, groupsOf }: Drawn): string[] {
  const layers = new Map<string, DrawnLayer>();
  let loose = 0;
  for (const { ordinal, depthOrigin } of chip.channels) {
    const groups = groupsOf(ordinal);
    if (groups.length === 0) {
      loose++;
      continue;
    }
    const key = layerKey(groups[0]);
    const layer = layers.get(key) ?? { name: groups[0], inner: new Set<string>(), channels: 0, withDepth: 0 };
    layers.set(key, layer);
    layer.channels++;
    if (depthOrigin === 'drawing') layer.withDepth++;
    const innermost = groups[groups.length - 1];
    if (layerKey(innermost) !== key) layer.inner.add(innermost);
  }
  const needed =
    loose > 0 ? `; ${counted(loose, 'channel')} ${loose === 1 ? 'lies' : 'lie'} in no layer` : '';
  const keys = [...layers.keys()];
  const layerOf = (channel: number): number => {
    const groups = groupsOf(chip.channels[channel].ordinal);
    return groups.length === 0 ? NO_LAYER : keys.indexOf(layerKey(groups[0]));
  };
  const drawnName = (layer: number): string => layers.get(keys[layer])?.name ?? '';
  const planes = proposePlanes(chip, layerOf, (layer) => layer !== NO_LAYER && isDraftable(drawnName(layer)));
  const nameOf = (layer: number): string =>
    layer === NO_LAYER ? 'the strokes in no layer' : commentText(drawnName(layer));
  return [
    `depth: # fill in: etch depth of every layer that is given none below, for example 50 um${needed}`,
    'layers: # depth of each layer; also profile: isotropic (wet-etched), plane: top, or the word ignore for a layer that is not read',
    ...planes.passing.map((pair) => `  # ${passingText(pair, nameOf)}`),
    ...[...layers.values()].map((layer, i) => layerLine(layer, planes.of.get(i) ?? null)),
    '',
  ];
}

function passingText({ a, b, count }: LayerPair, nameOf: (layer: number) => string): string {
  return `assumed: ${nameOf(a)} and ${nameOf(b)} cross in ${counted(count, 'place')} where neither ends, so they are taken to pass over each other; if they are meant to join there, take plane: out`;
}

const MOST_INNER = 8;

function layerLine({ name, inner, channels, withDepth }: DrawnLayer, plane: string | null): string {
  const groups = [...inner].slice(0, MOST_INNER).map(commentText);
  const holds =
    groups.length === 0
      ? ''
      : `, in its groups ${groups.join(', ')}${inner.size > MOST_INNER ? ' …' : ''} (which may be named here to differ)`;
  const drawn = withDepth === 0 ? '' : `; the drawing gives ${withDepth} of them a depth, which goes before`;
  const about = `${counted(channels, 'channel')}${holds}${drawn}`;
  if (!isDraftable(name))
    return `# ${commentText(name)}: this name can't stand in a run sheet; rename the layer: ${about}`;
  return plane === null
    ? `  ${keyText(name)}: {} # fill in: { depth: 50 um }; ${about}`
    : `  ${keyText(name)}: { plane: ${plane} } # plane assumed; fill in: { depth: 50 um, plane: ${plane} }; ${about}`;
}

function portLines({ groupsOf, fields, ports }: Drawn): string[] {
  const lines = ports.map(({ name, drawnName, xMm, yMm, radiusMm }) => {
    const place = `${formatMm(2 * radiusMm)} mm hole at (${formatMm(xMm)}, ${formatMm(yMm)}) mm`;
    if (drawnName === null)
      return `# ${commentText(name)}: ${place} has no name; give it one in the drawing (data-name, label, title or id), then set it here`;
    if (!isDraftable(drawnName))
      return `# ${commentText(drawnName)}: ${place}: this name can't stand in a run sheet; rename it`;
    return `  ${keyText(drawnName)}: {} # fill in; ${place}`;
  });
  return [
    'ports: # { pressure: 12 kPa }, { flow: 2 uL/min } (into the chip is positive), { head: 40 mm }, open or sealed; * matches any run of characters',
    '  # with tubing: { pressure: 12 kPa, tubing: { bore: 0.5 mm, length: 300 mm }, expect: in }; several pieces: tubing: [{ … }, { …, temperature: 22 degC }]',
    ...lines,
    ...fields.map((field) => pillarLine(field, groupsOf)),
    '',
  ];
}

function pillarLine({ channel, pillars }: PillarField, groupsOf: GroupsOf): string {
  const sizes = [...new Set(pillars.map(({ radiusMm }) => formatMm(2 * radiusMm)))];
  const layers = [...new Set(pillars.flatMap(({ ordinal }) => groupsOf(ordinal).at(-1) ?? []))];
  const inLayers = layers.length === 0 ? '' : ` (in ${layers.slice(0, 4).map(commentText).join(', ')})`;
  const named = drawnNames(pillars);
  const names =
    named.length === 0
      ? ''
      : `: ${named.slice(0, 4).map(commentText).join(', ')}${named.length > 4 ? ' …' : ''}`;
  return `# ${counted(pillars.length, 'circle')} of ${sizes.slice(0, 4).join(', ')} mm${inLayers} within ${commentText(channel.name)}, where no channel ends, are taken for pillars and not listed${names}; ports_layer: tells ports from pillars`;
}

const WINDOW_EXAMPLE = [
  '#  "lane-*": { wall_shear: { min: 0.05 Pa, max: 0.5 Pa }, residence_time: { max: 60 s }, flow: { min: 1 uL/min } }',
  '#  "branch-*": { even: 5 % } # the flows of all channels of this name within ±5 % of their mean',
];

function channelLines({ chip, groupsOf }: Drawn): string[] {
  const named = new Map<string, Channel[]>();
  let unnamed = 0;
  for (const channel of chip.channels) {
    if (channel.drawnName === null) unnamed++;
    else named.set(channel.drawnName, [...(named.get(channel.drawnName) ?? []), channel]);
  }
  const lines = [...named].map(([name, channels]) => {
    const widths = [...new Set(channels.map(({ drawnWidthMm }) => formatMm(drawnWidthMm)))];
    const layers = [...new Set(channels.flatMap(({ ordinal }) => groupsOf(ordinal)[0] ?? []))];
    const about = [
      channels.length === 1 ? '' : `${channels.length} of this name`,
      `${widths.slice(0, 4).join(', ')} mm wide`,
      layers.length === 0 ? '' : `in ${layers.slice(0, 4).map(commentText).join(', ')}`,
    ].filter((text) => text !== '');
    const comment = about.join(', ');
    if (!isDraftable(name) || isPattern(name))
      return `# ${commentText(name)}: ${comment}: this name can't stand in a run sheet; rename it to give it windows`;
    return `  ${keyText(name)}: {} # ${comment}`;
  });
  return [
    'channels: # windows that a channel must keep, where it has any; * in a name matches any run of characters',
    ...WINDOW_EXAMPLE,
    ...lines,
    ...(unnamed === 0
      ? []
      : [
          `# ${counted(unnamed, 'channel')} ${unnamed === 1 ? 'has' : 'have'} no name; name in the drawing those that need a window`,
        ]),
    '',
  ];
}

function rest({ chip, ports }: Drawn): string[] {
  const by = keyText(drawnNames(ports).find(isDraftable) ?? 'feed');
  const channel = drawnNames(chip.channels).find((name) => isDraftable(name) && !isPattern(name));
  const on = keyText(channel ?? 'lane-1');
  return [
    'targets: # what the command pump must reach, each by the setting of one port',
    `#  - { channel: ${on}, wall_shear: 0.3 Pa, at: mean, by: ${by} }`,
    'pump_limits: # what each pump can do',
    `#  ${by}: { max_pressure: 200 kPa, max_flow: 1 mL/min }`,
    '',
    `limits: # go before those that the process implies; max_reynolds is ${DEFAULT_MAX_REYNOLDS} unless given`,
    '#  min_width: 20 um # narrowest channel the process makes',
    '#  min_wall: 40 um # thinnest wall it makes',
    '#  max_width_to_depth: 10 # widest roof, in depths',
    '#  max_depth_to_width: 2 # deepest channel, in widths',
    '#  edge_margin: 1 mm # nearest to the chip edge',
    '#  port_gap: 1 mm # nearest that two rims may come',
    '#  port_diameter: [0.3 mm, 8 mm] # smallest and largest circle that is a port',
    '#  port_grid: 1.5 mm # pitch of the grid that ports must lie on',
    '#  max_pressure: 150 kPa # highest the chip may see',
    '#  min_pressure: -30 kPa # lowest',
    '#  max_reynolds: 1000 # highest that counts as laminar',
    '#  min_corner_angle: 30 deg # sharpest inside angle',
    '#  stiffness: 1.5 MPa # of the material, for walls and roofs that give',
    'tolerances: # how far fabrication and running vary, for the command spread; 2 sigma, or { limit: … }',
    '#  depth: 5 % # common to a layer, independent between layers',
    '#  depth_common: 3 % # a part common to all layers, beside their own',
    '#  width: 2 um # common to the mask; or width_bias for that and width_own for each channel by itself',
    '#  temperature: 1 degC # of the chip',
    '#  viscosity: 3 % # of the fluid beyond what temperature does',
    '#  pressure: 1 % # of every port given one',
    '#  flow: 1 % # of every port given one',
    '#  bore: 10 um # of all tubing',
    '# cases: { warm: { temperature: 37 degC } } # each is this sheet with its changes, solved and judged on its own',
    '# show: { flow: uL/min, pressure: mbar, wall_shear: dyn/cm^2 } # units on screen and paper',
    'accept: # findings that someone has looked at and takes on',
    '#  - { rule: thin-wall, at: lane-1, up_to: 35 um, because: "measured on the last batch", by: AM, on: 2026-05-04 }',
  ];
}

function drawnNames(things: readonly (Port | Channel)[]): string[] {
  return things.flatMap(({ drawnName }) => drawnName ?? []);
}

function counted(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? '' : 's'}`;
}
