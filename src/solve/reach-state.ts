import type { RunNetwork } from '../asked/run-network.ts';
import { channelForm } from '../chip/sections.ts';
import { type DuctState, ductState } from '../physics/duct-state.ts';
import type { FlowState } from './types.ts';

/** What the flow does in one reach; null where its section or its flow is not known. Cheap: made on demand. */
export function reachState(
  { network, run, flow }: RunNetwork & { readonly flow: FlowState | null },
  reach: number,
): DuctState | null {
  const { chip, reachChannel } = network;
  const form = channelForm(chip, reachChannel[reach]);
  if (form === null || flow === null || Number.isNaN(flow.reachFlow[reach])) return null;
  return ductState(form, flow.reachFlow[reach], run.fluid);
}
