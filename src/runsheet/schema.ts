/**
 * The run sheet, key by key: the one source of what may be written. It checks a tree of texts (YAML read as text),
 * hands on SI values, and is also what the JSON Schema for editors is made from.
 */
import * as v from 'valibot';
import {
  byShape,
  type Complaint,
  changed,
  checked,
  described,
  type Field,
  hint,
  keys,
  list,
  named,
  pair,
  quantity,
  scalar,
  text,
  tolerance,
  toleranceByName,
  word,
} from './fields.ts';
import { RULE_MEASURES, type RuleMeasure, UNACCEPTABLE_RULES } from './measures.ts';
import { nearest } from './nearest.ts';
import { quote } from './quote.ts';
import type {
  AcceptEntry,
  ConcentrationTarget,
  FluidSpec,
  PortCondition,
  ProcessName,
  TargetEntry,
  TargetQuantity,
  Window,
} from './types.ts';
import { describeQuantity, parseQuantity, type Quantity, QuantityError, unitFactor } from './units.ts';

const isComplaint = <T>(value: T | Complaint): value is Complaint =>
  typeof value === 'object' && value !== null && 'message' in value;

const PROCESSES: readonly ProcessName[] = [
  'cast elastomer',
  'etched glass',
  'etched silicon',
  'milled thermoplastic',
  'moulded thermoplastic',
];

const PORT_EXAMPLE = '{ pressure: 12 kPa }';
const SHEAR_EXAMPLE = '{ min: 0.05 Pa, max: 0.5 Pa }';
const CONCENTRATION_EXAMPLE = '{ min: 2, max: 4, over: 95 % }';
const SOLUTE_EXAMPLE = '{ diffusion: 5e-10 m^2/s, unit: uM }';
const TARGET_EXAMPLE = '{ channel: lane-1, wall_shear: 0.3 Pa, by: feed }';

const length = (noun: string, example: string, description: string): Field<number> =>
  quantity('length', { bound: 'above 0', noun, example, description });

const depth = (description: string): Field<number> => length('a depth', '50 um', description);

const ratio = (noun: string, example: string, description: string): Field<number> =>
  quantity('ratio', { bound: 'above 0', noun, example, description });

/** Above 0 % and at most 100 %, as a fraction of 1. */
const share = (example: string, description: string): Field<number> =>
  scalar(example, { description, examples: [example] }, (written) => {
    const value = parseQuantity(written, 'share', '%');
    if (value > 0 && value <= 1) return value;
    throw new QuantityError(`${quote(written)} is not above 0 % and at most 100 %; ${hint(example)}`);
  });

const concentration = (description: string): Field<number> =>
  quantity('concentration', { bound: 'not below 0', description });

/** Something for each solute, by its name. */
const bySolute = <T>(value: Field<T>, example: string): Field<Readonly<Record<string, T>>> =>
  checked(named(value, example), (given) =>
    Object.keys(given).length > 0 ? null : { message: `names no solute; ${hint(example)}` },
  );

const temperature = (description: string): Field<number> =>
  quantity('temperature', { bound: 'any', example: '37 degC', description });

const pressure = (example: string, description: string): Field<number> =>
  quantity('pressure', { bound: 'any', example, description });

/* ---------- fluid ---------- */

const glycerol: Field<FluidSpec> = scalar(
  '30 % by mass',
  {
    description: 'Share of glycerol in water, by mass or by volume.',
    examples: ['30 % by mass', '20 % by volume'],
  },
  (written): FluidSpec => {
    const match = /^(.*%)\s+by\s+(mass|volume)\s*$/.exec(written);
    if (match === null) {
      throw new QuantityError(
        `${quote(written)} is not a share by mass or by volume; ${hint('30 % by mass')}`,
      );
    }
    const share = parseQuantity(match[1]!, 'share');
    if (share < 0 || share > 1) {
      throw new QuantityError(`${quote(written)} is not between 0 % and 100 %; ${hint('30 % by mass')}`);
    }
    return { kind: 'glycerol', share, by: match[2] === 'mass' ? 'mass' : 'volume' };
  },
);

