import { SectionList } from '../../src/chip/sections.ts';
import type { Channel, Chip, Fluid, Port, PortRun, Run } from '../../src/chip/types.ts';
import type { Finding, FindingReport } from '../../src/findings/types.ts';
import type { Network, NetworkTrace } from '../../src/network/types.ts';
import { ductForm } from '../../src/physics/duct.ts';
import { resistancePerLength } from '../../src/physics/duct-state.ts';
import { waterDensity, waterViscosity } from '../../src/physics/fluid.ts';
import { tubeResistance } from '../../src/physics/tube.ts';
import { buildReport, type Report } from '../../src/report/report.ts';
import type { CaseInput, ReportInput, SingleResult } from '../../src/report/result.ts';
import type {
  ChannelEntry,
  PortCondition,
  RunSheet,
  ShowUnits,
  TubingPiece,
} from '../../src/runsheet/types.ts';
import type { FlowState } from '../../src/solve/types.ts';

/**
 * A chip solved by hand: feed → inlet → two lanes in parallel (the upper one with a sealed stub on it, so two reaches) → outlet → waste.
 * Straight channels, one rounded corner, real resistances.
 */
export interface SampleNames {
  readonly feed: string;
  readonly upper: string;
  readonly lower: string;
  readonly title: string;
}

const PLAIN: SampleNames = { feed: 'feed', upper: 'lane-1', lower: 'lane-2', title: 'Two-lane sample' };

export interface SampleOptions {
  readonly names?: Partial<SampleNames>;
  readonly show?: ShowUnits;
  readonly findings?: readonly Finding[];
  /** Pa at the far end of the feed's tubing; 0 leaves the chip at rest. */
  readonly feedPa?: number;
  /** Without a run sheet: no windows, no names of limits. */
  readonly bare?: boolean;
}

const TEMPERATURE_K = 310.15;
const DEPTH_MM = 0.12;

/** The sample chip as one case; without a name it stands alone. */
export function sampleCase(options: SampleOptions = {}, name: string | null = null): CaseInput {
  const names = { ...PLAIN, ...options.names };
  const chip = sampleChip(names, options);
  const run = sampleRun(names, options);
  const network = sampleNetwork(chip);
  const flow = sampleFlow(network, options.feedPa ?? 1_000);
  return {
    name,
    chip,
    run,
    network,
    flow,
    findings: findingReport(options.findings ?? sampleFindings(names)),
  };
}

/** What a report of cases is built from. */
export function sampleInput(...cases: readonly CaseInput[]): ReportInput {
  const [{ chip, run }] = cases;
  const named = cases.flatMap(({ name }) =>
    name === null || run.sheet === null ? [] : [{ name, sheet: run.sheet }],
  );
  return {
    tool: { name: 'rillcheck', version: '0.1.0' },
    layout: { file: chip.file, sha256: 'a'.repeat(64) },
    sheet: run.sheet === null ? null : { file: run.sheet.file, sha256: 'b'.repeat(64), cases: named },
    cases,
  };
}

/** The sample chip's report, without cases. */
export function sampleReport(options: SampleOptions = {}): Report {
  return buildReport(sampleInput(sampleCase(options)));
}

export function sampleResult(options: SampleOptions = {}): SingleResult {
  const { result } = sampleReport(options);
  if ('cases' in result) throw new TypeError('a report without cases was asked for');
  return result;
}

/** The sample chip under two cases, the first without findings. */
export function sampleCasesReport(): Report {
  return buildReport(sampleInput(sampleCase({ findings: [] }, 'seed'), sampleCase({}, 'culture')));
}

