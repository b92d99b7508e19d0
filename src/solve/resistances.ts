import { viscosityAt } from '../chip/fluid.ts';
import type { Fluid } from '../chip/types.ts';
import { resistancePerLength } from '../physics/duct.ts';
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
  { chip, reachCount, reachChannel, reachDuctMm }: FlowNetwork,
  fluid: Fluid,
): Float64Array {
  const perLength = channelResistancesPerLength(chip, fluid);
  const resistance = new Float64Array(reachCount);
  for (let r = 0; r < reachCount; r++) resistance[r] = (perLength[reachChannel[r]] * reachDuctMm[r]) / 1000;
  return resistance;
}

/** Pa s/m³ per metre; the series is summed once for each distinct section. */
function channelResistancesPerLength({ channels }: FlowNetwork['chip'], fluid: Fluid): Float64Array {
  const byDepth = new Map<number, Map<number, number>>();
  return Float64Array.from(channels, ({ ductWidthMm, depthMm }) => {
    if (Number.isNaN(ductWidthMm) || Number.isNaN(depthMm)) return Number.NaN;
    let byWidth = byDepth.get(depthMm);
    if (byWidth === undefined) {
      byWidth = new Map();
      byDepth.set(depthMm, byWidth);
    }
    let value = byWidth.get(ductWidthMm);
    if (value === undefined) {
      value = resistancePerLength(ductWidthMm / 1000, depthMm / 1000, fluid.viscosityPaS);
      byWidth.set(ductWidthMm, value);
    }
    return value;
  });
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
