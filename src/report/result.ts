import type { Chip, Port } from '../chip/types.ts';
import type { FindingReport } from '../findings/types.ts';
import { type Network, NODE_KINDS } from '../network/types.ts';
import { tubeVolume } from '../physics/tube.ts';
import type { JointShares } from '../solve/joint-share.ts';
import type { FlowState } from '../solve/types.ts';
import { RESULT_VERSION } from '../version.ts';
import { known } from './known.ts';
import type {
  BalanceRow,
  CountsRow,
  FindingRow,
  FluidRow,
  LayoutRow,
  NodeRow,
  NotRunRow,
  PortRow,
  PumpPart,
  ReachRow,
  RunSheetRow,
  SegmentRow,
  SpreadPart,
  ToolRow,
} from './result-rows.ts';
import { type Rows, rows } from './rows.ts';
import { sectionCache } from './section-values.ts';

/** What one case adds: everything but tool, layout and run sheet. Keys and their order are those of the JSON document. */
export interface CasePart {
  readonly fluid: FluidRow;
  readonly verdict: 'ready' | 'hold';
  readonly counts: CountsRow;
  readonly ports: readonly PortRow[];
  readonly nodes: Rows<NodeRow>;
  readonly reaches: Rows<ReachRow>;
  readonly segments: Rows<SegmentRow>;
  readonly findings: readonly FindingRow[];
  readonly not_run: readonly NotRunRow[];
  readonly balance: BalanceRow;
  readonly pump?: PumpPart;
  readonly spread?: SpreadPart;
}

interface Head {
  readonly tool: ToolRow;
  readonly layout: LayoutRow;
  readonly run_sheet: RunSheetRow;
}

export interface SingleResult extends Head, CasePart {}

/** One layout under several cases; the verdict is `hold` when any case holds. */
export interface CasesResult extends Head {
  readonly verdict: 'ready' | 'hold';
  readonly cases: readonly ({ readonly case: string } & CasePart)[];
}

export type Result = SingleResult | CasesResult;

export interface ResultInput {
  readonly tool: { readonly name: string; readonly version: string };
  readonly chip: Chip;
  readonly network: Network;
  readonly flow: FlowState;
  readonly findings: FindingReport;
  /** File name of the layout as printed. */
  readonly layoutFile: string;
  /** How far unresolved joints could move flows and pressures. */
  readonly jointShares?: JointShares;
  /** The flows that counting centrelines alone would give, for the report's list of joints; found when asked for. */
  readonly centrelineFlow?: () => FlowState;
  readonly pump?: PumpPart;
  readonly spread?: SpreadPart;
}

/**
 * The result of one case in SI units, keys as in the JSON document. Nodes, reaches and segments are rows made on demand.
 * What does not exist (a sealed branch's residence time, a pressure without reference) is null.
 */
export function buildResult(input: ResultInput): SingleResult {
  return { ...headOf(input), ...casePartOf(input) };
}

/** Several cases of one layout in one document, in the order given. */
export function buildCasesResult(
  cases: readonly { readonly name: string; readonly input: ResultInput }[],
): CasesResult {
  if (cases.length === 0) throw new RangeError('a result of cases needs at least one case');
  const parts = cases.map(({ name, input }) => ({ case: name, ...casePartOf(input) }));
  return {
    ...headOf(cases[0].input),
    verdict: parts.some((part) => part.verdict === 'hold') ? 'hold' : 'ready',
    cases: parts,
  };
}

function headOf({ tool, chip, layoutFile }: ResultInput): Head {
  return {
    tool: { name: tool.name, version: tool.version, result_version: RESULT_VERSION },
    layout: {
      file: layoutFile,
      sha256: chip.layoutSha256,
      width_mm: chip.widthMm,
      height_mm: chip.heightMm,
      unit_mm: chip.unitMm,
      ignored: chip.ignored,
    },
    run_sheet:
      chip.sheet === null ? null : { file: withoutFolders(chip.sheet.file), sha256: chip.sheet.sha256 },
  };
}

