import type { RunNetwork } from '../asked/run-network.ts';
import { feelsTemperature } from '../chip/fluid.ts';
import type { Chip, PortRun } from '../chip/types.ts';
import { layerKey } from '../runsheet/names.ts';
import type { Tolerance, Tolerances } from '../runsheet/types.ts';
import { normalQuantile } from './normal-quantile.ts';

/** One entry of the run sheet's tolerances at work: what the shares of variance are counted by. */
export interface Cause {
  /** "depth:lanes", "width", "width_own", "pressure:feed" … */
  readonly key: string;
  /** "etch depth of lanes" */
  readonly text: string;
  readonly tolerance: Tolerance;
}

/** One independent number that varies: x, in the tolerance's own terms (a share of the nominal value, or SI), 0 at nominal. */
export type Variable = {
  /** Index into Variables.causes. */
  readonly cause: number;
  readonly tolerance: Tolerance;
} & VariableKind;

type VariableKind =
  /** Common to every channel of a layer. */
  | { readonly kind: 'depth'; readonly layer: number }
  /** Common to all layers. */
  | { readonly kind: 'common depth' }
  /** Common to the whole mask. */
  | { readonly kind: 'mask width' }
  | { readonly kind: 'own width'; readonly channel: number }
  | { readonly kind: 'temperature' }
  | { readonly kind: 'viscosity' }
  | { readonly kind: 'bore' }
  | { readonly kind: 'pressure'; readonly port: number }
  | { readonly kind: 'flow'; readonly port: number };

export interface Variables {
  readonly causes: readonly Cause[];
  readonly variables: readonly Variable[];
  /** Tolerances that move nothing on this chip, each with why. */
  readonly idle: readonly string[];
}

/** Standard deviation of x: a value is 2 sigma of a normal, a limit the half-width of a uniform. */
export function standardDeviation({ value, distribution }: Tolerance): number {
  return distribution === 'normal' ? value / 2 : value / Math.sqrt(3);
}

/** x at a place 0 < u < 1 of its distribution. */
export function deviate({ value, distribution }: Tolerance, u: number): number {
  return distribution === 'normal' ? (value / 2) * normalQuantile(u) : value * (2 * u - 1);
}

/**
 * Everything that the run sheet lets vary on this chip. Depth is common to a layer and independent between layers,
 * but for a part common to all in `depth_common`; `width` is
 * taken as one bias common to the mask, while `width_bias` and `width_own` give that and a part of its own for each channel;
 * the bore is common to all tubing; port pressures and flows are independent between ports.
 * A pressure tolerance for all ports is for those given a pressure or a head; an open well is meant only when it is named.
 */
export function listVariables({ network, run }: RunNetwork, tolerances: Tolerances): Variables {
  const { chip } = network;
  const causes: Cause[] = [];
  const variables: Variable[] = [];
  const idle: string[] = [];
  const add: Add = (key, text, tolerance, kinds, why) => {
    if (tolerance === null) return;
    if (tolerance.value === 0) idle.push(`${key}: it is nought`);
    else if (kinds.length === 0) idle.push(`${key}: ${why}`);
    else {
      causes.push({ key, text, tolerance });
      for (const kind of kinds) variables.push({ cause: causes.length - 1, tolerance, ...kind });
    }
  };
  const { width, widthBias, widthOwn, temperature, viscosity, bore } = tolerances;
  addDepths(chip, tolerances, add, idle);
  const sized = chip.channels.flatMap(({ drawnWidthMm }, channel) => (drawnWidthMm > 0 ? [channel] : []));
  const mask: readonly VariableKind[] = sized.length === 0 ? [] : [{ kind: 'mask width' }];
  const noChannel = 'no channel has a width';
  const own = sized.map((channel): VariableKind => ({ kind: 'own width', channel }));
  const heat: readonly VariableKind[] = feelsTemperature(run.fluid) ? [{ kind: 'temperature' }] : [];
  const hasTubing = run.ports.some(({ tubing }) => tubing.length > 0);
  add('width', 'width of the whole mask', width, mask, noChannel);
  add('width_bias', 'width of the whole mask', widthBias, mask, noChannel);
  add('width_own', 'own width of each channel', widthOwn, own, noChannel);
  const noHeat = 'the fluid is given by its viscosity and density';
  add('temperature', 'temperature of the chip', temperature, heat, noHeat);
  add('viscosity', 'viscosity of the fluid', viscosity, [{ kind: 'viscosity' }], '');
  add('bore', 'bore of the tubing', bore, hasTubing ? [{ kind: 'bore' }] : [], 'no port has tubing');
  addPorts({ network, run }, 'pressure', tolerances.pressure, tolerances.pressureByPort, add, idle);
  addPorts({ network, run }, 'flow', tolerances.flow, tolerances.flowByPort, add, idle);
  return { causes, variables, idle };
}