const FLUID_EXAMPLE = '{ viscosity: 0.94 mPa s, density: 1003 kg/m^3 }';

const fluid: Field<FluidSpec> = byShape<FluidSpec>(
  {
    text: scalar(
      'water',
      { description: 'Water, or { viscosity, density }, or { glycerol: 30 % by mass }.', enum: ['water'] },
      (written): FluidSpec => {
        if (written.trim() === 'water') return { kind: 'water' };
        throw new QuantityError(
          `${quote(written)} is not a fluid known here; write "water", or for example ${FLUID_EXAMPLE}`,
        );
      },
    ),
    map: changed(
      keys(
        {
          viscosity: v.optional(
            quantity('viscosity', {
              bound: 'above 0',
              description: 'Dynamic viscosity; temperature is then ignored.',
            }),
          ),
          density: v.optional(quantity('density', { bound: 'above 0', description: 'Density.' })),
          glycerol: v.optional(glycerol),
        },
        FLUID_EXAMPLE,
      ),
      ({ viscosity, density, glycerol: mixture }): FluidSpec | Complaint => {
        if (mixture !== undefined) {
          if (viscosity === undefined && density === undefined) return mixture;
          return {
            message: `has glycerol and a viscosity or density; keep one kind; ${hint('{ glycerol: 30 % by mass }')}`,
          };
        }
        if (viscosity === undefined) return { message: `needs the key viscosity; ${hint(FLUID_EXAMPLE)}` };
        if (density === undefined) return { message: `needs the key density; ${hint(FLUID_EXAMPLE)}` };
        return { kind: 'custom', viscosityPaS: viscosity, densityKgM3: density };
      },
      isComplaint,
    ),
  },
  hint('water'),
);

/* ---------- layers, ports, channels ---------- */

interface LayerKeys {
  readonly depth?: number | undefined;
  readonly profile?: 'rectangle' | 'isotropic' | undefined;
  readonly plane?: string | undefined;
}

const layer = byShape<LayerKeys | 'ignore'>(
  {
    text: word(['ignore'], 'Nothing of this layer is read.'),
    map: keys(
      {
        depth: v.optional(depth('Etch depth of the layer.')),
        profile: v.optional(
          word(
            ['rectangle', 'isotropic'],
            'Cross-section; isotropic is wet-etched: the drawn width is the mask’s.',
          ),
        ),
        plane: v.optional(text('Channels join only within one plane; "chip" when not given.', 'top')),
      },
      '{ depth: 120 um }',
    ),
  },
  hint('{ depth: 120 um }'),
);

const tubingPiece = keys(
  {
    bore: length('a bore', '0.5 mm', 'Inner diameter.'),
    length: length('a length', '300 mm', 'Length of the piece.'),
    temperature: v.optional(temperature('Temperature of the piece; the chip’s when not given.')),
  },
  '{ bore: 0.5 mm, length: 300 mm }',
);

type TubingKeys = v.InferOutput<typeof tubingPiece>;

const tubing: Field<readonly TubingKeys[]> = byShape<readonly TubingKeys[]>(
  {
    text: v.pipe(
      word(['none'], 'No tubing: takes away in a case what the sheet gives.'),
      v.transform((): readonly TubingKeys[] => []),
    ),
    map: v.pipe(
      tubingPiece,
      v.transform((piece) => [piece]),
    ),
    list: v.array(tubingPiece),
  },
  hint('{ bore: 0.5 mm, length: 300 mm }'),
);

/** What the schema hands on for a port. */
export interface PortValues {
  readonly condition: PortCondition;
  readonly tubing: readonly TubingKeys[];
  readonly expect: 'in' | 'out' | null;
  readonly concentration: Readonly<Record<string, number>> | null;
}