function casePartOf(input: ResultInput): CasePart {
  const { chip, network, flow, findings } = input;
  const sectionOf = sectionCache();
  return {
    fluid: {
      name: chip.fluid.name,
      temperature_c: celsius(chip.fluid.temperatureK),
      viscosity_pa_s: chip.fluid.viscosityPaS,
      density_kg_m3: chip.fluid.densityKgM3,
    },
    verdict: findings.verdict,
    counts: {
      channels: chip.channels.length,
      ports: chip.ports.length,
      nodes: network.nodeCount,
      reaches: network.reachCount,
      segments: network.segmentCount,
      blockers: findings.counts.blockers,
      cautions: findings.counts.cautions,
      notes: findings.counts.notes,
      accepted: findings.counts.accepted,
      rules_not_run: findings.counts.rulesNotRun,
    },
    ports: chip.ports.map((port, i) => portRow(port, i, flow, input.jointShares)),
    nodes: rows(network.nodeCount, (node) => nodeRow(network, flow, node)),
    reaches: rows(network.reachCount, (reach) =>
      reachRow(network, flow, reach, sectionOf, input.jointShares),
    ),
    segments: rows(network.segmentCount, (segment) => segmentRow(network, flow, segment, sectionOf)),
    findings: findings.findings.map(findingRow),
    not_run: findings.notRun.map(({ rule, why }) => ({ rule, why })),
    balance: {
      worst_imbalance: known(flow.worstImbalance) ?? 0,
      worst_node: flow.worstNode < 0 ? null : network.nodeName(flow.worstNode),
    },
    ...(input.pump === undefined ? {} : { pump: input.pump }),
    ...(input.spread === undefined ? {} : { spread: input.spread }),
  };
}

/** Kelvin to degrees Celsius without the last bits that the subtraction leaves (310.15 K is 37 °C). */
function celsius(kelvin: number): number {
  return Number((kelvin - 273.15).toFixed(9));
}

function portRow(port: Port, index: number, flow: FlowState, jointShares: JointShares | undefined): PortRow {
  const flowM3s = flow.portFlow[index];
  const volumeM3 =
    port.tubing.length === 0
      ? null
      : port.tubing.reduce((sum, piece) => sum + tubeVolume(piece.boreM, piece.lengthM), 0);
  return {
    name: port.name,
    x_mm: port.xMm,
    y_mm: port.yMm,
    diameter_mm: 2 * port.radiusMm,
    condition: port.condition.kind,
    pressure_pa: known(flow.portPressure[index]),
    supply_pressure_pa: known(flow.supplyPressure[index]),
    flow_m3_s: known(flowM3s),
    tubing_volume_m3: volumeM3,
    tubing_time_s: volumeM3 === null ? null : known(volumeM3 / Math.abs(flowM3s)),
    joint_flow_share: jointShares === undefined ? null : known(jointShares.portFlow[index]),
    joint_pressure_share: jointShares === undefined ? null : known(jointShares.portPressure[index]),
  };
}

function nodeRow(network: Network, flow: FlowState, node: number): NodeRow {
  return {
    name: network.nodeName(node),
    kind: NODE_KINDS[network.nodeKind[node]],
    x_mm: network.nodeX[node],
    y_mm: network.nodeY[node],
    pressure_pa: known(flow.nodePressure[node]),
  };
}

type SectionOf = ReturnType<typeof sectionCache>;

