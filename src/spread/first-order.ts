import { densityAt, viscosityAt } from '../chip/fluid.ts';
/**
 * First-order spread (JCGM 100:2008, 5.1.2): u²(y) = Σ_k (∂y/∂x_k)² u²(x_k) over independent x_k.
 * Derivatives are exact: of flows and pressures by the adjoint network (solve/sensitivity.ts), of duct resistance, shear and peak
 * velocity by the derivatives of their series (physics/duct.ts). Only two are difference quotients: that of viscosity and density by
 * temperature (fourth order), and that of the mean shear on an etched floor (physics/section.ts).
 * Cost: one more solve with the nominal factor for each flow or pressure, and O(reaches + channels) sums.
 */
import { GRAVITY_M_S2 } from '../physics/constants.ts';
import type { DuctFactors } from '../physics/duct.ts';
import { shearPerGradient } from '../physics/duct-state.ts';
import { tubeResistance } from '../physics/tube.ts';
import { type Gradient, gradientOfFlow, gradientOfInflow, gradientOfPressure } from '../solve/sensitivity.ts';
import { type SpreadModel, shareOf, sizeOf } from './model.ts';
import { type Output, outputValue, secondsIn } from './outputs.ts';
import { standardDeviation } from './variables.ts';

export interface FirstOrder {
  readonly sd: number;
  /** Variance that each cause brings, SI squared. */
  readonly variance: Float64Array;
}

export interface Derivatives {
  /** ∂y/∂x_k of every variable; null where the output does not exist or has no derivative (the share of a wall inside a window). */
  readonly of: (output: Output) => Float64Array | null;
}

export function firstOrder(model: SpreadModel, causes: number, row: Float64Array): FirstOrder {
  const variance = new Float64Array(causes);
  model.variables.forEach(({ cause, tolerance }, k) => {
    variance[cause] += (row[k] * standardDeviation(tolerance)) ** 2;
  });
  return { sd: Math.sqrt(variance.reduce((sum, part) => sum + part, 0)), variance };
}

/** Derivatives at the nominal values. */
export function derivativesOf(model: SpreadModel): Derivatives {
  const { network, nominalState: state } = model;
  const logs = logDerivatives(model);
  const rowOf = gradientRows(model, logs);
  // the reaches of a window are asked for by several outputs in a row
  const recent = new Map<number, Float64Array>();
  const flowRow = (reach: number): Float64Array => {
    let row = recent.get(reach);
    if (row === undefined) {
      row = rowOf(gradientOfFlow(model.factor.graphFactor, state.flow, reach));
      if (recent.size >= 16) recent.clear();
      recent.set(reach, row);
    }
    return row;
  };

  return {
    of: (output) => {
      const value = outputValue(output, model, state);
      if (Number.isNaN(value)) return null;
      const { subject } = output;
      switch (subject.kind) {
        case 'port flow':
          return portFlowRow(model, rowOf, subject.port);
        case 'port pressure': {
          const node = subject.at === 'chip' ? network.portNode : model.factor.prepared.driveNode;
          return pressureRow(node[subject.port]);
        }
        case 'node pressure':
          return pressureRow(subject.node);
        case 'reach flow':
          return flowRow(subject.reach).map((d) => subject.sign * d);
        case 'shear': {
          // τ = µ (R/µL) (τ/G) |Q|
          const row = magnitudeRow(subject.reach, value);
          addLogs(
            row,
            subject.reach,
            value,
            (of) => of.resistance + shearPerGradient(of, subject.wall, subject.at),
          );
          logs.viscosity.forEach((d, k) => {
            row[k] += value * d;
          });
          return row;
        }
        case 'velocity': {
          const row = magnitudeRow(subject.reach, value);
          addLogs(row, subject.reach, -value, () => 0, 1);
          return row;
        }
        case 'time': {
          const row = new Float64Array(model.variables.length);
          for (const reach of subject.reaches) {
            const seconds = secondsIn(reach, subject.at, model, state);
            magnitudeRow(reach, -seconds).forEach((d, k) => {
              row[k] += d;
            });
            addLogs(row, reach, seconds, (of) => (subject.at === 'mean' ? 0 : -of.peakOverMean), 1);
          }
          return row;
        }
        case 'share inside':
          return null;
        default:
          return subject satisfies never;
      }
    },
  };

  /** value · ∂ln|Q|/∂x_k */
  function magnitudeRow(reach: number, value: number): Float64Array {
    const flow = state.flow.flow[reach];
    return flow === 0
      ? new Float64Array(model.variables.length)
      : flowRow(reach).map((d) => (value * d) / flow);
  }

  /** Adds value · ∂ln/∂x_k of a factor of the reach's duct, and of its area to a power. */
  function addLogs(
    row: Float64Array,
    reach: number,
    value: number,
    pick: (of: DuctFactors) => number,
    areaPower = 0,
  ): void {
    const section = model.sections.ofReach[reach];
    const form = state.form[section];
    if (form === null) return;
    for (const { variable, byWidth, byDepth } of logs.ofSection[section]) {
      row[variable] +=
        value *
        (pick(form.byWidth) * byWidth + pick(form.byDepth) * byDepth + areaPower * (byWidth + byDepth));
    }
  }

  function pressureRow(node: number): Float64Array {
    const { graphFactor } = model.factor;
    const { anchor, fixedNodes } = graphFactor.analysis;
    const live = anchor[node];
    if (fixedNodes.includes(live)) return rowOf(heldPressure(model, live));
    return rowOf(gradientOfPressure(graphFactor, state.flow, live));
  }
}

