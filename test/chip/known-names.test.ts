import { describe, expect, it } from 'vitest';
import { assembleChip } from '../../src/chip/assemble.ts';
import { layOut } from '../../src/layout/layout.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { readSvg } from '../../src/svg/read.ts';
import { chipOf, circle, type Draft, filled, ignored, rectangle, runOf, stroke } from './drawing.ts';

const drafts: readonly Draft[] = [
  stroke('lane-1', [0, 0, 10, 0], { groups: ['Lanes'] }),
  stroke('lane-1', [0, 1, 10, 1], { groups: ['Lanes'] }),
  stroke(null, [0, 2, 10, 2]),
  circle('feed', 0, 0),
  circle('waste', 10, 0),
  circle(null, 20, 0),
  circle('huge', 60, 0, 20, { filled: false }),
  ignored('label', 'text'),
];

const NAMED = `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="20mm" viewBox="0 0 40 20">
  <path id="run" d="M4 10H36" fill="none" stroke="#000" stroke-width=".2"/><circle id="feed" cx="4" cy="10" r="1"/><circle id="waste" cx="36" cy="10" r="1"/></svg>`;

describe('a name that the drawing lacks', () => {
  for (const [sheet, message] of [
    ['ports: { fed: open }', '2: ports.fed: the drawing has no port "fed"; did you mean "feed"?'],
    [
      'ports: { nozzle: open }',
      '2: ports.nozzle: the drawing has no port "nozzle"; its ports are "feed", "waste"',
    ],
    [
      'ports: { huge: open }',
      '2: ports.huge: "huge" is drawn but is no port here: its diameter of 40 mm is outside limits.port_diameter, 0.2 mm to 10 mm',
    ],
    [
      'ports: { port-3: open }',
      '2: ports.port-3: "port-3" is only shown for a shape that has no such name; give it a name in the drawing (data-name, label, title or id) and use that',
    ],
    [
      'ports_layer: Lanes\nports: { feed: open }',
      '3: ports.feed: "feed" is drawn but is no port here: it is not in the ports layer',
    ],
    [
      'ignore: [feed]\nports: { feed: open }',
      '3: ports.feed: "feed" is drawn but is no port here: the run sheet ignores it',
    ],
    [
      'layers: { Lanes: ignore }\nchannels: { lane-1: {} }',
      '3: channels.lane-1: "lane-1" is drawn but is no channel here: its layer is set to ignore',
    ],
    ['channels: { label: {} }', '2: channels.label: "label" is drawn but is no channel here: it is a text'],
    [
      'channels: { lane-9: {} }',
      '2: channels.lane-9: the drawing has no channel "lane-9"; did you mean "lane-1"?',
    ],
    ['channels: { "lan-*": {} }', '2: channels.lan-*: no channel matches "lan-*"; did you mean "lane-1"?'],
    [
      'channels: { channel-3: {} }',
      '2: channels.channel-3: "channel-3" is only shown for a shape that has no such name',
    ],
    ['channels: { lane-1-2: {} }', '2: channels.lane-1-2: "lane-1-2" is only shown'],
    [
      'layers: { lane: { depth: 1 um } }',
      '2: layers.lane: the drawing has no layer "lane"; did you mean "Lanes"?',
    ],
    ['ports_layer: hole', '2: ports_layer: the drawing has no layer "hole"; its layers are "Lanes"'],
    ['outline: chip', '2: outline: the drawing has no shape "chip"'],
    ['outline: fed', '2: outline: the drawing has no shape "fed"; did you mean "feed"?'],
    [
      'targets:\n  - { channel: lane-2, flow: 1 uL/min, by: feed }',
      '3: targets[0].channel: the drawing has no channel "lane-2"; did you mean "lane-1"?',
    ],
    [
      'targets:\n  - { channel: lane-1, flow: 1 uL/min, by: fed }',
      '3: targets[0].by: the drawing has no port "fed"; did you mean "feed"?',
    ],
    [
      'targets: [{ port: wast, flow: 1 uL/min, by: feed }]',
      '2: targets[0].port: the drawing has no port "wast"; did you mean "waste"?',
    ],
    [
      'pump_limits: { fed: { max_flow: 1 mL/min } }',
      '2: pump_limits.fed: the drawing has no port "fed"; did you mean "feed"?',
    ],
    ['ports: { "out-*": open }', '2: ports.out-*: no port matches "out-*"; its ports are "feed", "waste"'],
    [
      'ports: { feed: open, "fe*": open }',
      '2: ports.fe*: every port that it matches has an entry that goes before it, so it says nothing; take it out, or name the ports in full',
    ],
    [
      'ports:\n  "*e*": open\n  "f*d": open',
      '4: ports: "*e*" and "f*d" both match port "feed" and are equally long; give the port an entry of its own',
    ],
    [
      'targets: [{ port: "*e*", flow: 1 uL/min, by: feed }]',
      '2: targets[0].port: "*e*" matches 2 ports, "feed", "waste"; a target is on one: name it in full',
    ],
    [
      'targets: [{ port: "x*", flow: 1 uL/min, by: feed }]',
      '2: targets[0].port: no port matches "x*"; its ports are "feed", "waste"',
    ],
    [
      'targets: [{ channel: "l*ne-9", flow: 1 uL/min, by: feed }]',
      '2: targets[0].channel: no channel matches "l*ne-9"; did you mean "lane-1"?',
    ],
    ['fields: [lane-3]', '2: fields[0]: the drawing has no shape "lane-3"; did you mean "lane-1"?'],
    ['fields: [label]', '2: fields[0]: "label" is drawn but is no shape here: it is a text'],
    ['pillars: [Lane]', '2: pillars[0]: the drawing has no layer "Lane"; did you mean "Lanes"?'],
    ['switch: { from: [fed] }', '2: switch.from[0]: the drawing has no port "fed"; did you mean "feed"?'],
    ['switch: { reach: "lan-*" }', '2: switch.reach: no channel matches "lan-*"; did you mean "lane-1"?'],
    [
      'solutes: { x: { diffusion: 1 m^2/s } }\ntargets: [{ port: wast, concentration: { x: 1 }, by: feed }]',
      '3: targets[0].port: the drawing has no port "wast"; did you mean "waste"?',
    ],
    [
      'tolerances: { depth: { lane: 5 % } }',
      '2: tolerances.depth.lane: the drawing has no layer "lane"; did you mean "Lanes"?',
    ],
    [
      'tolerances: { pressure: { fed: 5 % } }',
      '2: tolerances.pressure.fed: the drawing has no port "fed"; did you mean "feed"?',
    ],
    [
      'tolerances: { flow: { fed: 5 % } }',
      '2: tolerances.flow.fed: the drawing has no port "fed"; did you mean "feed"?',
    ],
    [
      'accept: [{ rule: open-end, at: channel-3, because: b, by: c, on: 2026-05-04 }]',
      '2: accept[0].at: "channel-3" is only shown',
    ],
    ['ports: { "a\\nb": open }', '2: ports."a\\u000ab": the drawing has no port "a\\u000ab"; its ports are'],
  ] as const) {
    it(`is answered with its line and the nearest right one: ${JSON.stringify(sheet)}`, () => {
      expect(() => chipOf(drafts, `depth: 50 um\n${sheet}`)).toThrow(`c.run.yaml:${message}`);
    });
  }

  it('may stand under ignore, and in targets on nodes, which the network names', () => {
    const sheet =
      'depth: 50 um\nignore: [nothing, "dim-*"]\ntargets: [{ node: junction-1, pressure: 1 kPa, by: feed }]';
    expect(chipOf(drafts, sheet).channels.length).toBe(3);
  });

  it('may be a pattern that matches exactly one, which then stands for it', () => {
    const run = runOf(
      drafts,
      'depth: 50 um\nports: { "f*": open, "*": sealed }\ntargets:\n  - { channel: "l*", flow: 1 uL/min, by: feed }\n  - { port: "w*e", pressure: 1 kPa, by: waste }',
    );
    expect(run.sheet!.targets.map(({ name }) => name)).toEqual(['lane-1', 'waste']);
    // a shape without a name is nobody's
    expect(run.ports.map(({ condition }) => condition.kind)).toEqual(['open', 'sealed', 'unset']);
  });

  it('may be a pattern that a case goes before at every port: it speaks for the other cases', () => {
    const sheet = (ports: string): string =>
      `depth: 50 um\nports: { "fe*": { pressure: 1 kPa } }\ncases: { a: { ports: { ${ports} } } }`;
    const inCase = (text: string) =>
      assembleChip({
        layout: layOut(readSvg(NAMED, 'c.svg'), 'c.svg'),
        sheet: parseRunSheet(text, 'c.run.yaml').cases[0]!.sheet,
        file: 'c.svg',
      });
    expect(inCase(sheet('feed: { flow: 1 uL/min }')).run.ports[0]!.condition.kind).toBe('flow');
    // but the sheet's own names overrule it as ever
    expect(() => inCase(sheet('waste: open').replace('"fe*"', 'feed: open, "fe*"'))).toThrow(
      '2: ports.fe*: every port that it matches has an entry that goes before it',
    );
  });

  it('may stand under channels for a chamber, and a switch may ask for a reach of several', () => {
    const shapes = [...drafts, filled('chamber', rectangle(30, 0, 4, 4))];
    const sheet =
      'depth: 50 um\nfields: [chamber]\nchannels: { chamber: { wall_shear: { max: 1 Pa } } }\nswitch: { reach: "lane-1:2" }';
    const chip = chipOf(shapes, sheet);
    expect(chip.faults).toEqual([]);
    expect(chip.ignored).toMatchObject({ 'chamber or pillar': 1 });
  });

  it('of a drawing without ports is answered so', () => {
    expect(() => chipOf([stroke('a', [0, 0, 1, 0])], 'ports: { p: open }')).toThrow(
      'the drawing has no port "p"; it has no named ports',
    );
  });

  it('is not found through what every object has', () => {
    expect(() =>
      chipOf([stroke('toString', [0, 0, 1, 0]), circle('valueOf', 0, 0)], 'depth: 1 um'),
    ).not.toThrow();
    expect(runOf([circle('valueOf', 0, 0)], 'depth: 1 um').ports[0]!.condition).toEqual({ kind: 'unset' });
  });
});

