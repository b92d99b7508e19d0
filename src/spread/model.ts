/**
 * The chip as a function of what varies: x → duct forms, viscosity, pressures and flows.
 * Joins and duct lengths stay nominal. The analysis of the network is done once; each x costs its duct forms, one numeric
 * factorisation into the same memory and one solve.
 */

import type { RunNetwork } from '../asked/run-network.ts';
import { remembered } from '../by-key.ts';
import { densityAt, viscosityAt } from '../chip/fluid.ts';
import type { Fluid } from '../chip/types.ts';
import type { Network } from '../network/types.ts';
import { GRAVITY_M_S2 } from '../physics/constants.ts';
import type { DuctForm } from '../physics/duct.ts';
import { type FlowingFluid, resistancePerLength } from '../physics/duct-state.ts';
import { type Profile, sectionForm } from '../physics/section.ts';
import { tubeResistance } from '../physics/tube.ts';
import { drivesOf, type PortDrive } from '../solve/drives.ts';
import {
  type FlowFactor,
  factorFlow,
  flowStateOf,
  kindsOf,
  loadOf,
  prepareFlow,
} from '../solve/flow-state.ts';
import { factorGraph, type GraphFactor, type GraphFlow, solveGraph } from '../solve/graph.ts';
import type { FlowState } from '../solve/types.ts';
import type { Variable } from './variables.ts';

/** What one x makes of the chip. Its columns are overwritten by the next x. */
export interface ChipState {
  /** Duct of each section, in the order of `SpreadModel.sections`; null where a width or depth is unknown. */
  readonly form: readonly (DuctForm | null)[];
  readonly fluid: FlowingFluid;
  readonly flow: GraphFlow;
  /** Given flow of each port into the chip, 0 for the others. */
  readonly givenFlow: Float64Array;
  /** The same by node of the graph, of all ports that act there. */
  readonly injection: Float64Array;
}

export interface SpreadModel extends RunNetwork {
  readonly variables: readonly Variable[];
  readonly drives: readonly PortDrive[];
  readonly sections: Sections;
  /** At nominal values; its memory is never reused. */
  readonly factor: FlowFactor;
  readonly nominal: FlowState;
  readonly nominalState: ChipState;
  /** Of each port that is given a flow in a part without a pressure, the port of its part that takes what the others leave; else −1. */
  readonly balancedBy: Int32Array;
  /** Of each port that is held at a pressure, the first one that holds its node, which speaks for it; else −1. */
  readonly holder: Int32Array;
  /** The state at x, one number per variable; null where nothing can be computed: a width, depth, bore or viscosity that is not above 0, or a temperature that no data cover. */
  readonly at: (x: Float64Array) => ChipState | null;
}

/**
 * @param pressureNodes nodes of the network whose pressure a gradient will be asked for
 */
export function prepareModel(
  { network, run }: RunNetwork,
  variables: readonly Variable[],
  pressureNodes: readonly number[],
): SpreadModel {
  const drives = drivesOf(run);
  const kinds = kindsOf(drives);
  const factor = factorFlow(watching({ network, run }, kinds, pressureNodes), kinds);
  const nominal = flowStateOf(factor, drives);
  const balancedBy = balancingPorts(factor, drives);
  const sections = gatherSections(network, variables);
  const holder = holdersOf(factor.prepared.driveNode, drives);
  const parts = { network, run, variables, drives, sections, factor, balancedBy, holder };
  const at = evaluator(parts);
  const nominalState = at(new Float64Array(variables.length));
  if (nominalState === null) throw new RangeError('the chip itself can not be computed');
  return { ...parts, nominal, nominalState: ownState(nominalState), at };
}

/** A dead end has the pressure of the live node it hangs on, so that node is watched instead. */
function watching(
  { network, run }: RunNetwork,
  kinds: readonly PortDrive['kind'][],
  pressureNodes: readonly number[],
): FlowFactor['prepared'] {
  const plain = prepareFlow(network, run);
  const { anchor } = factorFlow(plain, kinds).graphFactor.analysis;
  const watched = new Set<number>();
  for (const node of pressureNodes) if (anchor[node] >= 0) watched.add(anchor[node]);
  return prepareFlow(network, run, { watchedNodes: [...watched].sort((a, b) => a - b) });
}

/** In a part that only flows drive they must go on adding up: the largest one follows the others. */
function balancingPorts({ partOutlook, prepared }: FlowFactor, drives: readonly PortDrive[]): Int32Array {
  const balancedBy = new Int32Array(drives.length).fill(-1);
  const size = (port: number): number => {
    const drive = drives[port];
    return drive.kind === 'flow' ? Math.abs(drive.flowM3s) : -1;
  };
  partOutlook.forEach((outlook, part) => {
    if (outlook.kind !== 'floating') return;
    const ports = prepared.parts.portsOfPart[part];
    let largest = outlook.heldPort;
    for (const port of ports) if (size(port) > size(largest)) largest = port;
    for (const port of ports) if (drives[port].kind === 'flow') balancedBy[port] = largest;
  });
  return balancedBy;
}

