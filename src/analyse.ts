import { type Assembled, assembleChip } from './chip/assemble.ts';
import type { Chip, Run } from './chip/types.ts';
import { findAll } from './findings/check.ts';
import type { FindingReport } from './findings/types.ts';
import type { Layout } from './layout/types.ts';
import { networkOf } from './network/alike.ts';
import type { Network } from './network/types.ts';
import type { RunSheet } from './runsheet/types.ts';
import { drivesOf } from './solve/drives.ts';
import { factorFlow, flowStateOf, kindsOf, prepareFlow } from './solve/flow-state.ts';
import { centrelineFlow, type JointShares, jointShares } from './solve/joint-share.ts';
import { type FoundSettings, findSettings } from './solve/targets.ts';
import type { FlowState } from './solve/types.ts';

/** A layout under one run sheet (or one of its cases), joined, solved and judged. */
export interface Analysis {
  readonly chip: Chip;
  readonly run: Run;
  readonly network: Network;
  readonly flow: FlowState;
  readonly findings: FindingReport;
  /** How far joints that are not resolved could move flows and pressures. */
  readonly jointShares: JointShares;
  /** The flows that counting centrelines alone would give; found when asked for. */
  readonly centrelineFlow: () => FlowState;
}

export interface AnalysisInput {
  readonly layout: Layout;
  readonly sheet: RunSheet | null;
  /** File name of the layout, for messages and the report. */
  readonly file: string;
  readonly layoutSha256: string;
  /** Network of another case of the same layout: used again where this case draws and etches the chip alike. */
  readonly alike?: Network;
}

/** Tells which stage is about to begin; a caller may show it, or throw to stop. */
export type OnStage = (stage: string) => Promise<void>;

/**
 * Layout × RunSheet → Chip → Network → FlowState → findings: the main job on one case.
 *
 * Errors: InputError where the run sheet and the layout do not fit each other, or a size limit is passed.
 */
export async function analyse(input: AnalysisInput, onStage: OnStage = async () => {}): Promise<Analysis> {
  const { network, run } = await join(input, onStage);
  return judge(network, run, onStage);
}

/**
 * The same with the settings that meet the run sheet's targets found first, and the chip judged at those settings.
 *
 * Errors: InputError as analyse; and where the targets can't be met, at the target's line.
 */
export async function analysePump(
  input: AnalysisInput,
  onStage: OnStage = async () => {},
): Promise<{ readonly analysis: Analysis; readonly settings: FoundSettings }> {
  const { network, run } = await join(input, onStage);
  await onStage('finding settings');
  const settings = findSettings({ network, run });
  const ports = run.ports.map((port, i) => ({ ...port, condition: settings.conditions[i] }));
  return { analysis: await judge(network, { ...run, ports }, onStage, settings), settings };
}

async function join(input: AnalysisInput, onStage: OnStage): Promise<{ network: Network; run: Run }> {
  const { chip, run }: Assembled = assembleChip(input);
  await onStage('joining channels');
  return { network: networkOf(chip, input.alike), run };
}

/** Solves a network (unless settings were found, and its flow with them) and runs the rules on it. */
async function judge(network: Network, run: Run, onStage: OnStage, found?: FoundSettings): Promise<Analysis> {
  const { chip } = network;
  await onStage('solving flows');
  const drives = drivesOf(run);
  const factor = factorFlow(prepareFlow(network, run), kindsOf(drives));
  const flow = found?.flow ?? flowStateOf(factor, drives);
  await onStage('checking rules');
  return {
    chip,
    run,
    network,
    flow,
    findings: findAll({ chip, run, network, flow, ...(found === undefined ? {} : { found }) }),
    jointShares: jointShares({ network, run }, factor, drives, flow),
    centrelineFlow: () => centrelineFlow(network, factor, drives),
  };
}
