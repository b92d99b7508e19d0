import { expect, it } from 'vitest';
import { findingsOf } from './findings-of.ts';

it('a roof between pillars is told where it spans most: the room that a pillar was forgotten in', () => {
  const pillars: string[] = [];
  for (let x = 16; x <= 44; x += 2)
    for (let y = 17; y <= 23; y += 2)
      if (x !== 38 || y !== 21) pillars.push(`<circle cx="${x}" cy="${y}" r="0.25"/>`);
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="60mm" height="40mm" viewBox="0 0 60 40">
    <path id="chamber" d="M15 20H45" stroke="#000" stroke-width="8" fill="none"/>
    <g id="posts">${pillars.join('')}</g>
    <g id="holes"><circle id="in" cx="15" cy="20" r="1"/><circle id="out" cx="45" cy="20" r="1"/></g></svg>`;
  const { findings } = findingsOf(
    svg,
    'depth: 100 um\nports_layer: holes\nports: { in: { flow: 1 uL/min }, out: open }\nlimits: { max_width_to_depth: 10 }',
  );
  const [roof] = findings.filter(({ rule }) => rule === 'roof-span');
  // 4 mm between the pillars on either side, less their 0.5 mm
  expect(roof.measured).toBeCloseTo(35, 0);
  expect(roof.message).toMatch(/between its 59 pillars, where it is widest, near \(38, 21 mm\), spans/);
});
