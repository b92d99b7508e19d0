import * as v from 'valibot';
import { RESULT_VERSION } from '../version.ts';
import type { Quantity } from './quantities.ts';

/**
 * The one typed description of the result: the TypeScript types (`result-rows.ts`), the JSON Schema, the CSV columns, and heads and
 * units of tables for people all come from here. Keys carry their unit; a number that does not exist is null.
 */

const text = v.string();
const sha256 = v.pipe(text, v.regex(/^[0-9a-f]{64}$/));
const count = (description: string) =>
  v.pipe(v.number(), v.integer(), v.minValue(0), v.description(description));
const number = (description: string) => v.pipe(v.number(), v.description(description));
const maybe = (description: string) => v.pipe(v.nullable(v.number()), v.description(description));
/** Numbers that people read too: each with what it measures, and its head in tables. */
const size = (kind: Quantity['kind']) => (description: string, head: string) =>
  v.pipe(v.number(), v.description(description), v.metadata({ kind, head }));
const quantity = (kind: Quantity['kind']) => (description: string, head: string, second?: string) =>
  v.pipe(v.nullable(v.number()), v.description(description), v.metadata({ kind, head, second }));
const drawnMm = size('drawn_mm');
const length = size('length');
const flow = quantity('flow');
const pressure = quantity('pressure');
const shear = quantity('wall_shear');
const time = quantity('residence_time');
const across = quantity('cross_length');
const velocity = quantity('velocity');
const resistance = quantity('resistance')('Pressure drop per flow', 'resistance');
const floorMean = shear('Wall shear on the floor, mean over its width', 'floor mean');
const floorPeak = shear('Wall shear on the floor, in its middle', 'floor peak');

export const toolSchema = v.strictObject({
  name: text,
  version: text,
  result_version: v.pipe(v.literal(RESULT_VERSION), v.description('Version of this format')),
});

export const layoutSchema = v.strictObject({
  file: v.pipe(text, v.description('File name of the layout')),
  sha256,
  width_mm: maybe('Width of the drawing'),
  height_mm: maybe('Height of the drawing'),
  unit_mm: number('Millimetres per unit of the drawing'),
  ignored: v.pipe(v.record(text, count('How many')), v.description('What was drawn and not read, by kind')),
});

export const runSheetSchema = v.nullable(v.strictObject({ file: text, sha256 }));

export const fluidSchema = v.strictObject({
  name: text,
  temperature_c: number('Temperature in the chip, degrees Celsius'),
  viscosity_pa_s: number('Dynamic viscosity'),
  density_kg_m3: number('Density'),
});

const verdictSchema = v.pipe(
  v.picklist(['ready', 'hold']),
  v.description('ready: no blocker; hold: at least one. Read it with the counts'),
);

export const countsSchema = v.strictObject({
  channels: count('Channels with a width'),
  ports: count('Ports'),
  nodes: count('Nodes of the network'),
  reaches: count('Reaches of the network'),
  segments: count('Segments of the network'),
  blockers: count('Findings that hold the chip'),
  cautions: count('Findings to weigh'),
  notes: count('Findings to know'),
  accepted: count('Findings that someone has taken on in the run sheet'),
  rules_not_run: count('Rules that could not be checked'),
});

export const portSchema = v.strictObject({
  name: text,
  x_mm: drawnMm('Centre, drawing coordinates in mm', 'x in drawing'),
  y_mm: drawnMm('Centre, drawing coordinates in mm, y down', 'y in drawing'),
  diameter_mm: drawnMm('Diameter of the hole', 'diameter'),
  condition: v.picklist(['pressure', 'flow', 'head', 'open', 'sealed', 'unset']),
  pressure_pa: pressure('Gauge pressure in the chip at the port', 'in the chip'),
  supply_pressure_pa: pressure(
    'Gauge pressure at the far end of the tubing, or the port without tubing',
    'at the supply',
  ),
  flow_m3_s: flow('Flow into the chip; negative leaves it', 'flow into chip'),
  tubing_volume_m3: quantity('volume')('Volume of all tubing pieces; null without tubing', 'tubing holds'),
  tubing_time_s: time('Tubing volume over flow; null without tubing or flow', 'time in tubing'),
  joint_flow_share: maybe('How far joints that were not resolved could move the flow, as a share of it'),
  joint_pressure_share: maybe('How far they could move the pressure in the chip, as a share of it'),
});

export const nodeSchema = v.strictObject({
  name: text,
  kind: v.picklist(['port', 'junction', 'end', 'step']),
  x_mm: number('Drawing coordinates in mm'),
  y_mm: number('Drawing coordinates in mm, y down'),
  pressure_pa: maybe('Gauge pressure'),
});

