import { GRAVITY_M_S2 } from '../physics/constants.ts';
import type { FlowRun } from './flow-network.ts';

/** What is done to a port at the far end of its tubing (at the port itself without): the condition of the run sheet in terms of the network. */
export type PortDrive =
  | { readonly kind: 'pressure'; readonly pressurePa: number }
  /** Into the chip is positive. */
  | { readonly kind: 'flow'; readonly flowM3s: number }
  /** Sealed or unset: nothing passes. */
  | { readonly kind: 'none' };

/** Drives of all ports as the run sheet sets them. A head h of liquid stands for ρ g h. */
export function drivesOf({ ports, fluid }: FlowRun): readonly PortDrive[] {
  return ports.map(({ condition }): PortDrive => {
    switch (condition.kind) {
      case 'pressure':
        return { kind: 'pressure', pressurePa: condition.pressurePa };
      case 'head':
        return { kind: 'pressure', pressurePa: fluid.densityKgM3 * GRAVITY_M_S2 * condition.headM };
      case 'open':
        return { kind: 'pressure', pressurePa: 0 };
      case 'flow':
        return { kind: 'flow', flowM3s: condition.flowM3s };
      case 'sealed':
      case 'unset':
        return { kind: 'none' };
      default:
        return condition satisfies never;
    }
  });
}
