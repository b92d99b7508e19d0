import { assembleChip, type ChipInput } from './chip/assemble.ts';
import type { Chip, Run } from './chip/types.ts';
import { findAll } from './findings/check.ts';
import type { FindingReport } from './findings/types.ts';
import { networkOf } from './network/network-of.ts';
import type { Network } from './network/types.ts';
import { drivesOf } from './solve/drives.ts';
import { factorFlow, flowStateOf, kindsOf, prepareFlow } from './solve/flow-state.ts';
import { centrelineFlow, type JointShares, jointShares } from './solve/joint-share.ts';
import { type FoundSettings, findSettings } from './solve/targets.ts';
import type { FlowState } from './solve/types.ts';

/** A layout under one run sheet (or one of its cases), joined, solved and judged. */
export interface Analysis {
  readonly chip: Chip;
  /** At found settings: with those in place. */
  readonly run: Run;
  readonly network: Network;
  readonly flow: FlowState;
  readonly findings: FindingReport;
  /** How far joints that are not resolved could move flows and pressures. */
  readonly jointShares: JointShares;
  /** The flows that counting centrelines alone would give; found when asked for. */
  readonly centrelineFlow: () => FlowState;
  /** Settings that meet the targets, where they were to be found and there are any. */
  readonly found?: FoundSettings;
}

export interface AnalysisInput extends ChipInput {
  /** Network of another case of the same layout: used again where this case draws and etches the chip alike. */
  readonly alike?: Network;
  /** Find the settings that meet the run sheet's targets first, and judge the chip at those. */
  readonly pump?: boolean;
}

/** Tells which stage is about to begin; a caller may show it, or throw to stop. */
export type OnStage = (stage: string) => Promise<void>;

/**
 * Layout × RunSheet → Chip → Network → FlowState → findings: the main job on one case.
 *
 * Errors: InputError where the run sheet and the layout do not fit each other, a size limit is passed, or a target can't be met.
 */
export async function analyse(input: AnalysisInput, onStage: OnStage = async () => {}): Promise<Analysis> {
  const assembled = assembleChip(input);
  await onStage('joining channels');
  const network = networkOf(assembled.chip, input.alike);
  const { chip } = network;
  const mayFind = input.pump === true && input.sheet !== null && input.sheet.targets.length > 0;
  if (mayFind) await onStage('finding settings');
  const settings = mayFind ? findSettings({ network, run: assembled.run }) : null;
  const found = settings === null ? {} : { found: settings };
  const run = settings === null ? assembled.run : runAt(assembled.run, settings);
  await onStage('solving flows');
  const drives = drivesOf(run);
  const factor = factorFlow(prepareFlow(network, run), kindsOf(drives));
  const flow = settings?.flow ?? flowStateOf(factor, drives);
  await onStage('checking rules');
  return {
    chip,
    run,
    network,
    flow,
    findings: findAll({ chip, run, network, flow, ...found }),
    jointShares: jointShares({ network, run }, factor, drives, flow),
    centrelineFlow: () => centrelineFlow(network, factor, drives),
    ...found,
  };
}

/** A run with found settings in place of what its ports were set to. */
function runAt(run: Run, { conditions }: FoundSettings): Run {
  return { ...run, ports: run.ports.map((port, i) => ({ ...port, condition: conditions[i] })) };
}