describe('a name of something in the drawing that is not read', () => {
  const SVG = `<svg xmlns="http://www.w3.org/2000/svg" width="40mm" height="20mm" viewBox="0 0 40 20">
    <defs><path id="spare" d="M0 0h9" stroke="#000"/></defs>
    <g id="top" fill="none" stroke="#000" stroke-width=".2">
      <path id="run" d="M4 10H36"/>
      <path id="gone" d="M4 12H36" style="display:none"/>
      <path id="shy" d="M4 12H36" visibility="hidden"/>
      <path id="thin" d="M4 12H36" stroke-width="0"/>
      <path id="bare" d="M4 12H36" stroke="none"/>
      <path id="point" d="M4 12z"/>
      <rect id="flat" width="0" height="3"/>
      <path id="filled" d="M4 15H9V16H4z" fill="#06c" stroke="none"/>
      <path id="dashed" d="M4 18H9" stroke-dasharray="1 1"/>
    </g>
    <g id="old" display="none"><g id="older"><path id="lane-7" d="M0 0h9" stroke="#000"/><circle id="well" r="1"/></g></g>
    <g id="empty"><path id="none" d="M0 0h9" fill="none"/></g>
    <circle id="in" cx="4" cy="10" r=".75"/>
  </svg>`;
  const refusal = (sheet: string): string => {
    try {
      const layout = layOut(readSvg(SVG, 'c.svg'), 'c.svg');
      assembleChip({
        layout,
        sheet: parseRunSheet(`depth: 50 um\n${sheet}`, 'c.run.yaml'),
        file: 'c.svg',
      });
    } catch (error) {
      if (error instanceof Error) return error.message;
    }
    return 'taken';
  };

  it.each([
    ['channels: { run: {} }', 'taken'],
    ['channels: { gone: {} }', '"gone" is in the drawing but is not drawn: it is hidden (display: none)'],
    ['channels: { shy: {} }', '"shy" is in the drawing but is not drawn: it is hidden (visibility: hidden)'],
    ['channels: { thin: {} }', '"thin" is in the drawing but is not drawn: its stroke is 0 wide'],
    ['channels: { bare: {} }', '"bare" is in the drawing but is not drawn: it has neither stroke nor fill'],
    ['channels: { point: {} }', '"point" is in the drawing but is not drawn: it has no length'],
    ['channels: { flat: {} }', '"flat" is in the drawing but is not drawn: it has no size'],
    ['channels: { spare: {} }', '"spare" is in the drawing but is not drawn: it stands in <defs>'],
    ['channels: { lane-7: {} }', '"lane-7" is in the drawing but is not drawn: it is hidden (display: none)'],
    [
      'channels: { "lane-*": {} }',
      '"lane-*" matches no channel: "lane-7" is in the drawing but is not drawn: it is hidden (display: none)',
    ],
    [
      'channels: { filled: {} }',
      '"filled" is drawn but is no channel here: it is filled, and only a stroke is a centreline',
    ],
    ['channels: { dashed: {} }', '"dashed" is drawn but is no channel here: it is a dashed stroke'],
    ['channels: { in: {} }', '"in" is drawn but is no channel here: it is a circle, read as a port'],
    ['channels: { top: {} }', '"top" is a group of shapes; a channel is one of its shapes'],
    ['ports: { run: open }', '"run" is drawn but is no port here: it is a stroke, read as a channel'],
    ['ports: { well: open }', '"well" is in the drawing but is not drawn: it is hidden (display: none)'],
    ['layers: { TOP: { depth: 60 um } }', 'taken'],
    ['layers: { Old: ignore }', '"old" is in the drawing but is not drawn: it is hidden (display: none)'],
    ['layers: { older: ignore }', '"older" is in the drawing but is not drawn: it is hidden (display: none)'],
    [
      'layers: { empty: ignore }',
      '"empty" is in the drawing but is not drawn: it holds nothing that is drawn',
    ],
    ['layers: { run: ignore }', '"run" is a shape; a layer is a group of shapes'],
    ['outline: gone', 'outline: "gone" is in the drawing but is not drawn: it is hidden (display: none)'],
    ['ports: { wel: open }', 'the drawing has no port "wel"; its ports are "in"'],
  ])('is answered with what it is: %s', (sheet, message) => {
    expect(refusal(sheet)).toContain(message);
  });
});
