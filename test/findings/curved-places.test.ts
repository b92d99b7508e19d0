import { describe, expect, it } from 'vitest';
import type { Finding } from '../../src/findings/types.ts';
import { findingsOf } from './findings-of.ts';

/** What else stands beside arcs: open ends, wells and the chip edge, within 0.1 µm of the exact geometry. */

const EXACT_MM = 1e-4;
const RADII = [1, 3.7, 10, 30, 60, 100];
/** Angles between the cuts of an arc. */
const ANGLES = [0, 0.0093, -0.0211];

type At = (x: number, y: number) => string;

/** Turned by an angle, round (300, 300). */
function placed(turn: number): At {
  const [cos, sin] = [Math.cos(turn), Math.sin(turn)];
  return (x, y) => `${300 + x * cos - y * sin} ${300 + x * sin + y * cos}`;
}

function drawing(shapes: string): string {
  return `<svg xmlns="http://www.w3.org/2000/svg" width="600mm" height="600mm" viewBox="0 0 600 600" fill="none" stroke="#000">${shapes}</svg>`;
}

function arc(radius: number, half: number, at: At): string {
  const [x, y] = [radius * Math.cos(half), radius * Math.sin(half)];
  return `M${at(x, -y)}A${radius} ${radius} 0 0 1 ${at(x, y)}`;
}

function found(svg: string, sheet: string, rule: string): readonly Finding[] {
  return findingsOf(svg, sheet).findings.filter((finding) => finding.rule === rule);
}

function measuredMm(findings: readonly Finding[]): number {
  expect(findings).toHaveLength(1);
  return (findings[0].measured ?? Number.NaN) * 1e3;
}

describe('beside an arc', () => {
  it.each(RADII)('of radius %d mm an open end misses it by what is left', (radius) => {
    const at = placed(radius);
    const main = `<path id="main" stroke-width="0.3" d="${arc(radius, Math.min(1.2, 15 / radius), at)}"/>`;
    for (const angle of ANGLES) {
      for (const side of [1, -1]) {
        const end = radius + side * (0.15 + 0.083);
        const far = radius + side * Math.min(5, 0.9 * radius);
        const from = at(far * Math.cos(angle), far * Math.sin(angle));
        const to = at(end * Math.cos(angle), end * Math.sin(angle));
        const svg = drawing(`${main}<path id="branch" stroke-width="0.2" d="M${from}L${to}"/>`);
        // From within the bend the corners of the square end are nearest.
        const gap = side === 1 ? 0.083 : radius - 0.15 - Math.hypot(end, 0.1);
        expect(Math.abs(measuredMm(found(svg, 'depth: 50 um\n', 'near-miss')) - gap)).toBeLessThan(EXACT_MM);
      }
    }
  });

  it.each(RADII)('of radius %d mm the square end of another arc is where it is', (radius) => {
    // It comes down on a straight channel square to it: its whole end face is as far away as its middle.
    const at = placed(2 * radius);
    const turn = Math.min(1, 6 / radius);
    const from = at(radius * Math.cos(turn) - radius, radius * Math.sin(turn) + 0.2);
    const svg = drawing(
      `<path id="main" stroke-width="0.3" d="M${at(-30, 0)}L${at(30, 0)}"/>
<path id="branch" stroke-width="0.2" d="M${from}A${radius} ${radius} 0 0 0 ${at(0, 0.2)}"/>`,
    );
    expect(Math.abs(measuredMm(found(svg, 'depth: 50 um\n', 'near-miss')) - 0.05)).toBeLessThan(EXACT_MM);
  });

  it.each(RADII)('of radius %d mm a well leaves the wall that it leaves', (radius) => {
    const at = placed(3 * radius);
    const main = `<path id="main" stroke-width="0.3" d="${arc(radius, Math.min(1.2, 15 / radius), at)}"/>`;
    const well = 0.4;
    for (const angle of ANGLES) {
      for (const [side, wall] of [
        [1, 0.031],
        [-1, 0.031],
        [1, 0.05],
        [-1, 0.05],
      ]) {
        const r = radius + side * (0.15 + well + wall);
        if (r <= 0) continue;
        const [x, y] = at(r * Math.cos(angle), r * Math.sin(angle)).split(' ');
        const svg = drawing(`${main}<circle id="well" cx="${x}" cy="${y}" r="${well}" fill="#000"/>`);
        const findings = found(svg, 'depth: 50 um\nlimits: { min_wall: 50 um }\n', 'thin-wall');
        if (wall === 0.05) expect(findings).toEqual([]);
        else expect(Math.abs(measuredMm(findings) - wall)).toBeLessThan(EXACT_MM);
      }
    }
  });

  it.each([3.7, 10, 30, 60, 100])(
    'of radius %d mm the edge of a round chip is as far away as it is',
    (radius) => {
      const at = placed(4 * radius);
      const d = arc(radius, Math.min(1.2, 15 / radius), at);
      for (const [margin, gap] of [
        [0.5, 0.4837],
        [0.5, 0.5],
        [0, -0.0123],
        [0, 0],
      ]) {
        const r = radius + 0.15 + gap;
        // As a circle, and as a path of arcs that also has straight sides.
        for (const edge of [
          `<circle id="chip-edge" cx="300" cy="300" r="${r}"/>`,
          `<path id="chip-edge" d="M${at(-r, -r)}L${at(0, -r)}A${r} ${r} 0 0 1 ${at(0, r)}L${at(-r, r)}Z"/>`,
        ]) {
          const svg = drawing(`${edge}<path id="main" stroke-width="0.3" d="${d}"/>`);
          const sheet = `depth: 50 um\nlimits: { edge_margin: ${margin} mm }\n`;
          const findings = found(
            svg,
            margin > 0 ? sheet : 'depth: 50 um\n',
            margin > 0 ? 'edge-margin' : 'outside-chip',
          );
          if (gap === margin) expect(findings).toEqual([]);
          else expect(Math.abs(measuredMm(findings) - gap)).toBeLessThan(EXACT_MM);
        }
      }
    },
  );
});
