import { viscosityAt } from '../chip/fluid.ts';
import type { Fluid } from '../chip/types.ts';
import { resistancePerLength } from '../physics/duct-state.ts';
import { tubeResistance } from '../physics/tube.ts';
import type { FlowNetwork, FlowRun } from './flow-network.ts';

export interface Resistances {
  /** Pa s/m³, one per reach; NaN where width or depth is unknown. */
  readonly reach: Float64Array;
  /** Pa s/m³ of all tubing of each port together; 0 without. */
  readonly tubing: Float64Array;
}

/** Resistances of all reaches at the chip's temperature, and of all tubing with each piece at its own. */
export function nominalResistances(network: FlowNetwork, run: FlowRun): Resistances {
  return { reach: reachResistances(network, run.fluid), tubing: tubingResistances(run) };
}

function reachResistances(
  { chip: { channels, sections }, reachCount, reachChannel, reachDuctMm }: FlowNetwork,
  fluid: Fluid,
): Float64Array {
  const ofSection = Float64Array.from(sections, (form) => resistancePerLength(form, fluid));
  const perLength = Float64Array.from(channels, ({ section }) =>
    section < 0 ? Number.NaN : ofSection[section],
  );
  const resistance = new Float64Array(reachCount);
  for (let r = 0; r < reachCount; r++) resistance[r] = (perLength[reachChannel[r]] * reachDuctMm[r]) / 1000;
  return resistance;
}

function tubingResistances({ fluid, ports }: FlowRun): Float64Array {
  return Float64Array.from(ports, ({ tubing }) => {
    let sum = 0;
    for (const { boreM, lengthM, temperatureK } of tubing) {
      const viscosityPaS = temperatureK === null ? fluid.viscosityPaS : viscosityAt(fluid, temperatureK);
      sum += tubeResistance(boreM, lengthM, viscosityPaS);
    }
    return sum;
  });
}
