import { describe, expect, it } from 'vitest';
import { sidesByNode } from '../../src/groups.ts';
import { passages, toChains } from '../../src/network/chains.ts';

/** The chains of lengths given as [node where it begins, node where it ends]; node 0 is a port. */
function chainsOf(
  lengths: readonly (readonly [number, number])[],
  isOneDuct = (_a: number, _b: number) => true,
) {
  const from = Int32Array.from(lengths, ([node]) => node);
  const to = Int32Array.from(lengths, ([, node]) => node);
  const { count, first, side, isLoop } = toChains(passages(sidesByNode(8, from, to), 1, isOneDuct));
  const ways = Array.from({ length: count }, (_, n) => [...side.subarray(first[n], first[n + 1])]);
  return { ways, isLoop: [...isLoop] };
}

describe('chains of lengths of duct', () => {
  it('go through nodes of two, in the direction of their first length, against those drawn the other way', () => {
    // 3 ─1→ 1 ─0→ 2 ←2─ 4: begun at length 1, which length 0 follows.
    const { ways, isLoop } = chainsOf([
      [1, 2],
      [3, 1],
      [4, 2],
    ]);
    expect(ways).toEqual([[2, 0, 5]]);
    expect(isLoop).toEqual([0]);
  });

  it('end at a port, at a node of three and where the duct changes', () => {
    expect(
      chainsOf([
        [1, 0],
        [0, 2],
      ]).ways,
    ).toEqual([[0], [2]]);
    expect(
      chainsOf([
        [1, 2],
        [2, 3],
        [2, 4],
      ]).ways,
    ).toEqual([[0], [2], [4]]);
    expect(
      chainsOf(
        [
          [1, 2],
          [2, 3],
        ],
        () => false,
      ).ways,
    ).toEqual([[0], [2]]);
  });

  it('close into loops, of one length too', () => {
    expect(
      chainsOf([
        [1, 2],
        [1, 2],
      ]),
    ).toEqual({ ways: [[0, 3]], isLoop: [1] });
    expect(chainsOf([[1, 1]])).toEqual({ ways: [[0]], isLoop: [1] });
  });
});
