import { SectionList } from '../../src/chip/sections.ts';
import type { Fluid } from '../../src/chip/types.ts';
import type { PortCondition, TubingPiece } from '../../src/runsheet/types.ts';
import type { FlowNetwork, FlowRun } from '../../src/solve/flow-network.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import type { FlowState } from '../../src/solve/types.ts';

export interface ReachSpec {
  readonly from: number;
  readonly to: number;
  readonly lengthMm: number;
  /** 100 µm by default. */
  readonly widthMm?: number;
  /** 50 µm by default; NaN for an unknown one. */
  readonly depthMm?: number;
}

export interface PortSpec {
  readonly node: number;
  readonly condition: PortCondition;
  readonly tubing?: readonly TubingPiece[];
}

/** A network and how it is run, as far as its flow goes. */
export interface FlowSpec {
  readonly network: FlowNetwork;
  readonly run: FlowRun;
}

/** A network without a drawing: each reach is a channel of its own, 100 × 50 µm unless said, full of a fluid of 1 mPa s and 1000 kg/m³ unless said. */
export function networkOf(
  reaches: readonly ReachSpec[],
  ports: readonly PortSpec[],
  fluid: Partial<Fluid> = {},
): FlowSpec {
  const sections = new SectionList();
  return {
    run: {
      fluid: {
        name: 'as given',
        temperatureK: 298.15,
        viscosityPaS: 1e-3,
        densityKgM3: 1000,
        source: 'run sheet',
        mixture: { kind: 'custom' },
        ...fluid,
      },
      ports: ports.map(({ condition, tubing = [] }) => ({ condition, tubing })),
    },
    network: {
      chip: {
        channels: reaches.map(({ widthMm = 0.1, depthMm = 0.05 }) => ({
          section: sections.indexOf('rectangle', widthMm, depthMm),
        })),
        sections: sections.forms,
      },
      nodeCount:
        1 + Math.max(-1, ...reaches.flatMap(({ from, to }) => [from, to]), ...ports.map(({ node }) => node)),
      portNode: Int32Array.from(ports, ({ node }) => node),
      reachCount: reaches.length,
      reachChannel: Int32Array.from(reaches, (_, r) => r),
      reachFrom: Int32Array.from(reaches, ({ from }) => from),
      reachTo: Int32Array.from(reaches, ({ to }) => to),
      reachDuctMm: Float64Array.from(reaches, ({ lengthMm }) => lengthMm),
    },
  };
}

/** The flow of such a network. */
export function flowOf({ network, run }: FlowSpec): FlowState {
  return solveFlow(network, run);
}