export function sampleFindings(names: SampleNames = PLAIN): Finding[] {
  return [
    {
      rule: 'thin-wall',
      severity: 'blocker',
      message: `31 µm of material between ${names.upper} and ${names.lower} over 8 mm; min_wall is 40 µm`,
      fix: `move ${names.upper} 0.009 mm away from ${names.lower}`,
      xMm: 30,
      yMm: 6,
      names: [names.upper, names.lower],
      measured: 31e-6,
      limit: 40e-6,
      unit: 'm',
      accepted: null,
      mark: { x1Mm: 30, y1Mm: 6.25, x2Mm: 30, y2Mm: 7 },
    },
    {
      rule: 'open-end',
      severity: 'caution',
      message: 'the end of stub meets no port and no channel',
      fix: 'carry it on to a port, or name it in ignore',
      xMm: 38,
      yMm: 3,
      names: ['stub'],
      measured: null,
      limit: null,
      unit: null,
      accepted: null,
    },
    {
      rule: 'edge-margin',
      severity: 'caution',
      message: 'waste lies 1.5 mm from the chip edge; edge_margin is 2 mm',
      fix: 'move waste 0.5 mm inwards',
      xMm: 70,
      yMm: 13,
      names: ['waste'],
      measured: 1.5e-3,
      limit: 2e-3,
      unit: 'm',
      accepted: {
        line: 30,
        rule: 'edge-margin',
        at: 'waste',
        upTo: 1.2e-3,
        because: 'the holder has a relief there',
        by: 'AM',
        on: '2026-05-04',
      },
    },
    {
      rule: 'default-depth',
      severity: 'note',
      message: 'layer lanes took the depth of the sheet, 120 µm',
      fix: '',
      xMm: null,
      yMm: null,
      names: ['lanes'],
      measured: 120e-6,
      limit: null,
      unit: 'm',
      accepted: null,
    },
  ];
}

export function findingReport(findings: readonly Finding[]): FindingReport {
  const open = findings.filter(({ accepted }) => accepted === null);
  const count = (severity: Finding['severity']): number =>
    open.filter((finding) => finding.severity === severity).length;
  return {
    findings,
    notRun: [{ rule: 'port-grid', why: 'no port_grid is given' }],
    verdict: count('blocker') > 0 ? 'hold' : 'ready',
    counts: {
      blockers: count('blocker'),
      cautions: count('caution'),
      notes: count('note'),
      accepted: findings.length - open.length,
      rulesNotRun: 1,
    },
  };
}

const RUN_SHEET_TEXT = `title: Two-lane sample
drawing: { number: C-200, revision: B, drawn_by: AM }
fluid: water
temperature: 37 degC
depth: 120 um
ports:
  feed:  { pressure: 1 kPa, tubing: { bore: 0.5 mm, length: 300 mm } }
  waste: open
  spare: sealed
channels:
  "lane-*": { wall_shear: { min: 0.05 Pa, max: 0.5 Pa, over: 80 % } }
`;

const fluid: Fluid = {
  name: 'water',
  temperatureK: TEMPERATURE_K,
  viscosityPaS: waterViscosity(TEMPERATURE_K),
  densityKgM3: waterDensity(TEMPERATURE_K),
  source: 'IAPWS SR6-08(2011)',
  mixture: { kind: 'water' },
};

const WINDOW: ChannelEntry = {
  line: 11,
  wallShear: { min: 0.05, max: 0.5, over: 0.8 },
  residenceTime: null,
  flow: null,
  walls: 'floor',
  even: null,
  concentration: null,
  mixing: null,
};

