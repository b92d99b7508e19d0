/**
 * The run sheet, key by key: the one source of what may be written. It checks a tree of texts (YAML read as text),
 * hands on SI values, and is also what the JSON Schema for editors is made from.
 */
import * as v from 'valibot';
import { withoutEscapes } from '../escaped-names.ts';
import {
  byShape,
  Complaint,
  called,
  changed,
  described,
  drawnName,
  type Field,
  type Key,
  keys,
  list,
  named,
  pair,
  quantity,
  required,
  scalar,
  text,
  tolerance,
  toleranceByName,
  withDefault,
  word,
} from './fields.ts';
import { RULE_MEASURES, UNACCEPTABLE_RULES } from './measures.ts';
import { didYouMean } from './nearest.ts';
import { hint, quote } from './quote.ts';
import { describeQuantity, parseQuantity, type Quantity, QuantityError, unitFactor } from './units.ts';

const PORT_EXAMPLE = '{ pressure: 12 kPa }';
const SHEAR_EXAMPLE = '{ min: 0.05 Pa, max: 0.5 Pa }';
const CONCENTRATION_EXAMPLE = '{ min: 2, max: 4, over: 95 % }';
const SOLUTE_EXAMPLE = '{ diffusion: 5e-10 m^2/s, unit: uM }';
const TARGET_EXAMPLE = '{ channel: lane-1, wall_shear: 0.3 Pa, by: feed }';

const positive = (kind: Quantity, example: string, description: string, noun?: string): Field<number> =>
  quantity(kind, { bound: 'above 0', noun, example, description });

const length = (noun: string, example: string, description: string): Field<number> =>
  positive('length', example, description, noun);

const millimetres = (length: Field<number>): Field<number> => changed(length, (metres) => metres * 1000);

const depth = (description: string): Field<number> => length('a depth', '50 um', description);

const ratio = (noun: string, example: string, description: string): Field<number> =>
  positive('ratio', example, description, noun);

/** Above 0 % and at most 100 %, as a fraction of 1. */
const share = (example: string, description: string): Field<number> =>
  scalar(example, description, (written) => {
    const value = parseQuantity(written, 'share', '%');
    if (value > 0 && value <= 1) return value;
    throw new QuantityError(`${quote(written)} is not above 0 % and at most 100 %; ${hint(example)}`);
  });

const concentration = (description: string): Field<number> =>
  quantity('concentration', { bound: 'not below 0', description });

/** Something for each solute, by its name. */
const bySolute = <T>(value: Field<T>, example: string): Field<Readonly<Record<string, T>>> =>
  changed(named(value, example), (given) => {
    if (Object.keys(given).length === 0) throw new Complaint(`names no solute; ${hint(example)}`);
    return given;
  });

const temperature = (description: string): Field<number> =>
  quantity('temperature', { bound: 'any', example: '37 degC', description });

const pressure = (example: string, description: string): Field<number> =>
  quantity('pressure', { bound: 'any', example, description });

/* ---------- fluid ---------- */

const glycerol = scalar(
  '30 % by mass',
  {
    description: 'Share of glycerol in water, by mass or by volume.',
    examples: ['30 % by mass', '20 % by volume'],
  },
  (written) => {
    const match = /^(.*%)\s+by\s+(mass|volume)\s*$/.exec(written);
    if (match === null) {
      throw new QuantityError(
        `${quote(written)} is not a share by mass or by volume; ${hint('30 % by mass')}`,
      );
    }
    const share = parseQuantity(match[1], 'share');
    if (share < 0 || share > 1) {
      throw new QuantityError(`${quote(written)} is not between 0 % and 100 %; ${hint('30 % by mass')}`);
    }
    return {
      kind: 'glycerol' as const,
      share,
      by: match[2] === 'mass' ? ('mass' as const) : ('volume' as const),
    };
  },
);

const FLUID_EXAMPLE = '{ viscosity: 0.94 mPa s, density: 1003 kg/m^3 }';

