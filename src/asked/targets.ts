import { refuse } from '../chip/complain.ts';
import { refuseSeveral } from '../chip/targets.ts';
import { findNodes } from '../network/find-node.ts';
import { nodeName, reachName } from '../network/names.ts';
import type { Network } from '../network/types.ts';
import { didYouMean } from '../runsheet/nearest.ts';
import { quote, quoteSome } from '../runsheet/quote.ts';
import type { RunSheet, TargetEntry } from '../runsheet/types.ts';
import { reachesOfChannel } from './reaches.ts';

/**
 * The reach that a target on a channel is on: the one named, else the only one of the channel.
 * @throws InputError at the target's line for a channel of no or several reaches, and a reach that the channel lacks
 */
export function reachOfTarget(
  network: Network,
  sheet: RunSheet,
  { name, reach, index }: TargetEntry,
): number {
  const { channels } = network.chip;
  const reaches = channels.flatMap(({ drawnName }, channel) =>
    drawnName === name ? [...reachesOfChannel(network, channel)] : [],
  );
  if (reaches.length === 0) {
    refuseTarget(
      sheet,
      index,
      `channel: ${quote(name)} has no reach that resists flow: all of it lies in wells or joints, or was left out`,
    );
  }
  const names = reaches.map((r) => reachName(network, r));
  if (reach === null) {
    if (reaches.length === 1) return reaches[0];
    refuseTarget(
      sheet,
      index,
      `channel ${quote(name)} has ${reaches.length} reaches; add reach: and one of ${quoteSome(names, MOST_LISTED)}`,
    );
  }
  const found = names.indexOf(reach);
  if (found >= 0) return reaches[found];
  const guess = didYouMean(reach, names) ?? `it has ${quoteSome(names, MOST_LISTED)}`;
  return refuseTarget(sheet, index, `reach: channel ${quote(name)} has no reach ${quote(reach)}; ${guess}`);
}

/**
 * The node that a target names, or the one at the port of that name.
 * @throws InputError at the target's line for a name that the network lacks, and a pattern that matches several
 */
export function nodeOfTarget(network: Network, sheet: RunSheet, { name, index }: TargetEntry): number {
  const port = network.chip.ports.findIndex(({ drawnName }) => drawnName === name);
  if (port >= 0) return network.portNode[port];
  const found = findNodes(network, name);
  if (found.length === 1) return found[0];
  if (found.length > 1)
    refuseSeveral(
      sheet,
      ['targets', index, 'node'],
      name,
      'node',
      found.map((n) => nodeName(network, n)),
    );
  const names = Array.from({ length: network.nodeCount }, (_, node) => nodeName(network, node));
  const guess = didYouMean(name, names) ?? `it has ${quoteSome(names, MOST_LISTED)}`;
  return refuseTarget(
    sheet,
    index,
    `node: the network has no node ${quote(name)}; ${guess} (the maps of the report show them)`,
  );
}

/** Stops at a target, with its line: `culture.run.yaml:31: targets[0]: …`. */
export function refuseTarget(sheet: RunSheet, index: number, what: string): never {
  return refuse(sheet, ['targets', index], `targets[${index}]: ${what}`);
}

const MOST_LISTED = 12;
