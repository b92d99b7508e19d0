import { channelForm } from '../chip/sections.ts';
import type { Chip, Run } from '../chip/types.ts';
import type { FindingReport } from '../findings/types.ts';
import { roomLengthM } from '../network/lengths.ts';
import { nodeName, reachName, segmentName } from '../network/names.ts';
import { type Network, NODE_KINDS } from '../network/types.ts';
import { deanNumber } from '../physics/dean.ts';
import { fastestTime, residenceTime, shareInside, volumeOf } from '../physics/duct-state.ts';
import { tubeVolume } from '../physics/tube.ts';
import type { RunSheet } from '../runsheet/types.ts';
import type { JointShares } from '../solve/joint-share.ts';
import { reachState } from '../solve/reach-state.ts';
import type { FoundSettings } from '../solve/targets.ts';
import type { FlowState } from '../solve/types.ts';
import type { Spread } from '../spread/types.ts';
import { RESULT_VERSION } from '../version.ts';
import { known } from './known.ts';
import { pumpPartOf } from './pump-part.ts';
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
import { spreadPartOf } from './spread-part.ts';

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

/** One case, computed. */
export interface CaseInput {
  /** null when the run sheet has no cases. */
  readonly name: string | null;
  readonly chip: Chip;
  readonly run: Run;
  readonly network: Network;
  readonly flow: FlowState;
  readonly findings: FindingReport;
  /** How far unresolved joints could move flows and pressures. */
  readonly jointShares?: JointShares;
  /** The flows that counting centrelines alone would give, for the report's list of joints; found when asked for. */
  readonly centrelineFlow?: () => FlowState;
  /** Settings found for targets, at which the chip was computed. */
  readonly found?: FoundSettings;
  /** How far tolerances move it. */
  readonly spread?: Spread;
}

export interface ReportInput {
  readonly tool: { readonly name: string; readonly version: string };
  /** File name as printed, and the hash of the file. */
  readonly layout: { readonly file: string; readonly sha256: string };
  /** null without a run sheet. */
  readonly sheet: (Pick<RunSheet, 'file' | 'cases'> & { readonly sha256: string }) | null;
  /** In the order given; one without a name stands alone. */
  readonly cases: readonly CaseInput[];
}

/**
 * The result of a layout under its cases in SI units, keys as in the JSON document. Nodes, reaches and segments are rows made on
 * demand. What does not exist (a sealed branch's residence time, a pressure without reference) is null.
 */
export function buildResult(input: ReportInput): Result {
  const [first] = input.cases;
  if (first === undefined) throw new RangeError('a result needs at least one case');
  const head = headOf(input, first.chip);
  if (first.name === null) return { ...head, ...casePartOf(first) };
  const parts = input.cases.map((one) => ({ case: one.name ?? '', ...casePartOf(one) }));
  return {
    ...head,
    verdict: parts.some((part) => part.verdict === 'hold') ? 'hold' : 'ready',
    cases: parts,
  };
}

function headOf({ tool, layout, sheet }: ReportInput, chip: Chip): Head {
  return {
    tool: { name: tool.name, version: tool.version, result_version: RESULT_VERSION },
    layout: {
      file: layout.file,
      sha256: layout.sha256,
      width_mm: chip.widthMm,
      height_mm: chip.heightMm,
      unit_mm: chip.unitMm,
      ignored: chip.ignored,
    },
    run_sheet: sheet === null ? null : { file: withoutFolders(sheet.file), sha256: sheet.sha256 },
  };
}

