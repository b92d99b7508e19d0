import { expect, it } from 'vitest';
import { jointsText } from '../../src/report/joints-text.ts';
import { drawing, networkFrom } from '../solve/network-from.ts';

it('says per kind how many joints were computed and how many not: a manifold of unequal Ts and a step in depth', () => {
  const svg = drawing(
    { head: 'M5 10H50', same: 'M20 10V30', deep: 'M30 10V30', wide: 'M40 10V30', turn: 'M50 10V20' },
    { feed: [5, 10] },
  )
    .replace('data-name="wide"', 'data-name="wide" stroke-width="0.3"')
    .replace('data-name="deep"', 'data-name="deep" data-depth="120 um"');
  const { network } = networkFrom(svg, 'depth: 80 um\nports: { feed: { pressure: 1 kPa } }\n');
  expect(jointsText(network.joints)).toBe(
    '2 of 4 joints computed (1 mitred corner, 1 T of equal ducts); not computed: 1 T of unequal ducts, 1 T with a step in depth',
  );
});

it('counts entries from wells for no joints, and says nothing where there is none', () => {
  const svg = drawing({ lane: 'M5 10H50' }, { feed: [5, 10], waste: [50, 10] });
  const { network } = networkFrom(svg, 'depth: 80 um\nports: { feed: { pressure: 1 kPa }, waste: open }\n');
  expect(network.joints).not.toEqual([]);
  expect(jointsText(network.joints)).toBeNull();
});