const port = byShape<PortValues>(
  {
    text: v.pipe(
      word(['open', 'sealed'], 'An open well (0 Pa) or a sealed one.'),
      v.transform(
        (kind): PortValues => ({ condition: { kind }, tubing: [], expect: null, concentration: null }),
      ),
    ),
    map: changed(
      keys(
        {
          pressure: v.optional(pressure('12 kPa', 'Gauge pressure, at the far end of the tubing.')),
          flow: v.optional(
            quantity('flow', { bound: 'any', description: 'Flow; into the chip is positive.' }),
          ),
          head: v.optional(
            quantity('length', {
              bound: 'any',
              noun: 'a head',
              example: '40 mm',
              description: 'Liquid level of an open reservoir above the chip, may be negative.',
            }),
          ),
          tubing: v.optional(described(tubing, 'One piece, or several from the far end to the chip.')),
          expect: v.optional(word(['in', 'out'], 'What the port is for: fluid goes in or comes out.')),
          concentration: v.optional(
            described(
              bySolute(concentration('In the solute’s own unit.'), '{ drug: 10 }'),
              'What of each solute the fluid of this port carries; 0 of those not named.',
            ),
          ),
        },
        PORT_EXAMPLE,
      ),
      (given): PortValues | Complaint => {
        const conditions: PortCondition[] = [];
        if (given.pressure !== undefined) conditions.push({ kind: 'pressure', pressurePa: given.pressure });
        if (given.flow !== undefined) conditions.push({ kind: 'flow', flowM3s: given.flow });
        if (given.head !== undefined) conditions.push({ kind: 'head', headM: given.head });
        if (conditions.length > 1) {
          const both = conditions.map(({ kind }) => kind).join(' and ');
          return { message: `has ${both}; a port has one of pressure, flow and head; ${hint(PORT_EXAMPLE)}` };
        }
        const condition: PortCondition = conditions[0] ?? { kind: 'unset' };
        return {
          condition,
          tubing: given.tubing ?? [],
          expect: given.expect ?? null,
          concentration: given.concentration ?? null,
        };
      },
      isComplaint,
    ),
  },
  hint(PORT_EXAMPLE),
);

interface WindowKeys {
  readonly min?: number | undefined;
  readonly max?: number | undefined;
}

const window = <T extends WindowKeys>(field: Field<T>, example: string): Field<T> =>
  checked(field, ({ min, max }) => {
    if (min === undefined && max === undefined)
      return { message: `needs min, max or both; ${hint(example)}` };
    if (min === undefined || max === undefined || min <= max) return null;
    return { message: 'has min above max; swap them' };
  });

const plainWindow = (
  kind: Quantity,
  bound: 'any' | 'not below 0',
  example: string,
  description: string,
): Field<WindowKeys> => {
  const shown = `{ min: ${example} }`;
  return window(
    described(
      keys(
        {
          min: v.optional(quantity(kind, { bound, example, description: 'Lower end, included.' })),
          max: v.optional(quantity(kind, { bound, example, description: 'Upper end, included.' })),
        },
        shown,
      ),
      description,
    ),
    shown,
  );
};

const shearBound = (description: string): Field<number> =>
  quantity('wall_shear', { bound: 'not below 0', description });

const concentrationWindow = window(
  keys(
    {
      min: v.optional(concentration('Lower end, included.')),
      max: v.optional(concentration('Upper end, included.')),
      over: v.optional(share('95 %', 'Share of the flow that must lie inside; all of it when not given.')),
    },
    CONCENTRATION_EXAMPLE,
  ),
  CONCENTRATION_EXAMPLE,
);

const channel = keys(
  {
    wall_shear: v.optional(
      window(
        keys(
          {
            min: v.optional(shearBound('Lower end for the floor’s mean.')),
            max: v.optional(shearBound('Upper end for the floor’s peak.')),
            over: v.optional(share('80 %', 'Share of the floor’s width that must lie inside.')),
          },
          SHEAR_EXAMPLE,
        ),
        SHEAR_EXAMPLE,
      ),
    ),
    residence_time: v.optional(
      plainWindow('time', 'not below 0', '10 s', 'Fastest not below min, mean not above max.'),
    ),
    flow: v.optional(plainWindow('flow', 'not below 0', '1 uL/min', 'Magnitude of the flow.')),
    walls: v.optional(
      word(['floor', 'all'], 'Where wall_shear is judged: on the floor, or on the sides too.'),
    ),
    even: v.optional(
      share(
        '5 %',
        'How far the flow of each channel that matches this name may lie from their mean, whatever other entry it has.',
      ),
    ),
    concentration: v.optional(
      described(
        bySolute(concentrationWindow, `{ drug: ${CONCENTRATION_EXAMPLE} }`),
        'What the fluid must carry of each solute.',
      ),
    ),
    mixing: v.optional(
      described(
        bySolute(
          keys({ min: share('90 %', '0 % is unmixed, 100 % uniform.') }, '{ min: 90 % }'),
          '{ drug: { min: 90 % } }',
        ),
        'How far each solute must be mixed at the channel’s end.',
      ),
    ),
  },
  `{ wall_shear: ${SHEAR_EXAMPLE} }`,
);