export const reachSchema = v.strictObject({
  name: text,
  channel: text,
  layer: v.pipe(v.nullable(text), v.description('null for a stroke in no layer')),
  from: v.pipe(text, v.description('Node at the start, in drawn direction')),
  to: v.pipe(text, v.description('Node at the end, in drawn direction')),
  width_m: across('Width of the rectangular duct', 'width'),
  depth_m: across('Depth of the rectangular duct', 'depth'),
  drawn_length_m: length('Centreline length between the nodes, wells left out', 'drawn'),
  length_m: length('Duct length: what resists flow after the joining rules', 'duct'),
  joint_length_m: length('Signed length that resolved joints add, within length_m', 'joints'),
  resistance_pa_s_m3: resistance,
  flow_m3_s: flow('Flow, positive from → to', 'flow'),
  pressure_drop_pa: pressure('Pressure at from minus pressure at to', 'drop'),
  mean_velocity_m_s: velocity('Flow over cross-section, magnitude', 'v mean'),
  peak_velocity_m_s: velocity('Velocity on the axis, magnitude', 'v peak'),
  reynolds: quantity('number')('Reynolds number on the hydraulic diameter', 'Re'),
  dean: maybe('Dean number at the tightest bend; null on a straight reach'),
  entrance_length_m: maybe('Length over which the velocity profile develops'),
  wall_shear_floor_mean_pa: floorMean,
  wall_shear_floor_peak_pa: floorPeak,
  wall_shear_side_mean_pa: shear('Wall shear on a side, mean over its height', 'side mean'),
  wall_shear_side_peak_pa: shear('Wall shear on a side, in its middle', 'side peak'),
  floor_share_inside_window: quantity('share')(
    'Share of the floor width whose shear lies in the wall_shear window; null without window',
    'floor in',
    'window',
  ),
  residence_time_s: time('Volume over flow', 'time mean'),
  fastest_time_s: time('Length over peak velocity', 'fastest'),
  volume_m3: maybe('Width × depth × length'),
  joint_flow_share: quantity('bound')(
    'How far joints that were not resolved could move the flow, as a share of it',
    'joints move',
    'it by ±',
  ),
});

export const segmentSchema = v.strictObject({
  name: text,
  reach: text,
  x1_mm: drawnMm('Start, drawing coordinates in mm', 'x₁'),
  y1_mm: drawnMm('Start, drawing coordinates in mm, y down', 'y₁'),
  x2_mm: drawnMm('End, drawing coordinates in mm', 'x₂'),
  y2_mm: drawnMm('End, drawing coordinates in mm, y down', 'y₂'),
  length_m: length('Duct length', 'length'),
  resistance_pa_s_m3: resistance,
  pressure_drop_pa: pressure('Pressure at the start minus pressure at the end', 'drop'),
  wall_shear_floor_mean_pa: floorMean,
  wall_shear_floor_peak_pa: floorPeak,
  residence_time_s: time('Volume over flow', 'time'),
});

export const findingSchema = v.strictObject({
  rule: text,
  severity: v.picklist(['blocker', 'caution', 'note']),
  message: text,
  fix: text,
  x_mm: maybe('Place, drawing coordinates in mm'),
  y_mm: maybe('Place, drawing coordinates in mm, y down'),
  names: v.array(text),
  measured: maybe('In the unit given'),
  limit: maybe('In the unit given'),
  unit: v.nullable(text),
  accepted: v.nullable(
    v.strictObject({
      because: text,
      by: text,
      on: text,
      up_to: maybe('Ceiling up to which it is accepted, in the unit given'),
    }),
  ),
});

export const notRunSchema = v.strictObject({ rule: text, why: text });

export const balanceSchema = v.strictObject({
  worst_imbalance: v.pipe(
    v.number(),
    v.description('Largest |ΣQ| at an inner node, relative to what flows through it'),
  ),
  worst_node: v.nullable(text),
});

const end = maybe('Open ends are null');

export const pumpSchema = v.strictObject({
  targets: v.array(
    v.strictObject({
      channel: v.exactOptional(text),
      port: v.exactOptional(text),
      node: v.exactOptional(text),
      reach: v.nullable(text),
      quantity: v.picklist(['flow', 'wall_shear', 'velocity', 'residence_time', 'pressure']),
      at: v.nullable(v.picklist(['mean', 'peak'])),
      wanted: v.union([
        v.number(),
        v.strictObject({ min: v.nullable(v.number()), max: v.nullable(v.number()) }),
      ]),
      reached: v.nullable(v.number()),
      unit: text,
      by: text,
    }),
  ),
  settings: v.array(
    v.strictObject({
      port: text,
      pressure_pa: maybe('In the chip at the port'),
      supply_pressure_pa: maybe('At the far end of the tubing'),
      flow_m3_s: maybe('Into the chip'),
      within_limits: v.nullable(v.boolean()),
      range: v.exactOptional(
        v.pipe(
          v.strictObject({
            supply_pressure_min_pa: end,
            supply_pressure_max_pa: end,
            flow_min_m3_s: end,
            flow_max_m3_s: end,
          }),
          v.description('For a window: what of this port alone keeps it'),
        ),
      ),
    }),
  ),
});

