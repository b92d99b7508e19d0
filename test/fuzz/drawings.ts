/** Drawings and run sheets made from nothing: valid more often than not, so that they reach the network and the solver. */
import fc from 'fast-check';

/** A coarse grid, so that lines meet, cross, run along each other and end on each other often. */
const place = fc.oneof(
  { weight: 6, arbitrary: fc.integer({ min: 0, max: 20 }).map((value) => 2.5 * value) },
  {
    weight: 2,
    arbitrary: fc.double({ min: -5, max: 60, noNaN: true }).map((value) => Number(value.toFixed(3))),
  },
  fc.constantFrom(0, 1e-9, 1e5, -1e5),
);

const width = fc.oneof(
  { weight: 6, arbitrary: fc.constantFrom(0.1, 0.2, 0.2, 0.5, 1, 3) },
  fc.constantFrom(0, 1e-6, 1e-4, 40),
);

const command = fc.oneof(
  { weight: 5, arbitrary: fc.tuple(place, place).map(([x, y]) => `L${x} ${y}`) },
  fc.tuple(place, place).map(([x, y]) => `H${x}V${y}`),
  fc.tuple(place, place, place, place, place, place).map((values) => `C${values.join(' ')}`),
  fc.tuple(place, place, place, place).map((values) => `Q${values.join(' ')}`),
  fc
    .tuple(place, place, fc.integer({ min: -90, max: 90 }), fc.nat(1), fc.nat(1), place, place)
    .map((values) => `A${values.join(' ')}`),
  fc.tuple(place, place).map(([x, y]) => `M${x} ${y}`),
  fc.constant('z'),
);

const NAMES = ['a', 'b', 'c', 'lane-1', 'lane-2', 'in', 'out', 'chip-edge', 'toString', ''] as const;

const name = fc.constantFrom(...NAMES);

const transform = fc.oneof(
  { weight: 6, arbitrary: fc.constant('') },
  fc.constantFrom(
    'transform="rotate(90)"',
    'transform="translate(2.5 -5)"',
    'transform="scale(-1 1)"',
    'transform="scale(2)"',
    'transform="matrix(.6 .8 -.8 .6 0 0)"',
    'transform="skewX(5)"',
    'style="transform: translate(10%, 2mm) rotate(.1turn)"',
  ),
);

const path = fc
  .tuple(place, place, fc.array(command, { minLength: 1, maxLength: 6 }), width, name, transform)
  .map(
    ([x, y, commands, w, id, more]) =>
      `<path id="${id}" d="M${x} ${y}${commands.join('')}" fill="none" stroke="#000" stroke-width="${w}" ${more}/>`,
  );

const circle = fc
  .tuple(
    place,
    place,
    fc.constantFrom(0.5, 1, 1, 2.5, 6, 0),
    fc.constantFrom('in', 'out', 'a', 'b', ''),
    transform,
  )
  .map(([x, y, r, id, more]) => `<circle id="${id}" cx="${x}" cy="${y}" r="${r}" ${more}/>`);

const other = fc.oneof(
  fc
    .tuple(place, place, width)
    .map(
      ([w, h, s]) =>
        `<rect width="${w}" height="${h}" rx="2" fill="none" stroke="#000" stroke-width="${s}"/>`,
    ),
  fc
    .array(place, { minLength: 2, maxLength: 8 })
    .map(
      (points) =>
        `<polyline points="${points.slice(0, points.length & ~1).join(' ')}" fill="none" stroke="red" stroke-width=".2"/>`,
    ),
  fc.constant('<rect id="chip-edge" width="50" height="50" fill="none" stroke="#888" stroke-width=".1"/>'),
  fc.constant('<use href="#a" x="5" y="5"/>'),
  fc.constant('<text>words</text>'),
  fc.tuple(place, place).map(([x, y]) => `<polygon points="0,0 ${x},${y} 10,0" fill="#000"/>`),
);

/** SVG text of a chip of up to a dozen shapes. */
export const drawing: fc.Arbitrary<string> = fc
  .tuple(
    fc.array(fc.oneof({ weight: 5, arbitrary: path }, { weight: 3, arbitrary: circle }, other), {
      maxLength: 12,
    }),
    fc.array(name, { maxLength: 2 }),
    fc.constantFrom(
      'width="50mm" height="50mm" viewBox="0 0 50 50"',
      'viewBox="0 0 50 50"',
      'width="50mm" viewBox="0 0 5e4 5e4"',
    ),
  )
  .map(([shapes, groups, root]) => {
    const open = groups.map((id) => `<g id="${id}">`).join('');
    return `<svg xmlns="http://www.w3.org/2000/svg" ${root}>${open}${shapes.join('\n')}${'</g>'.repeat(groups.length)}</svg>`;
  });