function casePartOf(input: CaseInput): CasePart {
  const { chip, run, network, flow, findings } = input;
  return {
    fluid: {
      name: run.fluid.name,
      temperature_c: celsius(run.fluid.temperatureK),
      viscosity_pa_s: run.fluid.viscosityPaS,
      density_kg_m3: run.fluid.densityKgM3,
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
    ports: chip.ports.map((_, port) => portRow(input, port)),
    nodes: rows(network.nodeCount, (node) => nodeRow(network, flow, node)),
    reaches: rows(network.reachCount, (reach) => reachRow(input, reach)),
    segments: rows(network.segmentCount, (segment) => segmentRow(input, segment)),
    findings: findings.findings.map(findingRow),
    not_run: findings.notRun.map(({ rule, why }) => ({ rule, why })),
    balance: {
      worst_imbalance: known(flow.worstImbalance) ?? 0,
      worst_node: flow.worstNode < 0 ? null : nodeName(network, flow.worstNode),
    },
    ...(input.found === undefined ? {} : { pump: pumpPartOf(network, input.found) }),
    ...(input.spread === undefined ? {} : { spread: spreadPartOf(input.spread) }),
  };
}

/** Kelvin to degrees Celsius without the last bits that the subtraction leaves (310.15 K is 37 °C). */
function celsius(kelvin: number): number {
  return Number((kelvin - 273.15).toFixed(9));
}

function portRow({ chip, run, flow, jointShares }: CaseInput, index: number): PortRow {
  const port = chip.ports[index];
  const { condition, tubing } = run.ports[index];
  const flowM3s = flow.portFlow[index];
  const volumeM3 =
    tubing.length === 0
      ? null
      : tubing.reduce((sum, piece) => sum + tubeVolume(piece.boreM, piece.lengthM), 0);
  return {
    name: port.name,
    x_mm: port.xMm,
    y_mm: port.yMm,
    diameter_mm: 2 * port.radiusMm,
    condition: condition.kind,
    pressure_pa: known(flow.portPressure[index]),
    supply_pressure_pa: known(flow.supplyPressure[index]),
    flow_m3_s: known(flowM3s),
    tubing_volume_m3: volumeM3,
    tubing_time_s: volumeM3 === null ? null : known(residenceTime(volumeM3, flowM3s)),
    joint_flow_share: known(jointShares?.portFlow[index]),
    joint_pressure_share: known(jointShares?.portPressure[index]),
  };
}

function nodeRow(network: Network, flow: FlowState, node: number): NodeRow {
  return {
    name: nodeName(network, node),
    kind: NODE_KINDS[network.nodeKind[node]],
    x_mm: network.nodeX[node],
    y_mm: network.nodeY[node],
    pressure_pa: known(flow.nodePressure[node]),
  };
}

function reachRow(input: CaseInput, reach: number): ReachRow {
  const { network, run, flow, jointShares } = input;
  const { chip } = network;
  const channel = chip.channels[network.reachChannel[reach]];
  const form = channelForm(chip, network.reachChannel[reach]);
  const state = reachState(input, reach);
  const bendM = tightestBendM(network, reach);
  const window = run.channels[network.reachChannel[reach]]?.wallShear ?? null;
  const roomM = roomLengthM(network, reach);
  return {
    name: reachName(network, reach),
    channel: channel.name,
    layer: chip.layers[channel.layer].name || null,
    from: nodeName(network, network.reachFrom[reach]),
    to: nodeName(network, network.reachTo[reach]),
    width_m: known(channel.ductWidthMm / 1000),
    depth_m: known(channel.depthMm / 1000),
    drawn_length_m: network.reachDrawnMm[reach] / 1000,
    length_m: network.reachDuctMm[reach] / 1000,
    joint_length_m: network.reachJointMm[reach] / 1000,
    resistance_pa_s_m3: known(flow.reachResistance[reach]),
    flow_m3_s: known(flow.reachFlow[reach]),
    pressure_drop_pa: known(flow.reachPressureDrop[reach]),
    mean_velocity_m_s: known(state?.meanVelocity),
    peak_velocity_m_s: known(state?.peakVelocity),
    reynolds: known(state?.reynolds),
    dean:
      bendM === 0 ? null : known(state && deanNumber(state.reynolds, state.form.hydraulicDiameterM, bendM)),
    entrance_length_m: known(state?.entranceM),
    wall_shear_floor_mean_pa: known(state?.floorMeanPa),
    wall_shear_floor_peak_pa: known(state?.floorPeakPa),
    wall_shear_side_mean_pa: known(state?.sideMeanPa),
    wall_shear_side_peak_pa: known(state?.sidePeakPa),
    floor_share_inside_window:
      window && known(state && shareInside(state, 'floor', { minPa: window.min, maxPa: window.max })),
    residence_time_s: known(form && residenceTime(volumeOf(form, roomM), flow.reachFlow[reach])),
    fastest_time_s: known(state && fastestTime(state, roomM)),
    volume_m3: known(form && volumeOf(form, roomM)),
    joint_flow_share: known(jointShares?.reachFlow[reach]),
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

function segmentRow(input: CaseInput, segment: number): SegmentRow {
  const { network, flow } = input;
  const reach = network.segmentReach[segment];
  const state = reachState(input, reach);
  const ductMm = network.segmentDuctMm[segment];
  const resistance = flow.reachResistance[reach] * (ductMm / network.reachDuctMm[reach]);
  return {
    name: segmentName(network, segment),
    reach: reachName(network, reach),
    x1_mm: network.segmentX1[segment],
    y1_mm: network.segmentY1[segment],
    x2_mm: network.segmentX2[segment],
    y2_mm: network.segmentY2[segment],
    length_m: ductMm / 1000,
    resistance_pa_s_m3: known(resistance),
    pressure_drop_pa: known(resistance * flow.reachFlow[reach]),
    wall_shear_floor_mean_pa: known(state?.floorMeanPa),
    wall_shear_floor_peak_pa: known(state?.floorPeakPa),
    residence_time_s: known(state && residenceTime(volumeOf(state.form, ductMm) / 1000, state.flowM3s)),
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
