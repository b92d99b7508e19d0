import { resistancePerLength } from '../physics/duct-state.ts';
import { tubeResistance } from '../physics/tube.ts';
import type { FlowNetwork } from './flow-network.ts';

export interface Resistances {
  /** Pa s/m³, one per reach; NaN where width or depth is unknown. */
  readonly reach: Float64Array;
  /** Pa s/m³ of all tubing of each port together; 0 without. */
  readonly tubing: Float64Array;
}

/** Resistances of all reaches at the chip's temperature, and of all tubing with each piece at its own. */
export function nominalResistances(network: FlowNetwork): Resistances {
  return { reach: reachResistances(network), tubing: tubingResistances(network) };
}

function reachResistances({ chip, reachCount, reachChannel, reachDuctMm }: FlowNetwork): Float64Array {
  const { channels, sections, fluid } = chip;
  const ofSection = Float64Array.from(sections, (form) => resistancePerLength(form, fluid));
  const perLength = Float64Array.from(channels, ({ section }) =>
    section < 0 ? Number.NaN : ofSection[section],
  );
  const resistance = new Float64Array(reachCount);
  for (let r = 0; r < reachCount; r++) resistance[r] = (perLength[reachChannel[r]] * reachDuctMm[r]) / 1000;
  return resistance;
}

function tubingResistances({ chip }: FlowNetwork): Float64Array {
  const { fluid } = chip;
  return Float64Array.from(chip.ports, ({ tubing }) => {
    let sum = 0;
    for (const { boreM, lengthM, temperatureK } of tubing) {
      const viscosityPaS = temperatureK === null ? fluid.viscosityPaS : fluid.viscosityAt(temperatureK);
      sum += tubeResistance(boreM, lengthM, viscosityPaS);
    }
    return sum;
  });
}