function reachRow(
  network: Network,
  flow: FlowState,
  reach: number,
  sectionOf: SectionOf,
  jointShares: JointShares | undefined,
): ReachRow {
  const { chip } = network;
  const channel = chip.channels[network.reachChannel[reach]];
  const section = sectionOf(channel.profile, channel.ductWidthMm / 1000, channel.depthMm / 1000);
  const lengthM = network.reachDuctMm[reach] / 1000;
  const jointM = network.reachJointMm[reach] / 1000;
  const flowM3s = flow.reachFlow[reach];
  const state = section.at(flowM3s, chip.fluid);
  const bendM = tightestBendM(network, reach);
  const window = channel.settings?.wallShear ?? null;
  // what a joint adds is resistance, not room: volume and times use the length without it
  const roomM = lengthM - jointM;
  const volumeM3 = section.areaM2 * roomM;
  return {
    name: network.reachName(reach),
    channel: channel.name,
    layer: chip.layers[channel.layer].name || null,
    from: network.nodeName(network.reachFrom[reach]),
    to: network.nodeName(network.reachTo[reach]),
    width_m: known(channel.ductWidthMm / 1000),
    depth_m: known(channel.depthMm / 1000),
    drawn_length_m: network.reachDrawnMm[reach] / 1000,
    length_m: lengthM,
    joint_length_m: jointM,
    resistance_pa_s_m3: known(flow.reachResistance[reach]),
    flow_m3_s: known(flowM3s),
    pressure_drop_pa: known(flow.reachPressureDrop[reach]),
    mean_velocity_m_s: known(state.meanVelocity),
    peak_velocity_m_s: known(state.peakVelocity),
    reynolds: known(state.reynolds),
    dean: bendM === 0 ? null : known(section.dean(state.reynolds, bendM)),
    entrance_length_m: known(state.entranceLengthM),
    wall_shear_floor_mean_pa: known(state.floorMeanPa),
    wall_shear_floor_peak_pa: known(state.floorPeakPa),
    wall_shear_side_mean_pa: known(state.sideMeanPa),
    wall_shear_side_peak_pa: known(state.sidePeakPa),
    floor_share_inside_window:
      window === null
        ? null
        : known(
            section.floorShareInside(flowM3s, chip.fluid.viscosityPaS, {
              minPa: window.min,
              maxPa: window.max,
            }),
          ),
    residence_time_s: known(volumeM3 / Math.abs(flowM3s)),
    fastest_time_s: known(roomM / state.peakVelocity),
    volume_m3: known(volumeM3),
    joint_flow_share: jointShares === undefined ? null : known(jointShares.reachFlow[reach]),
  };
}

/** Smallest bend radius along a reach, 0 when it is straight. */
function tightestBendM(network: Network, reach: number): number {
  let radiusMm = Number.POSITIVE_INFINITY;
  for (let segment = network.firstSegment[reach]; segment < network.firstSegment[reach + 1]; segment++) {
    const bend = network.segmentBendRadiusMm[segment];
    if (bend > 0 && bend < radiusMm) radiusMm = bend;
  }
  return radiusMm === Number.POSITIVE_INFINITY ? 0 : radiusMm / 1000;
}

function segmentRow(network: Network, flow: FlowState, segment: number, sectionOf: SectionOf): SegmentRow {
  const { chip } = network;
  const reach = network.segmentReach[segment];
  const channel = chip.channels[network.reachChannel[reach]];
  const section = sectionOf(channel.profile, channel.ductWidthMm / 1000, channel.depthMm / 1000);
  const ductMm = network.segmentDuctMm[segment];
  const flowM3s = flow.reachFlow[reach];
  const resistance = flow.reachResistance[reach] * (ductMm / network.reachDuctMm[reach]);
  return {
    name: network.segmentName(segment),
    reach: network.reachName(reach),
    x1_mm: network.segmentX1[segment],
    y1_mm: network.segmentY1[segment],
    x2_mm: network.segmentX2[segment],
    y2_mm: network.segmentY2[segment],
    length_m: ductMm / 1000,
    resistance_pa_s_m3: known(resistance),
    pressure_drop_pa: known(resistance * flowM3s),
    wall_shear_floor_mean_pa: known(section.floorMeanPa(flowM3s, chip.fluid.viscosityPaS)),
    wall_shear_floor_peak_pa: known(section.floorPeakPa(flowM3s, chip.fluid.viscosityPaS)),
    residence_time_s: known((section.areaM2 * ductMm) / 1000 / Math.abs(flowM3s)),
  };
}

function findingRow(finding: FindingReport['findings'][number]): FindingRow {
  const { accepted } = finding;
  return {
    rule: finding.rule,
    severity: finding.severity,
    message: finding.message,
    fix: finding.fix,
    x_mm: finding.xMm,
    y_mm: finding.yMm,
    names: [...finding.names],
    measured: finding.measured,
    limit: finding.limit,
    unit: finding.unit,
    accepted:
      accepted === null
        ? null
        : { because: accepted.because, by: accepted.by, on: accepted.on, up_to: accepted.upTo },
  };
}

/** Reports name files only, so that they are the same wherever the program was started. */
function withoutFolders(file: string): string {
  return file.slice(Math.max(file.lastIndexOf('/'), file.lastIndexOf('\\')) + 1);
}