/* ---------- targets and pumps ---------- */

const targetValue = (
  kind: Quantity,
  bound: 'any' | 'above 0' | 'not below 0',
  example: string,
  description: string,
): Field<number | Window> =>
  byShape<number | Window>(
    {
      text: quantity(kind, { bound, example, description }),
      map: v.pipe(
        plainWindow(kind, bound === 'any' ? 'any' : 'not below 0', example, description),
        v.transform(({ min, max }): Window => ({ min: min ?? null, max: max ?? null })),
      ),
    },
    hint(example),
  );

type AnyTargetQuantity = TargetQuantity | ConcentrationTarget['quantity'];

const TARGET_QUANTITIES: Readonly<Record<'channel' | 'port' | 'node', readonly AnyTargetQuantity[]>> = {
  channel: ['flow', 'wall_shear', 'velocity', 'residence_time', 'concentration'],
  port: ['flow', 'pressure', 'concentration'],
  node: ['pressure'],
};

interface WantedConcentration {
  readonly solute: string;
  readonly value: number | Window;
}

const wantedConcentration: Field<WantedConcentration> = changed(
  named(
    targetValue('concentration', 'not below 0', '3', 'Wanted concentration, in the solute’s own unit.'),
    '{ drug: 3 }',
  ),
  (given): WantedConcentration | Complaint => {
    const [only, ...others] = Object.entries(given);
    if (only !== undefined && others.length === 0) return { solute: only[0], value: only[1] };
    return {
      message: `names ${others.length === 0 ? 'no solute' : `${others.length + 1} solutes`}; a target is on one; ${hint('{ drug: 3 }')}`,
    };
  },
  isComplaint,
);

const QUANTITY_KEYS = [
  'flow',
  'wall_shear',
  'velocity',
  'residence_time',
  'pressure',
  'concentration',
] as const;

type TargetValues = Omit<TargetEntry, 'line' | 'index'> | Omit<ConcentrationTarget, 'line' | 'index'>;

const target = changed(
  keys(
    {
      channel: v.optional(text('The channel to be set.', 'lane-1')),
      reach: v.optional(text('Which reach, for a channel of several.', 'lane-1:2')),
      port: v.optional(text('The port to be set.', 'waste')),
      node: v.optional(text('The node to be set.', 'junction-1')),
      flow: v.optional(
        targetValue('flow', 'any', '5 uL/min', 'Wanted flow; into the chip, or from → to, is positive.'),
      ),
      wall_shear: v.optional(
        targetValue('wall_shear', 'above 0', '0.3 Pa', 'Wanted wall shear on the floor.'),
      ),
      velocity: v.optional(targetValue('velocity', 'any', '1 mm/s', 'Wanted mean velocity.')),
      residence_time: v.optional(targetValue('time', 'above 0', '10 s', 'Wanted mean residence time.')),
      pressure: v.optional(targetValue('pressure', 'any', '2 kPa', 'Wanted pressure in the chip.')),
      concentration: v.optional(described(wantedConcentration, 'Wanted mean concentration of one solute.')),
      at: v.optional(word(['mean', 'peak'], 'Which wall shear; mean when not given.')),
      by: text('The port whose setting is to be found.', 'feed'),
    },
    TARGET_EXAMPLE,
  ),
  (given): TargetValues | Complaint => {
    const places = (['channel', 'port', 'node'] as const).filter((place) => given[place] !== undefined);
    const on = places[0];
    if (on === undefined || places.length > 1) {
      const found = places.length === 0 ? 'no channel, port or node' : places.join(' and ');
      return {
        message: `has ${found}; exactly one of channel, port and node is needed; ${hint(TARGET_EXAMPLE)}`,
      };
    }
    const quantities = QUANTITY_KEYS.filter((name) => given[name] !== undefined);
    const what = quantities[0];
    if (what === undefined || quantities.length > 1) {
      const found = quantities.length === 0 ? 'no quantity' : quantities.join(' and ');
      const allowed = TARGET_QUANTITIES[on].join(', ');
      return {
        message: `has ${found}; a target on a ${on} has exactly one of ${allowed}; ${hint(TARGET_EXAMPLE)}`,
      };
    }
    if (!TARGET_QUANTITIES[on].includes(what)) {
      return { message: `a target on a ${on} can be ${TARGET_QUANTITIES[on].join(', ')}`, key: what };
    }
    if (given.at !== undefined && what !== 'wall_shear') {
      return { message: 'goes with wall_shear only; leave it out', key: 'at' };
    }
    if (given.reach !== undefined && on !== 'channel')
      return { message: 'goes with channel only; leave it out', key: 'reach' };
    const place = { on, name: given[on]!, reach: given.reach ?? null, by: given.by };
    if (what === 'concentration') return { ...place, quantity: what, ...given[what]! };
    return { ...place, quantity: what, at: given.at ?? 'mean', value: given[what]! };
  },
  isComplaint,
);