const fluid = byShape(
  {
    text: scalar(
      'water',
      { description: 'Water, or { viscosity, density }, or { glycerol: 30 % by mass }.', enum: ['water'] },
      (written) => {
        if (written.trim() === 'water') return { kind: 'water' as const };
        throw new QuantityError(
          `${quote(written)} is not a fluid known here; write "water", or for example ${FLUID_EXAMPLE}`,
        );
      },
    ),
    map: changed(
      keys(
        {
          viscosity: quantity('viscosity', {
            bound: 'above 0',
            description: 'Dynamic viscosity; temperature is then ignored.',
          }),
          density: quantity('density', { bound: 'above 0', description: 'Density.' }),
          glycerol,
        },
        FLUID_EXAMPLE,
      ),
      ({ viscosity, density, glycerol: mixture }) => {
        if (mixture !== null) {
          if (viscosity === null && density === null) return mixture;
          throw new Complaint(
            `has glycerol and a viscosity or density; keep one kind; ${hint('{ glycerol: 30 % by mass }')}`,
          );
        }
        if (viscosity === null) throw new Complaint(`needs the key viscosity; ${hint(FLUID_EXAMPLE)}`);
        if (density === null) throw new Complaint(`needs the key density; ${hint(FLUID_EXAMPLE)}`);
        return { kind: 'custom' as const, viscosityPaS: viscosity, densityKgM3: density };
      },
    ),
  },
  hint('water'),
);

/* ---------- layers, ports, channels ---------- */

const layer = byShape(
  {
    text: changed(word(['ignore'], 'Nothing of this layer is read.'), (kind) => ({ kind })),
    map: changed(
      keys(
        {
          depth: called('depthM', depth('Etch depth of the layer.')),
          profile: word(
            ['rectangle', 'isotropic'],
            'Cross-section; isotropic is wet-etched: the drawn width is the mask’s.',
          ),
          plane: text('Channels join only within one plane; "chip" when not given.', 'top'),
        },
        '{ depth: 120 um }',
      ),
      (given) => ({ kind: 'etched' as const, ...given }),
    ),
  },
  hint('{ depth: 120 um }'),
);

const tubingPiece = keys(
  {
    bore: called('boreM', required(length('a bore', '0.5 mm', 'Inner diameter.'))),
    length: called('lengthM', required(length('a length', '300 mm', 'Length of the piece.'))),
    temperature: called('temperatureK', temperature('Temperature of the piece; the chip’s when not given.')),
  },
  '{ bore: 0.5 mm, length: 300 mm }',
);

const tubing: Field<readonly v.InferOutput<typeof tubingPiece>[]> = byShape(
  {
    text: changed(word(['none'], 'No tubing: takes away in a case what the sheet gives.'), () => []),
    map: changed(tubingPiece, (piece) => [piece]),
    list: v.array(tubingPiece),
  },
  hint('{ bore: 0.5 mm, length: 300 mm }'),
);

type PortCondition =
  | { readonly kind: 'pressure'; readonly pressurePa: number }
  | { readonly kind: 'flow'; readonly flowM3s: number }
  | { readonly kind: 'head'; readonly headM: number }
  | { readonly kind: 'open' | 'sealed' | 'unset' };

const drivenPort = changed(
  keys(
    {
      pressure: pressure('12 kPa', 'Gauge pressure, at the far end of the tubing.'),
      flow: quantity('flow', { bound: 'any', description: 'Flow; into the chip is positive.' }),
      head: quantity('length', {
        bound: 'any',
        noun: 'a head',
        example: '40 mm',
        description: 'Liquid level of an open reservoir above the chip, may be negative.',
      }),
      tubing: withDefault(described(tubing, 'One piece, or several from the far end to the chip.'), []),
      expect: word(['in', 'out'], 'What the port is for: fluid goes in or comes out.'),
      concentration: described(
        bySolute(concentration('In the solute’s own unit.'), '{ drug: 10 }'),
        'What of each solute the fluid of this port carries; 0 of those not named.',
      ),
    },
    PORT_EXAMPLE,
  ),
  ({ pressure, flow, head, ...others }) => {
    const conditions: PortCondition[] = [];
    if (pressure !== null) conditions.push({ kind: 'pressure', pressurePa: pressure });
    if (flow !== null) conditions.push({ kind: 'flow', flowM3s: flow });
    if (head !== null) conditions.push({ kind: 'head', headM: head });
    if (conditions.length > 1) {
      const both = conditions.map(({ kind }) => kind).join(' and ');
      throw new Complaint(`has ${both}; a port has one of pressure, flow and head; ${hint(PORT_EXAMPLE)}`);
    }
    const condition: PortCondition = conditions.at(0) ?? { kind: 'unset' };
    return { condition, ...others };
  },
);