const line = fc.oneof(
  ...[
    ['depth: 50 um', 'depth: 0.05 mm', 'depth: 1e-6 um', 'depth: 3 mm'],
    ['joints: resolved', 'joints: centreline'],
    ['process: cast elastomer', 'process: etched glass', 'process: milled thermoplastic'],
    ['fluid: water', 'fluid: { glycerol: 30 % by mass }', 'fluid: { viscosity: 1 mPa s, density: 1 g/mL }'],
    ['temperature: 37 degC', 'temperature: 0 degC', 'temperature: 120 degC'],
    ['unit: 1 mm', 'size: [50 mm, 50 mm]', 'outline: chip-edge', 'ports_layer: a', 'join_within: 5 um'],
    [
      'ignore: ["a*"]',
      'ignore: [b, "*"]',
      'layers: { a: ignore }',
      'layers: { a: { depth: 80 um, plane: top } }',
    ],
    [
      'layers: { b: { depth: 30 um, profile: isotropic } }',
      'limits: { min_width: 0.2 mm, min_wall: 1 mm, max_reynolds: 1 }',
    ],
    [
      'channels: { "*": { wall_shear: { min: 0.1 Pa }, residence_time: { max: 1 s } } }',
      'channels: { "lane-*": { flow: { min: 1 uL/min } } }',
    ],
    [
      'targets: [{ channel: a, flow: 1 uL/min, by: in }]',
      'targets: [{ port: out, flow: -5 uL/min, by: in }]',
      'targets: [{ channel: lane-1, wall_shear: 0.3 Pa, by: in }]',
    ],
    [
      'tolerances: { depth: 5 %, width: 2 um }',
      'tolerances: { temperature: 1 degC }',
      'tolerances: { depth: 99 % }',
    ],
    [
      'pump_limits: { in: { max_pressure: 1 Pa } }',
      'cases: { one: { temperature: 20 degC }, two: { depth: 80 um } }',
    ],
    [
      'accept: [{ rule: open-end, at: a, because: x, by: y, on: 2026-05-04 }]',
      'show: { flow: mL/h, pressure: psi, wall_shear: dyn/cm^2 }',
    ],
  ].map((choices) => fc.constantFrom(...choices)),
);

const condition = fc.constantFrom(
  '{ pressure: 10 kPa }',
  '{ pressure: -5 mbar, tubing: { bore: 0.5 mm, length: 300 mm } }',
  '{ flow: 2 uL/min }',
  '{ flow: -2 uL/min, expect: in }',
  '{ head: 40 mm }',
  'open',
  'sealed',
);

/** YAML text of a run sheet, each key at most once. */
export const runSheet: fc.Arbitrary<string> = fc
  .tuple(
    fc.uniqueArray(line, { maxLength: 7, selector: (one) => one.split(':')[0] }),
    fc.uniqueArray(fc.tuple(fc.constantFrom('in', 'out', 'a', 'b'), condition), {
      maxLength: 3,
      selector: ([id]) => id,
    }),
  )
  .map(([lines, ports]) => {
    const list = ports.map(([id, set]) => `  ${id}: ${set}\n`).join('');
    return `${lines.join('\n')}\n${list === '' ? '' : `ports:\n${list}`}`;
  });

/** A drawing whose ports and channels have names of their own, and a run sheet that says something about some of them. */
export const chip: fc.Arbitrary<{ readonly svg: string; readonly sheet: string }> = fc
  .record({
    paths: fc.array(
      fc.tuple(place, place, fc.array(command, { minLength: 1, maxLength: 4 }), width, transform),
      {
        minLength: 1,
        maxLength: 6,
      },
    ),
    wells: fc.array(fc.tuple(place, place, fc.constantFrom(0.5, 1, 1, 2.5)), { minLength: 1, maxLength: 5 }),
    others: fc.array(other, { maxLength: 2 }),
    isAtEnds: fc.boolean(),
    conditions: fc.array(condition, { minLength: 5, maxLength: 5 }),
    sheet: runSheet,
  })
  .map(({ paths, wells, others, isAtEnds, conditions, sheet }) => {
    const channels = paths.map(
      ([x, y, commands, w, more], i) =>
        `<path id="${['a', 'b', 'lane-1', 'lane-2', 'c', 'd'][i]}" d="M${x} ${y}${commands.join('')}" fill="none" stroke="#000" stroke-width="${w}" ${more}/>`,
    );
    // Wells at the starts of channels join them; wells anywhere else mostly do not.
    const holes = wells.map(([x, y, r], i) => {
      const [cx, cy] = isAtEnds && i < paths.length ? paths[i] : [x, y];
      return `<circle id="${PORTS[i]}" cx="${cx}" cy="${cy}" r="${r}"/>`;
    });
    const own = sheet
      .replace(/^(?:unit|size|outline|ports_layer|ignore|layers): .*\n/gm, '')
      .replace(/ports:\n(?: .*\n)*/, '');
    const ports = wells.map((_, i) => `  ${PORTS[i]}: ${conditions[i]}\n`).join('');
    return {
      svg: `<svg xmlns="http://www.w3.org/2000/svg" width="50mm" height="50mm" viewBox="0 0 50 50">${[...channels, ...holes, ...others].join('\n')}</svg>`,
      sheet: `depth: 60 um\n${own.replace(/^depth: .*\n/m, '')}ports:\n${ports}`,
    };
  });

const PORTS = ['in', 'out', 'p', 'q', 'r'] as const;