/** ∂ln(width)/∂x and ∂ln(depth)/∂x of a section for each variable that moves it. */
interface SectionLog {
  readonly variable: number;
  readonly byWidth: number;
  readonly byDepth: number;
}

interface LogDerivatives {
  readonly ofSection: readonly (readonly SectionLog[])[];
  /** ∂ln(viscosity in the chip)/∂x_k, 0 for most. */
  readonly viscosity: Float64Array;
  /** ∂ρ/∂x_k. */
  readonly density: Float64Array;
}

function logDerivatives({ run, variables, sections }: SpreadModel): LogDerivatives {
  const { fluid } = run;
  const viscosity = new Float64Array(variables.length);
  const density = new Float64Array(variables.length);
  variables.forEach((variable, k) => {
    if (variable.kind === 'viscosity') viscosity[k] = shareOf(variable, 1, fluid.viscosityPaS);
    if (variable.kind !== 'temperature') return;
    viscosity[k] = slopeAt((kelvin) => viscosityAt(fluid, kelvin), fluid.temperatureK) / fluid.viscosityPaS;
    density[k] = slopeAt((kelvin) => densityAt(fluid, kelvin), fluid.temperatureK);
  });
  const ofSection = sections.section.map((section): SectionLog[] => {
    const { drawnWidthM, ductWidthM, depthM, profile, maskVariable, ownVariable } = section;
    const logs: SectionLog[] = [];
    for (const k of [maskVariable, ownVariable]) {
      if (k >= 0)
        logs.push({ variable: k, byWidth: sizeOf(variables[k], 1, drawnWidthM) / ductWidthM, byDepth: 0 });
    }
    for (const k of [section.depthVariable, section.commonDepthVariable]) {
      if (k < 0) continue;
      const deeper = sizeOf(variables[k], 1, depthM);
      const undercut = profile === 'isotropic' ? (Math.PI * deeper) / 2 : 0;
      logs.push({ variable: k, byWidth: undercut / ductWidthM, byDepth: deeper / depthM });
    }
    return logs;
  });
  return { ofSection, viscosity, density };
}

const STEP_K = 0.05;

/** f′ by the five-point formula, one-sided where f ends (it throws a RangeError there). */
function slopeAt(f: (x: number) => number, x: number): number {
  const h = STEP_K;
  const central = (): number => (f(x - 2 * h) - 8 * f(x - h) + 8 * f(x + h) - f(x + 2 * h)) / (12 * h);
  const oneSided = (s: number): number =>
    (-25 * f(x) + 48 * f(x + s) - 36 * f(x + 2 * s) + 16 * f(x + 3 * s) - 3 * f(x + 4 * s)) / (12 * s);
  for (const formula of [central, () => oneSided(h), () => oneSided(-h)]) {
    try {
      return formula();
    } catch (error) {
      // the published data end here: the next formula looks the other way
      if (!(error instanceof RangeError)) throw error;
    }
  }
  throw new RangeError(`there are no values on either side of ${x}`);
}

type GradientRow = (gradient: Gradient) => Float64Array;