const pumpLimit = checked(
  keys(
    {
      max_pressure: v.optional(
        quantity('pressure', {
          bound: 'above 0',
          example: '200 kPa',
          description: 'Most the pump can hold.',
        }),
      ),
      min_pressure: v.optional(pressure('-50 kPa', 'Least the pump can hold.')),
      max_flow: v.optional(
        quantity('flow', {
          bound: 'above 0',
          example: '1 mL/min',
          description: 'Most the pump can give, either way.',
        }),
      ),
    },
    '{ max_pressure: 200 kPa, max_flow: 1 mL/min }',
  ),
  ({ max_pressure, min_pressure }) =>
    max_pressure !== undefined && min_pressure !== undefined && min_pressure >= max_pressure
      ? { message: 'is not below max_pressure', key: 'min_pressure' }
      : null,
);

/* ---------- limits, tolerances, show, accept ---------- */

const limits = keys(
  {
    min_width: v.optional(length('a width', '20 um', 'Narrowest channel the process makes.')),
    min_wall: v.optional(length('a wall', '40 um', 'Thinnest wall the process makes.')),
    max_width_to_depth: v.optional(ratio('the ratio', '10', 'Widest roof in depths.')),
    max_depth_to_width: v.optional(ratio('the ratio', '2', 'Deepest channel in widths.')),
    edge_margin: v.optional(length('a margin', '1 mm', 'Nearest to the chip edge.')),
    port_gap: v.optional(length('a gap', '1 mm', 'Nearest that two rims may come.')),
    port_diameter: v.optional(
      described(
        pair(length('a diameter', '0.3 mm', 'Diameter.'), true, '[0.3 mm, 8 mm]'),
        'Smallest and largest circle that is a port.',
      ),
    ),
    port_grid: v.optional(length('a grid', '1.5 mm', 'Pitch of the port grid.')),
    max_pressure: v.optional(
      quantity('pressure', {
        bound: 'above 0',
        example: '150 kPa',
        description: 'Highest pressure the chip may see.',
      }),
    ),
    min_pressure: v.optional(pressure('-30 kPa', 'Lowest pressure the chip may see.')),
    max_reynolds: v.optional(
      ratio('a Reynolds number', '1000', 'Highest Reynolds number that counts as laminar.'),
    ),
    min_corner_angle: v.optional(
      scalar('30 deg', { description: 'Sharpest inside angle.', examples: ['30 deg'] }, (written) => {
        const value = parseQuantity(written, 'angle');
        if (value > 0 && value < Math.PI) return value;
        throw new QuantityError(`${quote(written)} is not between 0 deg and 180 deg; ${hint('30 deg')}`);
      }),
    ),
    stiffness: v.optional(
      quantity('pressure', {
        bound: 'above 0',
        noun: 'a stiffness',
        example: '1.5 MPa',
        description: 'Young’s modulus of the chip.',
      }),
    ),
  },
  '{ min_width: 20 um }',
);

