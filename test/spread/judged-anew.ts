import type { RunNetwork } from '../../src/asked/run-network.ts';
import { densityAt, feelsTemperature, viscosityAt } from '../../src/chip/fluid.ts';
import { SectionList } from '../../src/chip/sections.ts';
import type { Chip, Fluid, Run } from '../../src/chip/types.ts';
import { findAll } from '../../src/findings/check.ts';
import { RULES } from '../../src/findings/rules.ts';
import type { TargetEntry } from '../../src/runsheet/types.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { observe, readTargets, targetValue } from '../../src/solve/targets-wanted.ts';
import type { FlowState } from '../../src/solve/types.ts';
import { uniformFrom } from '../../src/spread/low-discrepancy.ts';
import { deviate, listVariables, type Variable } from '../../src/spread/variables.ts';
import type { Varying } from './spread-of.ts';

/** Rules whose findings say that a window or a limit of the flow is not kept, whatever their severity. */
const FLOW_RULES = new Set([
  'shear-window',
  'residence-window',
  'flow-window',
  'pump-limit',
  'over-pressure',
  'under-pressure',
  'not-laminar',
]);
const RULES_OF_FLOW = RULES.filter(({ names }) => names.some((name) => FLOW_RULES.has(name)));

/**
 * 1 for each draw that keeps all that is asked, found a second way: every draw is made a chip of its own, solved and judged by the
 * rules that a check runs; windows of targets by what the command pump observes.
 */
export function goodDraws({ network, run, tolerances }: Varying, draws: number, seed: number): number[] {
  const { variables } = listVariables({ network, run }, tolerances);
  const uniform = uniformFrom(seed);
  return Array.from({ length: draws }, (_, i) => {
    const x = variables.map(({ tolerance }, k) => deviate(tolerance, uniform(k, i)));
    const deviation = deviationOf(variables, x);
    const varied = { ...network, chip: variedChip(network.chip, deviation) };
    return isGood({ network: varied, run: variedRun(run, deviation) }) ? 1 : 0;
  });
}

function isGood({ network, run }: RunNetwork): boolean {
  const flow = solveFlow(network, run);
  const { findings } = findAll({ chip: network.chip, run, network, flow }, RULES_OF_FLOW);
  return (
    findings.every(({ rule, accepted }) => !FLOW_RULES.has(rule) || accepted !== null) &&
    keepsTargets({ network, run }, flow)
  );
}

function keepsTargets(at: RunNetwork, flow: FlowState): boolean {
  return readTargets(at).every(({ entry, observed, measure }) => {
    const value = targetValue(measure, observe(flow, observed));
    return typeof entry.value === 'number' || isWithin(entry.value, value);
  });
}

function isWithin({ min, max }: Exclude<TargetEntry['value'], number>, value: number): boolean {
  return !(min !== null && value < min) && !(max !== null && value > max);
}

/** By how much one draw changes a value: the sum over the variables meant. */
type Deviation = (isMeant: (variable: Variable) => boolean, value: number) => number;

function deviationOf(variables: readonly Variable[], x: readonly number[]): Deviation {
  return (isMeant, value) =>
    variables.reduce((total, variable, k) => {
      if (!isMeant(variable)) return total;
      return total + (variable.tolerance.kind === 'relative' ? x[k] * value : x[k]);
    }, 0);
}

/** The chip with one draw's deviations in it. Lengths and joins stay those of the drawing, as the model of the spread has them. */
function variedChip(chip: Chip, sum: Deviation): Chip {
  const sections = new SectionList();
  const channels = chip.channels.map((channel, c) => {
    const depthMm =
      channel.depthMm +
      1000 *
        sum(
          (of) => of.kind === 'common depth' || (of.kind === 'depth' && of.layer === channel.layer),
          channel.depthMm / 1000,
        );
    const drawnWidthMm =
      channel.drawnWidthMm +
      1000 *
        sum(
          (of) => of.kind === 'mask width' || (of.kind === 'own width' && of.channel === c),
          channel.drawnWidthMm / 1000,
        );
    const ductWidthMm = drawnWidthMm + (channel.profile === 'isotropic' ? (Math.PI * depthMm) / 2 : 0);
    const section = sections.indexOf(channel.profile, ductWidthMm, depthMm);
    return { ...channel, depthMm, drawnWidthMm, ductWidthMm, section };
  });
  return { ...chip, channels, sections: sections.forms };
}

/** The run with the deviations of the same draw in it. */
function variedRun(run: Run, sum: Deviation): Run {
  const kelvin = run.fluid.temperatureK + sum(({ kind }) => kind === 'temperature', 0);
  const thinning = 1 + sum(({ kind }) => kind === 'viscosity', 1);
  const fluid: Fluid = {
    ...run.fluid,
    temperatureK: kelvin,
    viscosityPaS: viscosityAt(run.fluid, kelvin) * thinning,
    densityKgM3: densityAt(run.fluid, kelvin),
  };
  const ports = run.ports.map((port, p) => {
    const { condition } = port;
    const tubing = port.tubing.map((piece) => ({
      ...piece,
      boreM: piece.boreM + sum(({ kind }) => kind === 'bore', piece.boreM),
      // a piece at a temperature of its own is found from the mixture, which knows no thinning: its length bears it
      lengthM: piece.lengthM * (piece.temperatureK !== null && feelsTemperature(fluid) ? thinning : 1),
    }));
    if (condition.kind === 'pressure') {
      const { pressurePa } = condition;
      const more = sum((of) => of.kind === 'pressure' && of.port === p, pressurePa);
      return { ...port, tubing, condition: { ...condition, pressurePa: pressurePa + more } };
    }
    if (condition.kind === 'flow') {
      const { flowM3s } = condition;
      const more = sum((of) => of.kind === 'flow' && of.port === p, flowM3s);
      return { ...port, tubing, condition: { ...condition, flowM3s: flowM3s + more } };
    }
    return { ...port, tubing };
  });
  return { ...run, fluid, ports };
}