/** From a gradient by resistances, pressures and injections to one by x: the chain rule, all edges summed by section first. */
function gradientRows(model: SpreadModel, logs: LogDerivatives): GradientRow {
  const { network, run, variables, drives, sections, factor, balancedBy, holder, nominalState } = model;
  const { ofReach } = sections;
  const { driveNode, tubingEdge } = factor.prepared;
  const { resistance } = factor.graphFactor;
  const tubing = tubingDerivatives(model, logs);
  const bySection = new Float64Array(sections.section.length);

  return (gradient) => {
    const row = new Float64Array(variables.length);
    bySection.fill(0);
    let whole = 0;
    for (let r = 0; r < network.reachCount; r++) {
      const byLog = gradient.resistance[r] * resistance[r];
      // parts without a pressure or a size have no flows; they do not touch this output
      if (Number.isNaN(byLog)) continue;
      whole += byLog;
      bySection[ofReach[r]] += byLog;
    }
    for (let s = 0; s < bySection.length; s++) {
      const form = nominalState.form[s];
      if (form === null || bySection[s] === 0) continue;
      for (const { variable, byWidth, byDepth } of logs.ofSection[s]) {
        row[variable] +=
          bySection[s] * (form.byWidth.resistance * byWidth + form.byDepth.resistance * byDepth);
      }
    }
    for (let k = 0; k < row.length; k++) row[k] += whole * logs.viscosity[k];
    for (let p = 0; p < run.ports.length; p++) {
      const edge = tubingEdge[p];
      if (edge < 0 || Number.isNaN(gradient.resistance[edge])) continue;
      for (const { variable, byX } of tubing[p]) row[variable] += gradient.resistance[edge] * byX;
    }
    addDrives(row, gradient);
    return row;
  };

  function addDrives(row: Float64Array, gradient: Gradient): void {
    variables.forEach((variable, k) => {
      if (variable.kind === 'pressure') {
        const node = driveNode[variable.port];
        if (holder[variable.port] !== variable.port) return;
        row[k] += known(gradient.pressure[node]) * sizeOf(variable, 1, pressureOf(variable.port));
      }
      if (variable.kind === 'flow') {
        const { port } = variable;
        const drive = drives[port];
        if (drive.kind !== 'flow') return;
        const size = sizeOf(variable, 1, drive.flowM3s);
        const follower = balancedBy[port];
        if (follower === port) return;
        row[k] += known(gradient.injection[driveNode[port]]) * size;
        if (follower >= 0) row[k] -= known(gradient.injection[driveNode[follower]]) * size;
      }
    });
    run.ports.forEach(({ condition }, p) => {
      const node = driveNode[p];
      if (condition.kind !== 'head' || holder[p] !== p) return;
      const byDensity = known(gradient.pressure[node]) * GRAVITY_M_S2 * condition.headM;
      if (byDensity === 0) return;
      for (let k = 0; k < row.length; k++) row[k] += byDensity * logs.density[k];
    });
  }

  function pressureOf(port: number): number {
    const drive = drives[port];
    return drive.kind === 'pressure' ? drive.pressurePa : 0;
  }
}

/** ∂R/∂x of each port's tubing. */
function tubingDerivatives(
  { run, variables }: SpreadModel,
  logs: LogDerivatives,
): readonly (readonly { readonly variable: number; readonly byX: number }[])[] {
  const { fluid } = run;
  return run.ports.map(({ tubing }) =>
    variables.flatMap((variable, k) => {
      let byX = 0;
      for (const { boreM, lengthM, temperatureK } of tubing) {
        const viscosityPaS = temperatureK === null ? fluid.viscosityPaS : viscosityAt(fluid, temperatureK);
        const R = tubeResistance(boreM, lengthM, viscosityPaS);
        if (variable.kind === 'bore') byX -= (4 * R * sizeOf(variable, 1, boreM)) / boreM;
        // a piece with a temperature of its own keeps it
        if (variable.kind === 'viscosity' || (variable.kind === 'temperature' && temperatureK === null))
          byX += R * logs.viscosity[k];
      }
      return byX === 0 ? [] : [{ variable: k, byX }];
    }),
  );
}

function portFlowRow(model: SpreadModel, rowOf: GradientRow, port: number): Float64Array {
  const { drives, factor, nominalState } = model;
  const { driveNode } = factor.prepared;
  if (drives[port].kind !== 'pressure') return givenFlowRow(model, port);
  const row = rowOf(gradientOfInflow(factor.graphFactor, nominalState.flow, driveNode[port]));
  // flows given at the node that this port holds pass straight through it
  drives.forEach(({ kind }, p) => {
    if (kind !== 'flow' || driveNode[p] !== driveNode[port]) return;
    givenFlowRow(model, p).forEach((d, k) => {
      row[k] -= d;
    });
  });
  return row;
}

/** ∂(given flow of a port)/∂x_k. */
function givenFlowRow({ variables, drives, balancedBy }: SpreadModel, port: number): Float64Array {
  const row = new Float64Array(variables.length);
  variables.forEach((variable, k) => {
    if (variable.kind !== 'flow') return;
    const drive = drives[variable.port];
    if (drive.kind !== 'flow' || balancedBy[variable.port] === variable.port) return;
    const size = sizeOf(variable, 1, drive.flowM3s);
    if (variable.port === port) row[k] += size;
    else if (balancedBy[variable.port] === port) row[k] -= size;
  });
  return row;
}

/** Gradient of a pressure that is given. */
function heldPressure({ factor }: SpreadModel, node: number): Gradient {
  const { graph } = factor.prepared;
  const pressure = new Float64Array(graph.nodeCount);
  pressure[node] = 1;
  return {
    resistance: new Float64Array(graph.from.length),
    pressure,
    injection: new Float64Array(graph.nodeCount),
  };
}

/** NaN stands for a part that does not touch the output. */
function known(value: number): number {
  return Number.isNaN(value) ? 0 : value;
}
