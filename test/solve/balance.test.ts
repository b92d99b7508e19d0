import { describe, expect, test } from 'vitest';
import { balanceOf } from '../../src/solve/balance.ts';

const inner = Uint8Array.of(0, 1, 1, 0);
/** 0 → 1 → 2 → 3. */
const line = { from: Int32Array.of(0, 1, 2), to: Int32Array.of(1, 2, 3) };

describe('the imbalance of a node', () => {
  test('is what is lost there over half of all that flows at it, the first of the worst', () => {
    // 8 in and 6 out at node 1: 2 of 7; 6 and 6 at node 2
    const { worstImbalance, worstNode } = balanceOf(
      line,
      Float64Array.of(8, 6, 6),
      Float64Array.of(8, 0, 0, -6),
      inner,
    );
    expect(worstNode).toBe(1);
    expect(worstImbalance).toBeCloseTo(2 / 7, 15);
    const even = balanceOf(
      line,
      Float64Array.of(8, 6, 4),
      Float64Array.of(8, 0, 0, -4),
      Uint8Array.of(0, 1, 0, 0),
    );
    expect(even.worstNode).toBe(1);
  });

  test('where next to nothing flows is measured by a billionth of what the chip takes and gives', () => {
    // 3 in, 3 out of the chip; 2e-12 comes to node 1 by one edge and 1e-12 goes on
    const { worstImbalance, worstNode } = balanceOf(
      line,
      Float64Array.of(2e-12, 1e-12, 1e-12),
      Float64Array.of(3, 0, 0, -3),
      inner,
    );
    expect(worstNode).toBe(1);
    expect(worstImbalance / (1e-12 / 3e-9)).toBeCloseTo(1, 12);
  });

  test('counts flow from outside, passes unknown flows over, and is none where no node is inner', () => {
    const flow = Float64Array.of(Number.NaN, 2, 2);
    expect(balanceOf(line, flow, Float64Array.of(0, 2, 0, -2), inner)).toEqual({
      worstImbalance: 0,
      worstNode: 1,
    });
    expect(balanceOf(line, flow, new Float64Array(4), new Uint8Array(4))).toEqual({
      worstImbalance: 0,
      worstNode: -1,
    });
  });
});