/** Takes a tolerance, if there is one, with all that it moves; or why it moves nothing. */
type Add = (
  key: string,
  text: string,
  tolerance: Tolerance | null,
  kinds: readonly VariableKind[],
  why: string,
) => void;

function addDepths(
  chip: Chip,
  { depth, depthByLayer, depthCommon }: Tolerances,
  add: Add,
  idle: string[],
): void {
  const byKey = new Map(Object.entries(depthByLayer).map(([name, own]) => [layerKey(name), own]));
  const used = new Set(chip.channels.flatMap(({ layer, depthMm }) => (Number.isNaN(depthMm) ? [] : [layer])));
  chip.layers.forEach(({ name }, layer) => {
    const own = byKey.get(layerKey(name));
    byKey.delete(layerKey(name));
    const shown = name === '' ? '(no layer)' : name;
    const kinds: readonly VariableKind[] = used.has(layer) ? [{ kind: 'depth', layer }] : [];
    add(`depth:${shown}`, `etch depth of ${shown}`, own ?? depth, kinds, 'no channel of it has a depth');
  });
  for (const key of byKey.keys()) idle.push(`depth:${key}: no channel lies in that layer`);
  const kinds: readonly VariableKind[] = used.size > 0 ? [{ kind: 'common depth' }] : [];
  add('depth_common', 'etch depth of all layers together', depthCommon, kinds, 'no channel has a depth');
}

function addPorts(
  { network, run }: RunNetwork,
  quantity: 'pressure' | 'flow',
  all: Tolerance | null,
  byPort: Readonly<Record<string, Tolerance>>,
  add: Add,
  idle: string[],
): void {
  let used = false;
  network.chip.ports.forEach(({ name, drawnName }, p) => {
    const port = run.ports[p];
    const own = drawnName === null ? undefined : byPort[drawnName];
    const isMeant =
      quantity === 'flow' ? port.condition.kind === 'flow' : isPressure(port, own !== undefined);
    const tolerance = own ?? (isMeant ? all : null);
    if (tolerance === null) return;
    const moves = isMeant && !(tolerance.kind === 'relative' && isNought(port));
    const kinds: readonly VariableKind[] = moves ? [{ kind: quantity, port: p }] : [];
    const why = isMeant ? 'a share of nought is nought' : `the port is ${conditionText(port)}`;
    if (own !== undefined || moves)
      add(`${quantity}:${name}`, `${quantity} at ${name}`, tolerance, kinds, why);
    used ||= moves;
  });
  if (all !== null && !used) idle.push(`${quantity}: no port is given a ${quantity}`);
}

function isPressure({ condition }: PortRun, isNamed: boolean): boolean {
  return condition.kind === 'pressure' || condition.kind === 'head' || (isNamed && condition.kind === 'open');
}

function isNought({ condition }: PortRun): boolean {
  switch (condition.kind) {
    case 'pressure':
      return condition.pressurePa === 0;
    case 'head':
      return condition.headM === 0;
    case 'flow':
      return condition.flowM3s === 0;
    default:
      return true;
  }
}

function conditionText({ condition }: PortRun): string {
  switch (condition.kind) {
    case 'pressure':
    case 'flow':
    case 'head':
      return `given a ${condition.kind}`;
    case 'open':
    case 'sealed':
      return condition.kind;
    case 'unset':
      return 'not set';
    default:
      return condition satisfies never;
  }
}
