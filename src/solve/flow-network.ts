import type { Channel, Chip, PortRun, Run } from '../chip/types.ts';
import type { Network } from '../network/types.ts';

/** What of a Network decides its flow. */
export type FlowNetwork = Pick<
  Network,
  'nodeCount' | 'portNode' | 'reachCount' | 'reachChannel' | 'reachFrom' | 'reachTo' | 'reachDuctMm'
> & {
  readonly chip: { readonly channels: readonly Pick<Channel, 'section'>[] } & Pick<Chip, 'sections'>;
};

/** What of a Run decides a flow. */
export type FlowRun = Pick<Run, 'fluid'> & {
  readonly ports: readonly Pick<PortRun, 'condition' | 'tubing'>[];
};
