import { describe, expect, it } from 'vitest';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { lineAt } from '../../src/runsheet/tree.ts';
import { FULL_SHEET } from './full-sheet.ts';

const parse = (text: string) => parseRunSheet(text, 'c.run.yaml');
const caseOf = (text: string, name = 'a') => parse(text).cases.find((one) => one.name === name)!.sheet;

describe('cases', () => {
  it('are the sheet with their changes, in the order written', () => {
    const sheet = parse(FULL_SHEET);
    expect(sheet.cases.map(({ name }) => name)).toEqual(['seed', 'culture']);
    const seed = sheet.cases[0]!.sheet;
    expect(seed.ports.feed).toMatchObject({
      condition: { kind: 'flow', flowM3s: 20 / 6e10 },
      tubing: [{ boreM: 0.5e-3 }],
    });
    expect(seed.channels['lane-*']!.wallShear).toEqual({ min: 0.05, max: 0.1, over: 0.8 });
    expect(seed.title).toBe('Four-lane culture chip');
    expect(seed.cases).toEqual([]);
    expect(sheet.ports.feed!.condition.kind).toBe('pressure');
  });

  it('know their own lines', () => {
    const sheet = parse(FULL_SHEET);
    const line = lineAt(sheet.tree, ['cases', 'seed'])!;
    expect(sheet.cases[0]!.sheet.ports.feed!.line).toBe(line);
    expect(lineAt(sheet.cases[0]!.sheet.tree, ['ports', 'feed', 'flow'])).toBe(line);
    expect(sheet.cases[0]!.sheet.ports.dose!.line).toBe(sheet.ports.dose!.line);
  });

  it('replace one condition of a port by another and keep its tubing and purpose', () => {
    const base = 'ports: { p: { pressure: 1 kPa, expect: in, tubing: { bore: 1 mm, length: 1 m } } }\n';
    const changed = caseOf(`${base}cases: { a: { ports: { p: { head: -3 mm } } } }`).ports.p!;
    expect(changed).toMatchObject({
      condition: { kind: 'head', headM: -3e-3 },
      expect: 'in',
      tubing: [{ lengthM: 1 }],
    });
    expect(caseOf(`${base}cases: { a: { ports: { p: open } } }`).ports.p).toMatchObject({
      condition: { kind: 'open' },
      expect: 'in',
      tubing: [{ lengthM: 1 }],
    });
    // what is sealed is neither an inlet nor an outlet
    expect(caseOf(`${base}cases: { a: { ports: { p: sealed } } }`).ports.p).toMatchObject({
      condition: { kind: 'sealed' },
      expect: null,
      tubing: [{ lengthM: 1 }],
    });
    expect(caseOf(`${base}cases: { a: { ports: { p: { tubing: none } } } }`).ports.p).toMatchObject({
      condition: { kind: 'pressure', pressurePa: 1000 },
      expect: 'in',
      tubing: [],
    });
    expect(caseOf(`${base}cases: { a: { ports: { p: { tubing: { bore: 2 mm } } } } }`).ports.p).toMatchObject(
      {
        condition: { kind: 'pressure', pressurePa: 1000 },
        tubing: [{ boreM: 2e-3, lengthM: 1 }],
      },
    );
  });

  it('give a condition to a port that the sheet writes in one word, and tubing to its condition', () => {
    const base = 'ports: { p: open }\n';
    expect(caseOf(`${base}cases: { a: { ports: { p: { head: 2 mm } } } }`).ports.p).toMatchObject({
      condition: { kind: 'head' },
    });
    expect(
      caseOf(`${base}cases: { a: { ports: { p: { tubing: { bore: 2 mm, length: 1 m } } } } }`).ports.p,
    ).toMatchObject({ condition: { kind: 'open' }, tubing: [{ boreM: 2e-3 }] });
  });

  it('keep what a port carries, as they keep its tubing', () => {
    const base =
      'solutes: { drug: { diffusion: 5e-10 m^2/s } }\nports: { p: { flow: 1 uL/min, concentration: { drug: 3 } } }\n';
    expect(caseOf(`${base}cases: { a: { ports: { p: open } } }`).ports.p!.concentration).toEqual({ drug: 3 });
  });

  it('keep the tubing that a pattern of the sheet gives, under a name or a narrower pattern', () => {
    const base =
      'ports: { "out-*": { pressure: 0 Pa, tubing: { bore: 1 mm, length: 1 m } }, "o*": sealed }\n';
    for (const [key, name] of [
      ['out-1', 'out-1'],
      ['"out-1*"', 'out-1*'],
    ] as const) {
      for (const [change, kind] of [
        ['open', 'open'],
        ['{ head: 1 mm }', 'head'],
      ] as const) {
        const { ports } = caseOf(`${base}cases: { a: { ports: { ${key}: ${change} } } }`);
        expect(ports[name]).toMatchObject({ condition: { kind }, tubing: [{ lengthM: 1 }] });
        expect(ports['out-*']).toMatchObject({ condition: { kind: 'pressure' } });
      }
    }
  });

  it('stop at a pattern that would leave a port as the sheet has it', () => {
    const message =
      'c.run.yaml:2: cases.a.ports.out-*: does not change "out-12", which the sheet gives an entry of its own; write in the case the names that the sheet has';
    expect(() => parse('ports: { out-12: open }\ncases: { a: { ports: { "out-*": sealed } } }')).toThrow(
      message,
    );
    expect(() => parse('ports: { "o*": open }\ncases: { a: { ports: { "out-*": sealed } } }')).not.toThrow();
    expect(() =>
      parse('ports: { out-12: open, "out-*": open }\ncases: { a: { ports: { "out-*": sealed } } }'),
    ).not.toThrow();
  });

  it('replace one kind of fluid by another', () => {
    const base = 'fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }\n';
    expect(caseOf(`${base}cases: { a: { fluid: { glycerol: 10 % by mass } } }`).fluid).toMatchObject({
      kind: 'glycerol',
    });
    expect(caseOf(`${base}cases: { a: { fluid: water } }`).fluid).toEqual({ kind: 'water' });
    expect(caseOf(`${base}cases: { a: { fluid: { viscosity: 2 mPa s } } }`).fluid).toEqual({
      kind: 'custom',
      viscosityPaS: 2e-3,
      densityKgM3: 1000,
    });
  });

  it('replace lists, and tolerances of another form', () => {
    const base = 'ignore: [x, y]\ntolerances: { depth: { limit: 5 % }, width: 2 um }\n';
    const changed = caseOf(
      `${base}cases: { a: { ignore: [z], tolerances: { depth: { lanes: 3 % }, width_own: 1 um } } }`,
    );
    expect(changed.ignore).toEqual(['z']);
    expect(changed.tolerances).toMatchObject({
      depth: null,
      depthByLayer: { lanes: { value: 0.03 } },
      width: null,
    });
  });

  it('may be empty, which is the sheet as it stands', () => {
    expect(caseOf('depth: 50 um\ncases:\n  a:\n').depthM).toBe(5e-5);
    expect(caseOf('depth: 50 um\ncases: { a: { depth: } }').depthM).toBe(5e-5);
  });

  it('are checked as whole sheets, and errors name the case and its line', () => {
    for (const [text, message] of [
      [
        'cases:\n  a:\n    ports: { p: { flow: 3 } }',
        '3: cases.a.ports.p.flow: "3" has no unit; write for example "3 uL/min"',
      ],
      ['cases:\n  a: { dpeth: 3 um }', '2: cases.a.dpeth: unknown key; did you mean "depth"?'],
      ['cases:\n  a: { cases: {} }', "2: cases.a.cases: a case can't have cases of its own"],
      ['cases:\n  a: 3 um', '2: cases.a: is one text; write for example { temperature: 37 degC }'],
      [
        'channels: { c: { flow: { min: 3 uL/min } } }\ncases:\n  a: { channels: { c: { flow: { max: 1 uL/min } } } }',
        '3: cases.a.channels.c.flow: has min above max; swap them',
      ],
      [
        'cases: { a: { layers: { X: ignore, x: ignore } } }',
        '1: cases.a.layers.x: is the same layer as "X"; layer names match without regard to case',
      ],
    ] as const) {
      expect(() => parse(text)).toThrow(`c.run.yaml:${message}`);
    }
  });
});