/** Channels that are always of one width and depth share a section. The chip has fewer: there they need be so as drawn only. */
export interface Sections {
  readonly ofReach: Int32Array;
  readonly section: readonly Section[];
}

export interface Section {
  /** The mask's. */
  readonly drawnWidthM: number;
  readonly ductWidthM: number;
  readonly depthM: number;
  readonly profile: Profile;
  /** Variables that move it, −1 for none. */
  readonly depthVariable: number;
  readonly commonDepthVariable: number;
  readonly maskVariable: number;
  readonly ownVariable: number;
}

function gatherSections({ chip, reachChannel }: Network, variables: readonly Variable[]): Sections {
  const depthOfLayer = new Map<number, number>();
  const ownOfChannel = new Map<number, number>();
  let maskVariable = -1;
  let commonDepthVariable = -1;
  variables.forEach((variable, k) => {
    if (variable.kind === 'depth') depthOfLayer.set(variable.layer, k);
    if (variable.kind === 'own width') ownOfChannel.set(variable.channel, k);
    if (variable.kind === 'mask width') maskVariable = k;
    if (variable.kind === 'common depth') commonDepthVariable = k;
  });
  const known = new Map<string, number>();
  const section: Section[] = [];
  const ofChannel = chip.channels.map((channel, c) => {
    const made: Section = {
      drawnWidthM: channel.drawnWidthMm / 1000,
      ductWidthM: channel.ductWidthMm / 1000,
      depthM: channel.depthMm / 1000,
      profile: channel.profile,
      depthVariable: depthOfLayer.get(channel.layer) ?? -1,
      commonDepthVariable,
      maskVariable,
      ownVariable: ownOfChannel.get(c) ?? -1,
    };
    return remembered(known, Object.values(made).join(), () => section.push(made) - 1);
  });
  return { ofReach: reachChannel.map((channel) => ofChannel[channel]), section };
}

type Parts = Omit<SpreadModel, 'nominal' | 'nominalState' | 'at'>;

function evaluator(parts: Parts): SpreadModel['at'] {
  const { network, run, variables, drives, factor, balancedBy, sections, holder } = parts;
  const { reachCount, reachDuctMm, portNode } = network;
  const { fluid, ports } = run;
  const { section, ofReach } = sections;
  const { driveNode, tubingEdge, graph } = factor.prepared;
  const indexOf = (kind: Variable['kind']): number =>
    variables.findIndex((variable) => variable.kind === kind);
  const temperature = indexOf('temperature');
  const viscosity = indexOf('viscosity');
  const bore = indexOf('bore');
  const portVariables = variables.flatMap((variable, k) =>
    variable.kind === 'pressure' || variable.kind === 'flow' ? [{ ...variable, k }] : [],
  );
  const nominalLoad = loadOf(factor, drives);
  const pieceViscosity = ports.map(({ tubing }) =>
    tubing.map(({ temperatureK }) => (temperatureK === null ? null : viscosityAt(fluid, temperatureK))),
  );

  const form: (DuctForm | null)[] = section.map(() => null);
  const resistance = new Float64Array(graph.from.length);
  const fixedPressure = nominalLoad.fixedPressure.slice();
  const injection = nominalLoad.injection.slice();
  const givenFlow = new Float64Array(ports.length);
  const { analysis } = factor.graphFactor;
  let graphFactor: GraphFactor | undefined;

  return (x) => {
    for (let s = 0; s < form.length; s++) {
      const made = formAt(section[s], variables, x);
      if (made === 'closed') return null;
      form[s] = made;
    }
    const kelvin = fluid.temperatureK + (temperature < 0 ? 0 : x[temperature]);
    const thinning = viscosity < 0 ? 1 : 1 + shareOf(variables[viscosity], x[viscosity], fluid.viscosityPaS);
    const found = temperature < 0 ? fluid : fluidAt(fluid, kelvin);
    if (found === null || !(thinning > 0)) return null;
    const { densityKgM3 } = found;
    const viscosityPaS = found.viscosityPaS * thinning;
    const inside = { viscosityPaS, densityKgM3 };
    for (let r = 0; r < reachCount; r++) {
      const duct = form[ofReach[r]];
      resistance[r] =
        duct === null ? Number.NaN : (resistancePerLength(duct, inside) * reachDuctMm[r]) / 1000;
    }
    for (let p = 0; p < ports.length; p++) {
      if (tubingEdge[p] < 0) continue;
      let sum = 0;
      for (let t = 0; t < ports[p].tubing.length; t++) {
        const { boreM, lengthM } = ports[p].tubing[t];
        const wide = boreM + (bore < 0 ? 0 : sizeOf(variables[bore], x[bore], boreM));
        if (!(wide > 0)) return null;
        const own = pieceViscosity[p][t];
        sum += tubeResistance(wide, lengthM, own === null ? viscosityPaS : own * thinning);
      }
      resistance[tubingEdge[p]] = sum;
    }
    setLoad(x, densityKgM3);
    graphFactor = factorGraph(analysis, resistance, graphFactor);
    const flow = solveGraph(graphFactor, { fixedPressure, injection });
    return { form, fluid: inside, flow, givenFlow, injection };
  };

  function setLoad(x: Float64Array, densityKgM3: number): void {
    for (let p = 0; p < ports.length; p++) {
      const drive = drives[p];
      const { condition } = ports[p];
      givenFlow[p] = drive.kind === 'flow' ? drive.flowM3s : 0;
      if (drive.kind !== 'pressure' || holder[p] !== p) continue;
      fixedPressure[driveNode[p]] =
        condition.kind === 'head' ? densityKgM3 * GRAVITY_M_S2 * condition.headM : drive.pressurePa;
    }
    for (const { kind, port, k, tolerance } of portVariables) {
      if (kind === 'flow') givenFlow[port] += sizeOf({ tolerance }, x[k], givenFlow[port]);
      else if (holder[port] === port) {
        const node = driveNode[port];
        fixedPressure[node] += sizeOf({ tolerance }, x[k], fixedPressure[node]);
      }
    }
    for (let p = 0; p < ports.length; p++) if (balancedBy[p] === p) givenFlow[p] = balanceOf(p);
    for (const node of driveNode) injection[node] = 0;
    for (let p = 0; p < portNode.length; p++) injection[driveNode[p]] += givenFlow[p];
  }

  function balanceOf(largest: number): number {
    let others = 0;
    for (let p = 0; p < ports.length; p++)
      if (p !== largest && balancedBy[p] === largest) others += givenFlow[p];
    return 0 - others;
  }
}