function sampleChip(names: SampleNames, { bare = false }: SampleOptions): Chip {
  const sections = new SectionList();
  const channel = (ordinal: number, name: string, widthMm: number, points: number[]): Channel => ({
    name,
    drawnName: name,
    ordinal,
    layer: 0,
    plane: 0,
    drawnWidthMm: widthMm,
    ductWidthMm: widthMm,
    stripHalfWidthMm: widthMm / 2,
    depthMm: DEPTH_MM,
    depthOrigin: 'run sheet',
    profile: 'rectangle',
    section: sections.indexOf('rectangle', widthMm, DEPTH_MM),
    linecap: 'butt',
    centrelines: [
      {
        points: Float64Array.from(points),
        closed: false,
        bendRadius: new Float64Array(points.length / 2 - 1),
        curves: null,
      },
    ],
    disguises: [],
    dataChannel: false,
  });
  const port = (ordinal: number, name: string, xMm: number, yMm: number): Port => ({
    name,
    drawnName: name,
    ordinal,
    xMm,
    yMm,
    radiusMm: 1,
  });
  return {
    file: 'sample.svg',
    unitMm: 1,
    unitReason: 'width 76mm over viewBox width 76',
    widthMm: 76,
    heightMm: 26,
    planes: ['chip'],
    layers: [
      { name: 'lanes', plane: 0, depthM: DEPTH_MM / 1000, depthOrigin: 'run sheet', profile: 'rectangle' },
    ],
    channels: [
      channel(0, 'inlet', 0.3, [6, 13, 16, 13]),
      channel(1, names.upper, 0.5, [16, 13, 16, 6, 60, 6, 60, 13]),
      channel(2, names.lower, 0.5, arcLane()),
      channel(3, 'stub', 0.2, [38, 6, 38, 2]),
      channel(4, 'outlet', 0.3, [60, 13, 70, 13]),
    ],
    sections: sections.forms,
    ports: [port(5, names.feed, 6, 13), port(6, 'waste', 70, 13), port(7, 'spare', 38, 2)],
    edge: {
      name: 'chip-edge',
      rings: [Float64Array.from([0, 0, 76, 0, 76, 26, 0, 26, 0, 0])],
      sidesMm: [76, 26],
    },
    sizeMm: bare ? null : [76, 26],
    obstacles: [],
    unreadLines: [],
    ignored: { text: 3, 'dashed stroke': 1 },
    faults: [],
    joinWithinMm: 1e-3,
    joints: 'centreline',
    process: null,
    leastWall: { flatM: 40e-6, perDepth: 0, origin: 'run sheet' },
  };
}

function sampleRun(names: SampleNames, { show = {}, bare = false }: SampleOptions): Run {
  const port = (condition: PortCondition, tubing: readonly TubingPiece[] = []): PortRun => ({
    condition,
    tubing,
    expect: null,
  });
  const window = bare ? null : WINDOW;
  return {
    fluid,
    ports: [
      port({ kind: 'pressure', pressurePa: 1_000 }, [{ boreM: 0.5e-3, lengthM: 0.3, temperatureK: null }]),
      port({ kind: 'open' }),
      port({ kind: 'sealed' }),
    ],
    channels: [null, window, window, null, null],
    limits: {
      minWidthM: { value: 20e-6, origin: 'run sheet' },
      maxWidthToDepth: null,
      maxDepthToWidth: null,
      edgeMarginM: { value: 2e-3, origin: 'typical value, not from your maker' },
      portGapM: null,
      portDiameterM: { value: [0.2e-3, 10e-3], origin: 'default' },
      portGridM: null,
      maxPressurePa: null,
      minPressurePa: null,
      maxReynolds: { value: 1000, origin: 'default' },
      minCornerAngleRad: null,
      stiffnessPa: null,
    },
    accept: [],
    sheet: bare ? null : sampleSheet(names, show),
  };
}

/** 16,13 down to a quarter circle of radius 2 mm, along y = 20, up to 60,13. */
function arcLane(): number[] {
  const points = [16, 13, 16, 18];
  for (let i = 1; i <= 18; i++) {
    const angle = (i / 18) * (Math.PI / 2);
    points.push(18 - 2 * Math.cos(angle), 18 + 2 * Math.sin(angle));
  }
  points.push(60, 20, 60, 13);
  return points;
}

