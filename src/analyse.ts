import { assembleChip } from './chip/assemble.ts';
import type { Chip } from './chip/types.ts';
import { findAll } from './findings/check.ts';
import { pumpLimitRule } from './findings/pump-limit.ts';
import type { Rule } from './findings/rule.ts';
import { RULES } from './findings/rules.ts';
import type { FindingReport } from './findings/types.ts';
import type { Layout } from './layout/types.ts';
import { isDrawnAlike } from './network/alike.ts';
import { buildNetwork } from './network/build.ts';
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
  const chip = assembleChip(input);
  await onStage('joining channels');
  return judge(networkOf(chip, input.alike), RULES, onStage);
}

function networkOf(chip: Chip, alike: Network | undefined): Network {
  return alike !== undefined && isDrawnAlike(alike.chip, chip) ? { ...alike, chip } : buildNetwork(chip);
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
  const drawn = assembleChip(input);
  await onStage('joining channels');
  const joined = networkOf(drawn, input.alike);
  await onStage('finding settings');
  const settings = findSettings(joined);
  const ports = drawn.ports.map((port, i) => ({ ...port, condition: settings.conditions[i] }));
  const network = { ...joined, chip: { ...drawn, ports } };
  const rules = RULES.map((rule) => (rule.names.includes('pump-limit') ? pumpLimitRule(settings) : rule));
  return { analysis: await judge(network, rules, onStage, settings.flow), settings };
}

/** Solves a network (unless its flow is known already) and runs the rules on it. */
async function judge(
  network: Network,
  rules: readonly Rule[],
  onStage: OnStage,
  known?: FlowState,
): Promise<Analysis> {
  const { chip } = network;
  await onStage('solving flows');
  const drives = drivesOf(chip);
  const factor = factorFlow(prepareFlow(network), kindsOf(drives));
  const flow = known ?? flowStateOf(factor, drives);
  await onStage('checking rules');
  return {
    chip,
    network,
    flow,
    findings: findAll({ chip, network, flow }, rules),
    jointShares: jointShares(network, factor, drives, flow),
    centrelineFlow: () => centrelineFlow(network, factor, drives),
  };
}