/** Which number is spoken of. */
const output = {
  on: v.picklist(['port', 'reach', 'channel', 'node']),
  name: text,
  quantity: text,
  unit: text,
};

export const spreadSchema = v.strictObject({
  draws: count('Draws in the sample'),
  draws_asked: count('Draws asked for; more than draws when the sample was stopped before its end'),
  draws_outside_model: count(
    'Draws of which nothing can be computed (a duct closed, a temperature that no data cover): they count as not good',
  ),
  seed: v.pipe(v.number(), v.integer()),
  outputs: v.array(
    v.strictObject({
      ...output,
      nominal: maybe('Without any tolerance'),
      mean: maybe('Of the sample'),
      sd: maybe('Standard deviation of the sample'),
      p2_5: maybe('2.5 % of the draws lie below'),
      p97_5: maybe('97.5 % of the draws lie below'),
      linear_sd: maybe('Standard deviation to first order, by exact derivatives'),
      linear: v.pipe(
        v.nullable(v.boolean()),
        v.description('Whether sample and first order agree; null where one is missing'),
      ),
      kept: maybe(
        'Share of the draws that keep what a window or limit asks of it; null where nothing is asked',
      ),
      shares: v.pipe(
        v.record(text, v.number()),
        v.description('Share of the first-order variance by tolerance'),
      ),
    }),
  ),
  outputs_left_out: count('Outputs for which there was no room; their windows are judged all the same'),
  yield: maybe(
    'Share of the draws in which all windows and limits hold; null when a window can not be judged',
  ),
  yield_low: maybe('Lower end of its 95 % interval'),
  yield_high: maybe('Upper end of its 95 % interval'),
  even: v.pipe(
    v.record(text, v.nullable(v.number())),
    v.description(
      'Share of the draws in which the channels that are to be even are so, by their name in the run sheet',
    ),
  ),
  not_judged: v.array(text),
  worst_corner: v.nullable(
    v.strictObject({
      ...output,
      limit: number('The limit with least room, in standard deviations'),
      room_sd: number('Standard deviations between the nominal value and the limit; below 0 beyond it'),
      value: maybe('Of the number with every tolerance at its worst end'),
      kept: v.boolean(),
      at: v.pipe(
        v.record(text, v.picklist(['upper', 'lower', 'each its own'])),
        v.description('End at which each tolerance stands there'),
      ),
    }),
  ),
});

/** What concerns one case: everything but tool, layout and run sheet. */
const casePart = {
  fluid: fluidSchema,
  verdict: verdictSchema,
  counts: countsSchema,
  ports: v.array(portSchema),
  nodes: v.exactOptional(v.array(nodeSchema)),
  reaches: v.exactOptional(v.array(reachSchema)),
  segments: v.exactOptional(v.array(segmentSchema)),
  findings: v.array(findingSchema),
  not_run: v.array(notRunSchema),
  balance: balanceSchema,
  pump: v.exactOptional(pumpSchema),
  spread: v.exactOptional(spreadSchema),
};

const head = { tool: toolSchema, layout: layoutSchema, run_sheet: runSheetSchema };

export const singleSchema = v.strictObject({ ...head, ...casePart });
export const casesSchema = v.strictObject({
  ...head,
  verdict: verdictSchema,
  cases: v.array(v.strictObject({ case: text, ...casePart })),
});
/** The JSON document, with or without cases. `nodes`, `reaches`, `segments` are there as `--detail` asks. */
export const resultSchema = v.union([singleSchema, casesSchema]);

/** CSV columns, in the order of the JSON keys. */
export const reachColumns = keysOf(reachSchema.entries);
export const segmentColumns = keysOf(segmentSchema.entries);
export const outputColumns = keysOf(spreadSchema.entries.outputs.item.entries);

function keysOf<Entries extends object>(entries: Entries): readonly (keyof Entries & string)[] {
  return Object.keys(entries) as (keyof Entries & string)[]; // the entries' own keys
}

type ShownKey<Entries> = {
  [Key in keyof Entries]: Entries[Key] extends {
    readonly pipe: readonly [unknown, unknown, { readonly metadata: Quantity }];
  }
    ? Key
    : never;
}[keyof Entries];

export const portQuantity = (key: ShownKey<typeof portSchema.entries>): Quantity =>
  portSchema.entries[key].pipe[2].metadata;
export const reachQuantity = (key: ShownKey<typeof reachSchema.entries>): Quantity =>
  reachSchema.entries[key].pipe[2].metadata;
export const segmentQuantity = (key: ShownKey<typeof segmentSchema.entries>): Quantity =>
  segmentSchema.entries[key].pipe[2].metadata;