function sampleSheet(names: SampleNames, show: ShowUnits): RunSheet {
  return {
    file: 'sample.run.yaml',
    text: RUN_SHEET_TEXT,
    title: names.title,
    drawing: { number: 'C-200', revision: 'B', drawnBy: 'AM' },
    unitMm: null,
    sizeMm: [76, 26],
    outline: null,
    portsLayer: null,
    ignore: [],
    joinWithinMm: null,
    joints: null,
    process: null,
    fluid: { kind: 'water' },
    temperatureK: TEMPERATURE_K,
    depthM: DEPTH_MM / 1000,
    layers: {},
    ports: {},
    channels: { 'lane-*': WINDOW },
    solutes: {},
    junctions: null,
    switch: null,
    fields: [],
    pillars: [],
    targets: [],
    concentrationTargets: [],
    pumpLimits: {},
    limits: {
      minWidthM: 20e-6,
      minWallM: 40e-6,
      maxWidthToDepth: null,
      maxDepthToWidth: null,
      edgeMarginM: null,
      portGapM: null,
      portDiameterM: null,
      portGridM: null,
      maxPressurePa: null,
      minPressurePa: null,
      maxReynolds: null,
      minCornerAngleRad: null,
      stiffnessPa: null,
    },
    tolerances: null,
    cases: [],
    show,
    accept: [],
    changedPorts: [],
    tree: { kind: 'map', entries: new Map(), line: 1 },
  };
}

/** Nodes: 0 feed, 1 split, 2 stub junction, 3 merge, 4 waste, 5 spare. */
const NODES = [
  { kind: 0, number: 1, x: 6, y: 13, port: 0 },
  { kind: 1, number: 1, x: 16, y: 13, port: -1 },
  { kind: 1, number: 2, x: 38, y: 6, port: -1 },
  { kind: 1, number: 3, x: 60, y: 13, port: -1 },
  { kind: 0, number: 2, x: 70, y: 13, port: 1 },
  { kind: 0, number: 3, x: 38, y: 2, port: 2 },
] as const;

const REACHES: readonly {
  readonly channel: number;
  readonly from: number;
  readonly to: number;
  readonly points: readonly number[];
  readonly number: number;
}[] = [
  { channel: 0, from: 0, to: 1, points: [7, 13, 16, 13], number: 1 },
  { channel: 1, from: 1, to: 2, points: [16, 13, 16, 6, 38, 6], number: 1 },
  { channel: 1, from: 2, to: 3, points: [38, 6, 60, 6, 60, 13], number: 2 },
  { channel: 2, from: 1, to: 3, points: arcLane(), number: 1 },
  { channel: 3, from: 2, to: 5, points: [38, 6, 38, 3], number: 1 },
  { channel: 4, from: 3, to: 4, points: [60, 13, 69, 13], number: 1 },
];