const port = byShape(
  {
    text: changed(
      word(['open', 'sealed'], 'An open well (0 Pa) or a sealed one.'),
      (kind): v.InferOutput<typeof drivenPort> => ({
        condition: { kind },
        tubing: [],
        expect: null,
        concentration: null,
      }),
    ),
    map: drivenPort,
  },
  hint(PORT_EXAMPLE),
);

interface Window {
  readonly min: number | null;
  readonly max: number | null;
}

const window = <T extends Window>(field: Field<T>, example: string): Field<T> =>
  changed(field, (given) => {
    const { min, max } = given;
    if (min === null && max === null) throw new Complaint(`needs min, max or both; ${hint(example)}`);
    if (min !== null && max !== null && min > max) throw new Complaint('has min above max; swap them');
    return given;
  });

const plainWindow = (
  kind: Quantity,
  bound: 'any' | 'not below 0',
  example: string,
  description: string,
): Field<Window> => {
  const shown = `{ min: ${example} }`;
  return window(
    described(
      keys(
        {
          min: quantity(kind, { bound, example, description: 'Lower end, included.' }),
          max: quantity(kind, { bound, example, description: 'Upper end, included.' }),
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
      min: concentration('Lower end, included.'),
      max: concentration('Upper end, included.'),
      over: share('95 %', 'Share of the flow that must lie inside; all of it when not given.'),
    },
    CONCENTRATION_EXAMPLE,
  ),
  CONCENTRATION_EXAMPLE,
);

const channel = keys(
  {
    wall_shear: called(
      'wallShear',
      window(
        keys(
          {
            min: shearBound('Lower end for the floor’s mean.'),
            max: shearBound('Upper end for the floor’s peak.'),
            over: share('80 %', 'Share of the floor’s width that must lie inside.'),
          },
          SHEAR_EXAMPLE,
        ),
        SHEAR_EXAMPLE,
      ),
    ),
    residence_time: called(
      'residenceTime',
      plainWindow('time', 'not below 0', '10 s', 'Fastest not below min, mean not above max.'),
    ),
    flow: plainWindow('flow', 'not below 0', '1 uL/min', 'Magnitude of the flow.'),
    walls: withDefault(
      word(['floor', 'all'], 'Where wall_shear is judged: on the floor, or on the sides too.'),
      'floor',
    ),
    even: share(
      '5 %',
      'How far the flow of each channel that matches this name may lie from their mean, whatever other entry it has.',
    ),
    concentration: described(
      bySolute(concentrationWindow, `{ drug: ${CONCENTRATION_EXAMPLE} }`),
      'What the fluid must carry of each solute.',
    ),
    mixing: described(
      bySolute(
        changed(
          keys({ min: required(share('90 %', '0 % is unmixed, 100 % uniform.')) }, '{ min: 90 % }'),
          ({ min }) => min,
        ),
        '{ drug: { min: 90 % } }',
      ),
      'How far each solute must be mixed at the channel’s end.',
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
  byShape(
    {
      text: quantity(kind, { bound, example, description }),
      map: plainWindow(kind, bound === 'any' ? 'any' : 'not below 0', example, description),
    },
    hint(example),
  );

const wantedConcentration = changed(
  named(
    targetValue('concentration', 'not below 0', '3', 'Wanted concentration, in the solute’s own unit.'),
    '{ drug: 3 }',
  ),
  (given) => {
    const [only, ...others] = Object.entries(given);
    if (only !== undefined && others.length === 0) return { solute: only[0], value: only[1] };
    throw new Complaint(
      `names ${others.length === 0 ? 'no solute' : `${others.length + 1} solutes`}; a target is on one; ${hint('{ drug: 3 }')}`,
    );
  },
);

const QUANTITY_KEYS = [
  'flow',
  'wall_shear',
  'velocity',
  'residence_time',
  'pressure',
  'concentration',
] as const;

/** What may be wanted where. */
const TARGET_QUANTITIES: Readonly<
  Record<'channel' | 'port' | 'node', readonly (typeof QUANTITY_KEYS)[number][]>
> = {
  channel: ['flow', 'wall_shear', 'velocity', 'residence_time', 'concentration'],
  port: ['flow', 'pressure', 'concentration'],
  node: ['pressure'],
};

const target = changed(
  keys(
    {
      channel: drawnName('The channel to be set.', 'lane-1'),
      reach: text('Which reach, for a channel of several.', 'lane-1:2'),
      port: drawnName('The port to be set.', 'waste'),
      node: drawnName('The node to be set.', 'junction-1'),
      flow: targetValue('flow', 'any', '5 uL/min', 'Wanted flow; into the chip, or from → to, is positive.'),
      wall_shear: targetValue('wall_shear', 'above 0', '0.3 Pa', 'Wanted wall shear on the floor.'),
      velocity: targetValue('velocity', 'any', '1 mm/s', 'Wanted mean velocity.'),
      residence_time: targetValue('time', 'above 0', '10 s', 'Wanted mean residence time.'),
      pressure: targetValue('pressure', 'any', '2 kPa', 'Wanted pressure in the chip.'),
      concentration: wantedConcentration,
      at: word(['mean', 'peak'], 'Which wall shear; mean when not given.'),
      by: required(drawnName('The port whose setting is to be found.', 'feed')),
    },
    TARGET_EXAMPLE,
  ),
  (given) => {
    const places = (['channel', 'port', 'node'] as const).filter((place) => given[place] !== null);
    const on = places[0];
    const name = on === undefined ? null : given[on];
    if (on === undefined || name === null || places.length > 1) {
      const found = places.length === 0 ? 'no channel, port or node' : places.join(' and ');
      throw new Complaint(
        `has ${found}; exactly one of channel, port and node is needed; ${hint(TARGET_EXAMPLE)}`,
      );
    }
    const quantities = QUANTITY_KEYS.filter((quantity) => given[quantity] !== null);
    const what = quantities[0];
    const allowed = TARGET_QUANTITIES[on].join(', ');
    if (what === undefined || quantities.length > 1) {
      const found = quantities.length === 0 ? 'no quantity' : quantities.join(' and ');
      throw new Complaint(
        `has ${found}; a target on a ${on} has exactly one of ${allowed}; ${hint(TARGET_EXAMPLE)}`,
      );
    }
    if (!TARGET_QUANTITIES[on].includes(what))
      throw new Complaint(`a target on a ${on} can be ${allowed}`, what);
    const { by, reach, at } = given;
    if (at !== null && what !== 'wall_shear')
      throw new Complaint('goes with wall_shear only; leave it out', 'at');
    if (reach !== null && on !== 'channel')
      throw new Complaint('goes with channel only; leave it out', 'reach');
    const place = { on, name, reach, by };
    // `what` is among the keys that are given.
    if (what === 'concentration') return { ...place, quantity: what, ...given[what]! };
    return { ...place, quantity: what, at: at ?? ('mean' as const), value: given[what]! };
  },
);

const pumpLimit = changed(
  keys(
    {
      max_pressure: called('maxPressurePa', positive('pressure', '200 kPa', 'Most the pump can hold.')),
      min_pressure: called('minPressurePa', pressure('-50 kPa', 'Least the pump can hold.')),
      max_flow: called('maxFlowM3s', positive('flow', '1 mL/min', 'Most the pump can give, either way.')),
    },
    '{ max_pressure: 200 kPa, max_flow: 1 mL/min }',
  ),
  (given) => {
    const { maxPressurePa: most, minPressurePa: least } = given;
    if (most !== null && least !== null && least >= most)
      throw new Complaint('is not below max_pressure', 'min_pressure');
    return given;
  },
);

/* ---------- limits, tolerances, show, accept ---------- */

const limits = keys(
  {
    min_width: called('minWidthM', length('a width', '20 um', 'Narrowest channel the process makes.')),
    min_wall: called('minWallM', length('a wall', '40 um', 'Thinnest wall the process makes.')),
    max_width_to_depth: called('maxWidthToDepth', ratio('the ratio', '10', 'Widest roof in depths.')),
    max_depth_to_width: called('maxDepthToWidth', ratio('the ratio', '2', 'Deepest channel in widths.')),
    edge_margin: called('edgeMarginM', length('a margin', '1 mm', 'Nearest to the chip edge.')),
    port_gap: called('portGapM', length('a gap', '1 mm', 'Nearest that two rims may come.')),
    port_diameter: called(
      'portDiameterM',
      described(
        pair(length('a diameter', '0.3 mm', 'Diameter.'), true, '[0.3 mm, 8 mm]'),
        'Smallest and largest circle that is a port.',
      ),
    ),
    port_grid: called('portGridM', length('a grid', '1.5 mm', 'Pitch of the port grid.')),
    max_pressure: called(
      'maxPressurePa',
      positive('pressure', '150 kPa', 'Highest pressure the chip may see.'),
    ),
    min_pressure: called('minPressurePa', pressure('-30 kPa', 'Lowest pressure the chip may see.')),
    max_reynolds: called(
      'maxReynolds',
      ratio('a Reynolds number', '1000', 'Highest Reynolds number that counts as laminar.'),
    ),
    min_corner_angle: called(
      'minCornerAngleRad',
      scalar('30 deg', 'Sharpest inside angle.', (written) => {
        const value = parseQuantity(written, 'angle');
        if (value > 0 && value < Math.PI) return value;
        throw new QuantityError(`${quote(written)} is not between 0 deg and 180 deg; ${hint('30 deg')}`);
      }),
    ),
    stiffness: called(
      'stiffnessPa',
      positive('pressure', '1.5 MPa', 'Young’s modulus of the chip.', 'a stiffness'),
    ),
  },
  '{ min_width: 20 um }',
);

const tolerances = changed(
  keys(
    {
      depth: toleranceByName('length', '5 %'),
      depth_common: called('depthCommon', tolerance('length', 'with share', '3 %')),
      width: tolerance('length', 'with share', '2 um'),
      width_bias: called('widthBias', tolerance('length', 'with share', '2 um')),
      width_own: called('widthOwn', tolerance('length', 'with share', '1 um')),
      temperature: tolerance('temperature_difference', 'absolute only', '1 degC'),
      viscosity: tolerance('viscosity', 'with share', '3 %'),
      pressure: toleranceByName('pressure', '1 %'),
      flow: toleranceByName('flow', '1 %'),
      bore: tolerance('length', 'with share', '10 um'),
    },
    '{ depth: 5 %, width: 2 um, temperature: 1 degC }',
  ),
  ({ depth, pressure, flow, ...others }) => {
    if (others.width !== null && (others.widthBias !== null || others.widthOwn !== null)) {
      throw new Complaint(
        'is the whole of width_bias and width_own; give it or those two, not both',
        'width',
      );
    }
    return {
      ...others,
      depth: depth.all,
      depthByLayer: depth.byName,
      pressure: pressure.all,
      pressureByPort: pressure.byName,
      flow: flow.all,
      flowByPort: flow.byName,
    };
  },
);

const shownUnit = (kind: Quantity, example: string): Field<string> =>
  scalar(example, 'Unit on screen and paper; data files stay SI.', (written) => {
    unitFactor(written, kind);
    return written.trim();
  });

const show = keys(
  {
    flow: shownUnit('flow', 'uL/min'),
    pressure: shownUnit('pressure', 'kPa'),
    wall_shear: shownUnit('wall_shear', 'Pa'),
    residence_time: shownUnit('time', 's'),
    velocity: shownUnit('velocity', 'mm/s'),
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
    const guess = didYouMean(name, RULE_MEASURES.keys());
    throw new QuantityError(
      `${quote(name)} is not a rule that can be accepted${guess === null ? '' : `; ${guess}`}`,
    );
  },
);

const date = scalar('2026-05-04', 'When, year-month-day.', (written) => {
  const day = written.trim();
  const match = /^(\d{4})-(\d{2})-(\d{2})$/.exec(day);
  const time =
    match === null ? Number.NaN : Date.UTC(Number(match[1]), Number(match[2]) - 1, Number(match[3]));
  if (!Number.isNaN(time) && new Date(time).toISOString().startsWith(day)) return day;
  throw new QuantityError(`${quote(written)} is not a date; ${hint('2026-05-04')}`);
});

/** A pattern of stars alone would take on everything, also what nobody has looked at. */
const checkedName = scalar(
  'lane-1',
  {
    description: 'Name of the channel, port or layer concerned; * matches any run of characters.',
    examples: ['lane-1', 'lane-*'],
    type: ['string', 'number'],
  },
  (written) => {
    const decoded = withoutEscapes(written);
    const name = decoded.trim();
    if (name === '') throw new QuantityError(`is empty; ${hint('lane-1')}`);
    if (!/^\*+$/.test(name)) return decoded;
    throw new QuantityError(
      `${quote(name)} would take on whatever the rule finds anywhere; name what was looked at; ${hint('lane-*')}`,
    );
  },
);

const accept = changed(
  keys(
    {
      rule: required(ruleName),
      at: required(checkedName),
      up_to: scalar(
        '35 um',
        {
          description: 'How far it may go; beyond, the finding blocks again.',
          examples: ['35 um'],
          type: ['string', 'number'],
        },
        (written) => written,
      ),
      because: required(text('Why it is taken on.', 'measured on the last batch')),
      by: required(text('Who takes it on.', 'AM')),
      on: required(date),
    },
    '{ rule: thin-wall, at: lane-1, up_to: 35 um, because: "measured on the last batch", by: AM, on: 2026-05-04 }',
  ),
  ({ up_to, ...entry }) => ({ ...entry, ...ceiling(entry.rule, up_to) }),
);

/**
 * How far a rule's finding may go: in the SI unit of its measure (m, Pa, s, m³/s, rad or a plain ratio); null when the rule
 * has no measure. The unit is given because a rule may measure in more than one ("" for a ratio).
 */
function ceiling(
  rule: string,
  written: string | null,
): { readonly upTo: number | null; readonly upToUnit?: string } {
  // ruleName lets only rules of the table through.
  const { quantities, ceilingNeeded } = RULE_MEASURES.get(rule)!;
  const first = quantities[0];
  if (written === null) {
    if (!ceilingNeeded || first === undefined) return { upTo: null };
    throw new Complaint(
      `needs the key up_to, how far it is taken on; ${hint(`up_to: ${describeQuantity(first).example}`)}`,
    );
  }
  if (first === undefined)
    throw new Complaint(`${rule} measures nothing that could have a ceiling; leave up_to out`, 'up_to');
  let complaint: Complaint | null = null;
  for (const kind of quantities) {
    try {
      return { upTo: parseQuantity(written, kind), upToUnit: describeQuantity(kind).siUnit };
    } catch (error) {
      if (!(error instanceof QuantityError)) throw error;
      complaint ??= new Complaint(error.message, 'up_to');
    }
  }
  throw complaint;
}

/* ---------- the sheet ---------- */

/** A section that is empty when it is missing. */
const section = <T>(field: Field<T>, description: string): Key<T, null> =>
  withDefault(described(field, description), v.parse(field, {}));

const listSection = <T>(items: Field<readonly T[]>, description: string): Key<readonly T[], null> =>
  withDefault(described(items, description), []);

/** Every key but `cases`. */
const entries = {
  title: text('Title of the report.', 'Four-lane culture chip'),
  drawing: section(
    keys(
      {
        number: text('Drawing number.', 'C-114'),
        revision: text('Revision.', 'B'),
        drawn_by: called('drawnBy', text('Who drew it.', 'AM')),
      },
      '{ number: C-114, revision: B, drawn_by: AM }',
    ),
    'Printed, not interpreted.',
  ),
  unit: called(
    'unitMm',
    millimetres(
      length('a unit', '1 mm', 'Size of one unit of the drawing, only if the drawing does not say.'),
    ),
  ),
  size: called(
    'sizeMm',
    described(
      pair(millimetres(length('a side', '76 mm', 'Side of the chip.')), false, '[76 mm, 26 mm]'),
      'Checked against the chip edge.',
    ),
  ),
  outline: drawnName(
    'Name of the shape that is the chip edge; only what lies inside it is read.',
    'chip-edge',
  ),
  ports_layer: called('portsLayer', drawnName('Only circles of this layer are ports.', 'holes')),
  ignore: listSection(
    list(drawnName('A name; * matches any run of characters.', 'dim-*'), '["dim-*", marks]'),
    'Names of elements or layers that are not read.',
  ),
  join_within: called(
    'joinWithinMm',
    millimetres(length('a distance', '1 um', 'Slack of every "on" and "inside" when channels are joined.')),
  ),
  joints: word(
    ['resolved', 'centreline', 'computed'],
    'Whether corners and junctions add resistance of their own: from tables, none, or computed one by one.',
  ),
  process: word(
    ['cast elastomer', 'etched glass', 'etched silicon', 'milled thermoplastic', 'moulded thermoplastic'],
    'How the chip is made; gives usual limits.',
  ),
  fluid,
  temperature: called('temperatureK', temperature('Temperature of the chip; 25 degC when not given.')),
  depth: called('depthM', depth('Etch depth of every layer not named under layers.')),
  layers: section(named(layer, '{ lanes: { depth: 120 um } }'), 'Depth, profile and plane of each layer.'),
  ports: section(named(port, '{ feed: { pressure: 12 kPa } }'), 'How each port is run.'),
  channels: section(
    named(channel, '{ "lane-*": { wall_shear: { max: 0.5 Pa } } }'),
    'Windows by name: exact name first, then the longest pattern.',
  ),
  solutes: section(
    named(
      keys(
        {
          diffusion: called(
            'diffusionM2s',
            required(quantity('diffusion', { bound: 'above 0', description: 'Diffusion coefficient.' })),
          ),
          unit: text('Unit of its concentrations: printed, not converted.', 'uM'),
        },
        SOLUTE_EXAMPLE,
      ),
      `{ drug: ${SOLUTE_EXAMPLE} }`,
    ),
    'What the fluids carry.',
  ),
  junctions: word(
    ['laminar', 'mixed'],
    'Whether streams stay side by side and diffuse (the default), or mix wholly.',
  ),
  switch: described(
    keys(
      {
        from: described(
          list(drawnName('A port.', 'feed'), '[feed]'),
          'Ports whose fluid changes; all that feed.',
        ),
        reach: drawnName('Where the change must have come; * matches any run of characters.', 'lane-*'),
        to: share('95 %', 'Share of the final change.'),
        within: called('withinS', positive('time', '2 min', 'Time it may take.')),
      },
      '{ from: [feed], reach: "lane-*", to: 95 %, within: 2 min }',
    ),
    'Change of fluid at the supplies, and how soon it must have arrived.',
  ),
  fields: listSection(
    list(drawnName('A stroke or a filled shape.', 'chamber'), '[chamber]'),
    'Chambers whose floor is computed in 2-D.',
  ),
  pillars: listSection(
    list(drawnName('A layer.', 'posts'), '[posts]'),
    'Layers whose filled shapes stand in the chambers; none of them is a port, channel or outline.',
  ),
  targets: listSection(list(target, `[${TARGET_EXAMPLE}]`), 'What the command pump must reach.'),
  pump_limits: called(
    'pumpLimits',
    section(named(pumpLimit, '{ feed: { max_pressure: 200 kPa } }'), 'What each pump can do.'),
  ),
  limits: section(limits, 'Limits of the process and of the chip.'),
  tolerances: described(tolerances, 'How far fabrication and running vary, for the command spread.'),
  show: section(show, 'Units on screen and paper.'),
  accept: listSection(
    list(accept, '[{ rule: thin-wall, at: lane-1, … }]'),
    'Findings that someone has looked at and takes on.',
  ),
};

const SHEET_EXAMPLE = 'depth: 50 um';

/** A sheet without cases: what each case is once its changes are merged in. */
export const caseSchema = keys(entries, SHEET_EXAMPLE);

/** The whole sheet. `cases` is checked for its form only: each is merged with the sheet and then checked by caseSchema. */
export const sheetSchema = keys(
  {
    ...entries,
    cases: described(
      named(
        byShape({ map: v.record(v.string(), v.unknown()) }, hint('{ temperature: 37 degC }')),
        '{ culture: { temperature: 37 degC } }',
      ),
      'Each is the sheet with these changes, solved and judged on its own.',
    ),
  },
  SHEET_EXAMPLE,
);

/** Every top-level key. */
export const SHEET_KEYS: ReadonlySet<string> = new Set([...Object.keys(entries), 'cases']);

/** Maps whose keys are names of the drawing: an editor's escapes are read in them before a case is laid over the sheet. */
export const DRAWN_KEYS: ReadonlySet<string> = new Set([
  ...['layers', 'ports', 'channels', 'pump_limits'],
  ...['tolerances.depth', 'tolerances.pressure', 'tolerances.flow'],
]);

/**
 * Groups of keys that exclude each other, by their map (* is any name): where a case gives one of a group, what the sheet says
 * of the others goes.
 */
export const EXCLUSIVE_KEYS: ReadonlyMap<string, readonly (readonly string[])[]> = new Map([
  ['ports.*', [['pressure'], ['flow'], ['head']]],
  ['fluid', [['viscosity', 'density'], ['glycerol']]],
  ['tolerances', [['width'], ['width_bias', 'width_own']]],
]);

/** What the schema hands on: SI values. */
export type SheetValues = v.InferOutput<typeof caseSchema>;