/** Of several ports that hold one node at a pressure the first speaks for it. */
function holdersOf(driveNode: Int32Array, drives: readonly PortDrive[]): Int32Array {
  const first = new Map<number, number>();
  return driveNode.map((node, port) =>
    drives[port].kind === 'pressure' ? remembered(first, node, () => port) : -1,
  );
}

function formAt(
  section: Section,
  variables: readonly Variable[],
  x: Float64Array,
): DuctForm | null | 'closed' {
  const { drawnWidthM, ductWidthM, depthM, profile, maskVariable, ownVariable } = section;
  if (Number.isNaN(ductWidthM) || Number.isNaN(depthM)) return null;
  let wider = 0;
  for (const k of [maskVariable, ownVariable]) if (k >= 0) wider += sizeOf(variables[k], x[k], drawnWidthM);
  let deeper = 0;
  for (const k of [section.depthVariable, section.commonDepthVariable])
    if (k >= 0) deeper += sizeOf(variables[k], x[k], depthM);
  if (profile === 'rectangle') {
    const [width, depth] = [ductWidthM + wider, depthM + deeper];
    return width > 0 && depth > 0 ? sectionForm(profile, width, depth) : 'closed';
  }
  const depth = depthM + deeper;
  const width = ductWidthM + wider + (Math.PI * deeper) / 2;
  const opening = width - (Math.PI * depth) / 2;
  return depth > 0 && opening > LEAST_OPENING * width ? sectionForm(profile, width, depth) : 'closed';
}

/** A mask whose opening is a smaller share of the duct than this lets nothing etch; the form's difference quotients need more too. */
const LEAST_OPENING = 1e-4;

function fluidAt(fluid: Fluid, kelvin: number): FlowingFluid | null {
  if (kelvin === fluid.temperatureK) return fluid;
  try {
    return {
      viscosityPaS: viscosityAt(fluid, kelvin),
      densityKgM3: densityAt(fluid, kelvin),
    };
  } catch (error) {
    // the published data end somewhere: this x is outside what can be computed
    if (error instanceof RangeError) return null;
    throw error;
  }
}

/** What x adds to a value, in the value's unit. */
export function sizeOf({ tolerance }: Pick<Variable, 'tolerance'>, x: number, value: number): number {
  return tolerance.kind === 'relative' ? x * value : x;
}

/** The same as a share of the value. */
export function shareOf({ tolerance }: Pick<Variable, 'tolerance'>, x: number, value: number): number {
  return tolerance.kind === 'relative' ? x : x / value;
}

function ownState(state: ChipState): ChipState {
  return {
    ...state,
    form: [...state.form],
    givenFlow: state.givenFlow.slice(),
    injection: state.injection.slice(),
  };
}
