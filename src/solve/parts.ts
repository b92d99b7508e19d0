import type { FlowNetwork } from './flow-network.ts';

export interface Parts {
  readonly count: number;
  /** Part of each node, from 0 in the order of their first nodes. */
  readonly partOfNode: Int32Array;
  readonly nodesInPart: Int32Array;
  readonly portsOfPart: readonly (readonly number[])[];
}

/** Connected parts of the network. O(nodes + reaches). */
export function partsOf({ nodeCount, reachCount, reachFrom, reachTo, portNode }: FlowNetwork): Parts {
  const leader = new Int32Array(nodeCount).map((_, i) => i);
  const find = (node: number): number => {
    let i = node;
    while (leader[i] !== i) {
      leader[i] = leader[leader[i]];
      i = leader[i];
    }
    return i;
  };
  for (let r = 0; r < reachCount; r++) {
    const a = find(reachFrom[r]);
    const b = find(reachTo[r]);
    // The lower number leads, so that parts are numbered by their first node.
    if (a < b) leader[b] = a;
    else leader[a] = b;
  }
  const partOfNode = new Int32Array(nodeCount);
  const sizes: number[] = [];
  for (let i = 0; i < nodeCount; i++) {
    const top = find(i);
    if (top === i) {
      partOfNode[i] = sizes.length;
      sizes.push(1);
    } else {
      partOfNode[i] = partOfNode[top];
      sizes[partOfNode[i]]++;
    }
  }
  const portsOfPart: number[][] = sizes.map(() => []);
  portNode.forEach((node, port) => {
    portsOfPart[partOfNode[node]].push(port);
  });
  return { count: sizes.length, partOfNode, nodesInPart: Int32Array.from(sizes), portsOfPart };
}