const tolerances = checked(
  keys(
    {
      depth: v.optional(toleranceByName('length', '5 %')),
      depth_common: v.optional(tolerance('length', 'with share', '3 %')),
      width: v.optional(tolerance('length', 'with share', '2 um')),
      width_bias: v.optional(tolerance('length', 'with share', '2 um')),
      width_own: v.optional(tolerance('length', 'with share', '1 um')),
      temperature: v.optional(tolerance('temperature_difference', 'absolute only', '1 degC')),
      viscosity: v.optional(tolerance('viscosity', 'with share', '3 %')),
      pressure: v.optional(toleranceByName('pressure', '1 %')),
      flow: v.optional(toleranceByName('flow', '1 %')),
      bore: v.optional(tolerance('length', 'with share', '10 um')),
    },
    '{ depth: 5 %, width: 2 um, temperature: 1 degC }',
  ),
  ({ width, width_bias, width_own }) =>
    width !== undefined && (width_bias !== undefined || width_own !== undefined)
      ? { message: 'is the whole of width_bias and width_own; give it or those two, not both', key: 'width' }
      : null,
);

const shownUnit = (kind: Quantity, example: string): Field<string> =>
  scalar(
    example,
    { description: 'Unit on screen and paper; data files stay SI.', examples: [example] },
    (written) => {
      unitFactor(written, kind);
      return written.trim();
    },
  );

const show = keys(
  {
    flow: v.optional(shownUnit('flow', 'uL/min')),
    pressure: v.optional(shownUnit('pressure', 'kPa')),
    wall_shear: v.optional(shownUnit('wall_shear', 'Pa')),
    residence_time: v.optional(shownUnit('time', 's')),
    velocity: v.optional(shownUnit('velocity', 'mm/s')),
  },
  '{ flow: uL/min, pressure: mbar }',
);

const ruleName = scalar(
  'thin-wall',
  { description: 'The finding’s rule.', enum: [...RULE_MEASURES.keys()] },
  (written) => {
    const name = written.trim();
    if (RULE_MEASURES.has(name)) return name;
    if (UNACCEPTABLE_RULES.has(name)) {
      throw new QuantityError(
        `${quote(name)} can't be accepted: the numbers themselves would be wrong; mend the drawing or the run sheet`,
      );
    }
    const near = nearest(name, RULE_MEASURES.keys());
    throw new QuantityError(
      `${quote(name)} is not a rule that can be accepted${near === null ? '' : `; did you mean ${quote(near)}?`}`,
    );
  },
);

const date = scalar(
  '2026-05-04',
  { description: 'When, year-month-day.', examples: ['2026-05-04'] },
  (written) => {
    const day = written.trim();
    const match = /^(\d{4})-(\d{2})-(\d{2})$/.exec(day);
    const time =
      match === null ? Number.NaN : Date.UTC(Number(match[1]), Number(match[2]) - 1, Number(match[3]));
    if (!Number.isNaN(time) && new Date(time).toISOString().startsWith(day)) return day;
    throw new QuantityError(`${quote(written)} is not a date; ${hint('2026-05-04')}`);
  },
);

/** A pattern of stars alone would take on everything, also what nobody has looked at. */
const checkedName = scalar(
  'lane-1',
  {
    description: 'Name of the channel, port or layer concerned; * matches any run of characters.',
    examples: ['lane-1', 'lane-*'],
    type: ['string', 'number'],
  },
  (written) => {
    const name = written.trim();
    if (name === '') throw new QuantityError(`is empty; ${hint('lane-1')}`);
    if (!/^\*+$/.test(name)) return written;
    throw new QuantityError(
      `${quote(name)} would take on whatever the rule finds anywhere; name what was looked at; ${hint('lane-*')}`,
    );
  },
);

