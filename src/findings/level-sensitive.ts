import { reachesOfChannel } from '../asked/reaches.ts';
import { hasWindow } from '../asked/windows.ts';
import { isAbove } from '../asked/within.ts';
import { reachName } from '../network/names.ts';
/**
 * How far a small change of liquid level moves the flows that have a window. A port's level h stands for ρ g h, and flows are linear in pressures, so the change
 * is exact: of all windowed flows by one solve per port with a level, or of one flow by all ports by one adjoint solve, whichever are fewer.
 */
import { GRAVITY_M_S2 } from '../physics/constants.ts';
import { formatNumber, formatShare } from '../runsheet/shown.ts';
import { drivesOf } from '../solve/drives.ts';
import { factorFlow, kindsOf, loadOf, prepareFlow } from '../solve/flow-state.ts';
import { solveGraph } from '../solve/graph.ts';
import { gradientOfFlow } from '../solve/sensitivity.ts';
import type { FindingContext } from './context.ts';
import { middleOfReach, othersText, reachNames, worstReach } from './reaches.ts';
import { found, notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import { showFor } from './words.ts';

export const LEVEL_CHANGE_M = 5e-3;
export const LEVEL_SHARE = 0.05;

/** Do a few millimetres of liquid in an open well or reservoir move a flow that has a window. */
export const levelRules: readonly Rule[] = [{ names: ['level-sensitive'], run: levelSensitive }];

/** What the most felt port does to one reach when its level changes. */
interface Move {
  readonly port: number;
  /** m³/s, a size. */
  readonly changeM3s: number;
}

function levelSensitive(context: FindingContext): RuleOutcome {
  const { chip, run, network, flow } = context;
  if (flow === null) return notRun('level-sensitive', 'nothing was solved');
  const windowed = run.channels.map(hasWindow);
  if (!windowed.includes(true)) return notRun('level-sensitive', 'no channel is given a window');
  const levels = run.ports.flatMap(({ condition }, port) =>
    condition.kind === 'head' || condition.kind === 'open' ? [port] : [],
  );
  if (levels.length === 0) return found([]);
  const watched = Array.from({ length: network.reachCount }, (_, reach) => reach).filter(
    (reach) => windowed[network.reachChannel[reach]] && isKnown(flow.reachFlow[reach]),
  );
  const moves = largestMoves(context, levels, watched);
  const show = showFor(context);
  return found(
    chip.channels.flatMap((_, c) => {
      if (!windowed[c]) return [];
      const worst = worstReach(
        reachesOfChannel(context.network, c),
        (reach) => {
          const move = moves.get(reach);
          const flowM3s = Math.abs(flow.reachFlow[reach]);
          if (move === undefined || !isAbove(move.changeM3s, LEVEL_SHARE * flowM3s)) return null;
          return { ...move, flowM3s };
        },
        ({ changeM3s, flowM3s }) => changeM3s / flowM3s,
      );
      if (worst === null) return [];
      const { port, changeM3s, flowM3s } = worst.fault;
      const name = reachName(network, worst.reach);
      const { name: portName } = chip.ports[port];
      const { condition } = run.ports[port];
      const level = `${formatNumber(LEVEL_CHANGE_M * 1e3)} mm of liquid level at ${portName} (${condition.kind})`;
      const share = flowM3s === 0 ? null : changeM3s / flowM3s;
      const moved =
        share === null
          ? `makes ${show.text('flow', changeM3s)} flow through ${name}, which is at rest now`
          : `moves the flow through ${name} by ${formatShare(share)} of ${show.text('flow', flowM3s)}`;
      return [
        toFinding('level-sensitive', 'caution', {
          message: `${level} ${moved}, more than ${formatShare(LEVEL_SHARE)}${othersText(context, worst)}`,
          fix: `drive ${name} by more pressure or by a given flow, add tubing of more resistance, or keep the level at ${portName} to ${levelText(share)} with a wide reservoir or an overflow`,
          at: middleOfReach(network, worst.reach),
          names: [...reachNames(context, worst), portName],
          measure: { value: share, limit: LEVEL_SHARE, unit: '' },
        }),
      ];
    }),
  );
}

function isKnown(value: number): boolean {
  return !Number.isNaN(value);
}

/** The level that moves the flow by the share that is allowed. */
function levelText(share: number | null): string {
  if (share === null) return 'a steady height';
  return `${formatNumber((LEVEL_CHANGE_M * 1e3 * LEVEL_SHARE) / share, 2)} mm`;
}

/** By reach: the port whose level moves it most, of equals the first drawn. */
function largestMoves(
  { network, run }: FindingContext,
  levels: readonly number[],
  watched: readonly number[],
): ReadonlyMap<number, Move> {
  const pressurePa = run.fluid.densityKgM3 * GRAVITY_M_S2 * LEVEL_CHANGE_M;
  const prepared = prepareFlow(network, run);
  const drives = drivesOf(run);
  const factor = factorFlow(prepared, kindsOf(drives));
  const moves = new Map<number, Move>();
  const see = (reach: number, port: number, change: number): void => {
    const changeM3s = Math.abs(change);
    // changes that differ by rounding only are equal
    if (changeM3s > 0 && changeM3s > (moves.get(reach)?.changeM3s ?? 0) * (1 + 1e-9))
      moves.set(reach, { port, changeM3s });
  };
  if (levels.length <= watched.length) {
    const nought = new Float64Array(prepared.graph.nodeCount);
    for (const port of levels) {
      const fixedPressure = nought.slice();
      fixedPressure[prepared.driveNode[port]] = pressurePa;
      const { flow } = solveGraph(factor.graphFactor, { fixedPressure, injection: nought });
      for (const reach of watched) see(reach, port, flow[reach]);
    }
  } else {
    const flow = solveGraph(factor.graphFactor, loadOf(factor, drives));
    for (const reach of watched) {
      const { pressure } = gradientOfFlow(factor.graphFactor, flow, reach);
      for (const port of levels) see(reach, port, pressure[prepared.driveNode[port]] * pressurePa);
    }
  }
  return moves;
}
