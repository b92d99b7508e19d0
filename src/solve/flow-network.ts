import type { Channel, Chip, Port } from '../chip/types.ts';
import type { Network } from '../network/types.ts';

/** What of a Network decides its flow. */
export type FlowNetwork = Pick<
  Network,
  'nodeCount' | 'portNode' | 'reachCount' | 'reachChannel' | 'reachFrom' | 'reachTo' | 'reachDuctMm'
> & {
  readonly chip: {
    readonly fluid: Chip['fluid'];
    readonly ports: readonly Pick<Port, 'condition' | 'tubing'>[];
    readonly channels: readonly Pick<Channel, 'section'>[];
    readonly sections: Chip['sections'];
  };
};