const accept = changed(
  keys(
    {
      rule: ruleName,
      at: checkedName,
      up_to: v.optional(
        scalar(
          '35 um',
          {
            description: 'How far it may go; beyond, the finding blocks again.',
            examples: ['35 um'],
            type: ['string', 'number'],
          },
          (written) => written,
        ),
      ),
      because: text('Why it is taken on.', 'measured on the last batch'),
      by: text('Who takes it on.', 'AM'),
      on: date,
    },
    '{ rule: thin-wall, at: lane-1, up_to: 35 um, because: "measured on the last batch", by: AM, on: 2026-05-04 }',
  ),
  ({ rule, at, up_to, because, by, on }): Omit<AcceptEntry, 'line'> | Complaint => {
    // ruleName lets only rules of the table through.
    const measure = RULE_MEASURES.get(rule)!;
    const upTo = ceiling(rule, measure, up_to);
    if (upTo !== null && 'message' in upTo) return upTo;
    const common = { rule, at, because, by, on };
    return upTo === null ? { ...common, upTo: null } : { ...common, upTo: upTo.value, upToUnit: upTo.unit };
  },
  isComplaint,
);

/** SI unit in which findings measure a quantity; shares and ratios have none. */
const SI_UNIT: Readonly<Partial<Record<Quantity, string>>> = {
  length: 'm',
  pressure: 'Pa',
  wall_shear: 'Pa',
  time: 's',
  flow: 'm³/s',
  angle: 'rad',
};

function ceiling(
  rule: string,
  { quantities, ceilingNeeded }: RuleMeasure,
  written: string | undefined,
): { readonly value: number; readonly unit: string } | null | Complaint {
  const first = quantities[0];
  if (written === undefined) {
    if (!ceilingNeeded || first === undefined) return null;
    return {
      message: `needs the key up_to, how far it is taken on; ${hint(`up_to: ${describeQuantity(first).example}`)}`,
    };
  }
  if (first === undefined)
    return { message: `${rule} measures nothing that could have a ceiling; leave up_to out`, key: 'up_to' };
  let complaint: Complaint | null = null;
  for (const kind of quantities) {
    try {
      return { value: parseQuantity(written, kind), unit: SI_UNIT[kind] ?? '' };
    } catch (error) {
      if (!(error instanceof QuantityError)) throw error;
      complaint ??= { message: error.message, key: 'up_to' };
    }
  }
  return complaint;
}

/* ---------- the sheet ---------- */

const drawingText = (description: string, example: string): v.OptionalSchema<Field<string>, undefined> =>
  v.optional(text(description, example));