function sampleNetwork(chip: Chip): Network {
  const firstSegment = [0];
  const segments: { reach: number; at: readonly number[]; ductMm: number; bendMm: number }[] = [];
  REACHES.forEach(({ points }, reach) => {
    for (let i = 0; i + 3 < points.length; i += 2) {
      const at = points.slice(i, i + 4);
      const bendMm = reach === 3 && i >= 2 && i < 38 ? 2 : 0;
      segments.push({ reach, at, ductMm: Math.hypot(at[2] - at[0], at[3] - at[1]), bendMm });
    }
    firstSegment.push(segments.length);
  });
  const drawn = REACHES.map((_, reach) =>
    segments.filter((segment) => segment.reach === reach).reduce((sum, { ductMm }) => sum + ductMm, 0),
  );
  // the stub's first 0.25 mm lie in lane-1's strip and count by rule 5: 0.25 · 0.2/0.5
  const stub = segments[firstSegment[4]];
  stub.ductMm -= 0.25 * (1 - 0.2 / 0.5);
  const duct = REACHES.map((_, reach) =>
    segments.filter((segment) => segment.reach === reach).reduce((sum, { ductMm }) => sum + ductMm, 0),
  );
  const column = (pick: (segment: (typeof segments)[number]) => number): Float64Array =>
    Float64Array.from(segments, pick);
  return {
    chip,
    nodeCount: NODES.length,
    nodeKind: Uint8Array.from(NODES, ({ kind }) => kind),
    nodeX: Float64Array.from(NODES, ({ x }) => x),
    nodeY: Float64Array.from(NODES, ({ y }) => y),
    nodePort: Int32Array.from(NODES, ({ port }) => port),
    nodeNumber: Int32Array.from(NODES, ({ number }) => number),
    portNode: Int32Array.of(0, 4, 5),
    reachCount: REACHES.length,
    reachChannel: Int32Array.from(REACHES, ({ channel }) => channel),
    reachFrom: Int32Array.from(REACHES, ({ from }) => from),
    reachTo: Int32Array.from(REACHES, ({ to }) => to),
    reachDrawnMm: Float64Array.from(drawn),
    reachDuctMm: Float64Array.from(duct),
    reachJointMm: new Float64Array(REACHES.length),
    reachJointBoundMm: new Float64Array(REACHES.length),
    reachCentrelineMm: Float64Array.from(duct),
    joints: [],
    firstSegment: Int32Array.from(firstSegment),
    reachNumber: Int32Array.from(REACHES, ({ number }) => number),
    channelReachCount: Int32Array.of(1, 2, 1, 1, 1),
    segmentCount: segments.length,
    segmentReach: Int32Array.from(segments, ({ reach }) => reach),
    segmentX1: column(({ at }) => at[0]),
    segmentY1: column(({ at }) => at[1]),
    segmentX2: column(({ at }) => at[2]),
    segmentY2: column(({ at }) => at[3]),
    segmentDuctMm: column(({ ductMm }) => ductMm),
    segmentBendRadiusMm: column(({ bendMm }) => bendMm),
    // the report never looks at how the network came about
    trace: {} as NetworkTrace,
  };
}

/** Series and parallel by hand. */
function sampleFlow(network: Network, feedPa: number): FlowState {
  const { chip } = network;
  const resistance = Float64Array.from(
    REACHES,
    (_, reach) =>
      resistancePerLength(
        ductForm(chip.channels[network.reachChannel[reach]].ductWidthMm / 1000, DEPTH_MM / 1000),
        { viscosityPaS: fluid.viscosityPaS },
      ) *
      (network.reachDuctMm[reach] / 1000),
  );
  const [inlet, upper1, upper2, lower, , outlet] = resistance;
  const tubing = tubeResistance(0.5e-3, 0.3, fluid.viscosityPaS);
  const upper = upper1 + upper2;
  const lanes = 1 / (1 / upper + 1 / lower);
  const total = feedPa / (tubing + inlet + lanes + outlet);
  const upperFlow = (total * lanes) / upper;
  const lowerFlow = (total * lanes) / lower;
  const merge = total * outlet;
  const split = merge + total * lanes;
  const junction = merge + upperFlow * upper2;
  const feed = split + total * inlet;
  const reachFlow = Float64Array.of(total, upperFlow, upperFlow, lowerFlow, 0, total);
  return {
    nodePressure: Float64Array.of(feed, split, junction, merge, 0, junction),
    reachResistance: resistance,
    reachFlow,
    reachPressureDrop: reachFlow.map((flow, reach) => flow * resistance[reach]),
    portFlow: Float64Array.of(total, -total, 0),
    portPressure: Float64Array.of(feed, 0, junction),
    supplyPressure: Float64Array.of(feedPa, 0, junction),
    tubingResistance: Float64Array.of(tubing, 0, 0),
    nodePart: new Int32Array(NODES.length),
    parts: [{ nodes: NODES.length, ports: [0, 1, 2], status: 'solved', flowSumM3s: 0 }],
    worstImbalance: 1.2e-16,
    worstNode: 1,
  };
}
