import { describe, expect, it } from 'vitest';
import type { Assembled } from '../../src/chip/assemble.ts';
import { findAll } from '../../src/findings/check.ts';
import type { FindingReport } from '../../src/findings/types.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { lanesChip, latticeChip } from './big-chips.ts';

function checked({ chip, run }: Assembled): { readonly segments: number; readonly report: FindingReport } {
  const network = buildNetwork(chip);
  const flow = solveFlow(network, run);
  return { segments: network.segmentCount, report: findAll({ chip, run, network, flow }) };
}

function countsByRule({ findings }: FindingReport): Record<string, number> {
  const counts: Record<string, number> = {};
  for (const { rule } of findings) counts[rule] = (counts[rule] ?? 0) + 1;
  return counts;
}

describe('all rules on a large chip', () => {
  it('say one thing of each channel of a lattice with 50 000 crossings, not one of each reach', () => {
    const n = 224;
    const { segments, report } = checked(latticeChip(n));
    expect(segments).toBeGreaterThan(99_000);
    const { 'short-reach': shortReaches, ...others } = countsByRule(report);
    expect(shortReaches).toBe(2 * n);
    for (const count of Object.values(others)) expect(count).toBeLessThanOrEqual(2 * n);
  });

  it('say the same of 1000 lanes of 100 legs as of 10 such lanes, lane by lane', () => {
    const { segments, report } = checked(lanesChip(1000, 100));
    expect(segments).toBeGreaterThan(100_000);
    const lanes = (one: FindingReport) =>
      new Set(
        one.findings.filter(({ names }) => names[0]?.startsWith('lane') === true).map(({ rule }) => rule),
      );
    const small = lanes(checked(lanesChip(10, 100)).report);
    for (const rule of small) expect(lanes(report)).toContain(rule);
    expect(countsByRule(report)['short-reach']).toBeGreaterThanOrEqual(1000);
  });
});