/** Every key but `cases`. */
const entries = {
  title: v.optional(text('Title of the report.', 'Four-lane culture chip')),
  drawing: v.optional(
    described(
      keys(
        {
          number: drawingText('Drawing number.', 'C-114'),
          revision: drawingText('Revision.', 'B'),
          drawn_by: drawingText('Who drew it.', 'AM'),
        },
        '{ number: C-114, revision: B, drawn_by: AM }',
      ),
      'Printed, not interpreted.',
    ),
  ),
  unit: v.optional(
    length('a unit', '1 mm', 'Size of one unit of the drawing, only if the drawing does not say.'),
  ),
  size: v.optional(
    described(
      pair(length('a side', '76 mm', 'Side of the chip.'), false, '[76 mm, 26 mm]'),
      'Checked against the chip edge.',
    ),
  ),
  outline: v.optional(
    text('Name of the shape that is the chip edge; only what lies inside it is read.', 'chip-edge'),
  ),
  ports_layer: v.optional(text('Only circles of this layer are ports.', 'holes')),
  ignore: v.optional(
    described(
      list(text('A name; * matches any run of characters.', 'dim-*'), '["dim-*", marks]'),
      'Names of elements or layers that are not read.',
    ),
  ),
  join_within: v.optional(
    length('a distance', '1 um', 'Slack of every "on" and "inside" when channels are joined.'),
  ),
  joints: v.optional(
    word(
      ['resolved', 'centreline', 'computed'],
      'Whether corners and junctions add resistance of their own: from tables, none, or computed one by one.',
    ),
  ),
  process: v.optional(word(PROCESSES, 'How the chip is made; gives usual limits.')),
  fluid: v.optional(fluid),
  temperature: v.optional(temperature('Temperature of the chip; 25 degC when not given.')),
  depth: v.optional(depth('Etch depth of every layer not named under layers.')),
  layers: v.optional(
    described(named(layer, '{ lanes: { depth: 120 um } }'), 'Depth, profile and plane of each layer.'),
  ),
  ports: v.optional(described(named(port, '{ feed: { pressure: 12 kPa } }'), 'How each port is run.')),
  channels: v.optional(
    described(
      named(channel, '{ "lane-*": { wall_shear: { max: 0.5 Pa } } }'),
      'Windows by name: exact name first, then the longest pattern.',
    ),
  ),
  solutes: v.optional(
    described(
      named(
        keys(
          {
            diffusion: quantity('diffusion', { bound: 'above 0', description: 'Diffusion coefficient.' }),
            unit: v.optional(text('Unit of its concentrations: printed, not converted.', 'uM')),
          },
          SOLUTE_EXAMPLE,
        ),
        `{ drug: ${SOLUTE_EXAMPLE} }`,
      ),
      'What the fluids carry.',
    ),
  ),
  junctions: v.optional(
    word(['laminar', 'mixed'], 'Whether streams stay side by side and diffuse (the default), or mix wholly.'),
  ),
  switch: v.optional(
    described(
      keys(
        {
          from: v.optional(
            described(list(text('A port.', 'feed'), '[feed]'), 'Ports whose fluid changes; all that feed.'),
          ),
          reach: v.optional(
            text('Where the change must have come; * matches any run of characters.', 'lane-*'),
          ),
          to: v.optional(share('95 %', 'Share of the final change.')),
          within: v.optional(
            quantity('time', { bound: 'above 0', example: '2 min', description: 'Time it may take.' }),
          ),
        },
        '{ from: [feed], reach: "lane-*", to: 95 %, within: 2 min }',
      ),
      'Change of fluid at the supplies, and how soon it must have arrived.',
    ),
  ),
  fields: v.optional(
    described(
      list(text('A stroke or a filled shape.', 'chamber'), '[chamber]'),
      'Chambers whose floor is computed in 2-D.',
    ),
  ),
  pillars: v.optional(
    described(
      list(text('A layer.', 'posts'), '[posts]'),
      'Layers whose filled shapes stand in the chambers; none of them is a port, channel or outline.',
    ),
  ),
  targets: v.optional(described(list(target, `[${TARGET_EXAMPLE}]`), 'What the command pump must reach.')),
  pump_limits: v.optional(
    described(named(pumpLimit, '{ feed: { max_pressure: 200 kPa } }'), 'What each pump can do.'),
  ),
  limits: v.optional(described(limits, 'Limits of the process and of the chip.')),
  tolerances: v.optional(
    described(tolerances, 'How far fabrication and running vary, for the command spread.'),
  ),
  show: v.optional(described(show, 'Units on screen and paper.')),
  accept: v.optional(
    described(
      list(accept, '[{ rule: thin-wall, at: lane-1, … }]'),
      'Findings that someone has looked at and takes on.',
    ),
  ),
};

const SHEET_EXAMPLE = 'depth: 50 um';

/** A sheet without cases: what each case is once its changes are merged in. */
export const caseSchema = keys(entries, SHEET_EXAMPLE);

/** The whole sheet. `cases` is checked for its form only: each is merged with the sheet and then checked by caseSchema. */
export const sheetSchema = keys(
  {
    ...entries,
    cases: v.optional(
      described(
        named(
          byShape({ map: v.record(v.string(), v.unknown()) }, hint('{ temperature: 37 degC }')),
          '{ culture: { temperature: 37 degC } }',
        ),
        'Each is the sheet with these changes, solved and judged on its own.',
      ),
    ),
  },
  SHEET_EXAMPLE,
);

/** Every top-level key. */
export const SHEET_KEYS: ReadonlySet<string> = new Set([...Object.keys(entries), 'cases']);

/** What the schema hands on: SI values under the keys as written. */
export type SheetValues = v.InferOutput<typeof caseSchema>;
