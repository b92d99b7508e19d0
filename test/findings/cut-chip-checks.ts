import { expect } from 'vitest';
import type { RunNetwork } from '../../src/asked/run-network.ts';
import { findAll } from '../../src/findings/check.ts';
import type { Finding } from '../../src/findings/types.ts';
import { type CutChip, forkChip, netChip, randomOf } from './cut-chips.ts';
import { contextOf } from './findings-of.ts';

/** Whole chips from a range of seeds say nothing of gaps; the same chips cut say where, and are not ready with a dead open port. */
export function expectCutsToBeNamed(seed: number, runs: number): void {
  for (const make of [netChip, forkChip]) {
    for (let k = seed; k < seed + runs; k++) {
      expectWhole(make(randomOf(k), false), k);
      expectCut(make(randomOf(k), true), k);
    }
  }
}

/** Ports that are driven or open and have no way to another such port that is not in the same hole. */
export function portsWithoutAWay({ network, run }: RunNetwork): string[] {
  const { chip, nodeCount, reachCount, reachFrom, reachTo, portNode } = network;
  const neighbours = Array.from({ length: nodeCount }, (): number[] => []);
  for (let r = 0; r < reachCount; r++) {
    neighbours[reachFrom[r]].push(reachTo[r]);
    neighbours[reachTo[r]].push(reachFrom[r]);
  }
  const isTerminal = (port: number): boolean => !['sealed', 'unset'].includes(run.ports[port].condition.kind);
  const terminals = new Set([...portNode].filter((_, port) => isTerminal(port)));
  return chip.ports.flatMap(({ name }, port) => {
    if (!isTerminal(port)) return [];
    const seen = new Set([portNode[port]]);
    for (const node of seen) for (const next of neighbours[node]) seen.add(next);
    return [...seen].some((node) => node !== portNode[port] && terminals.has(node)) ? [] : [name];
  });
}

export function isSpokenOf(findings: readonly Finding[], port: string): boolean {
  return findings.some(
    ({ rule, names }) => ['dead-port', 'loose-port'].includes(rule) && names.includes(port),
  );
}

function expectWhole({ svg, sheet }: CutChip, seed: number): void {
  const { findings } = findAll(contextOf(svg, sheet));
  const said = findings.filter(({ rule }) =>
    ['dead-port', 'near-miss', 'open-end', 'stray-channel'].includes(rule),
  );
  expect(said, `seed ${seed}: ${svg}\n${sheet}`).toEqual([]);
}

function expectCut({ svg, sheet, gap, isNarrow }: CutChip, seed: number): void {
  const context = contextOf(svg, sheet);
  const { findings, verdict } = findAll(context);
  const text = `seed ${seed}: ${svg}\n${sheet}\n${findings.map(({ rule, severity, message }) => `${severity} ${rule} ${message}`).join('\n')}`;
  for (const port of portsWithoutAWay(context)) {
    expect(isSpokenOf(findings, port), `${port} ${text}`).toBe(true);
    const isOpen = context.chip.ports.some(
      ({ name }, p) => name === port && context.run.ports[p].condition.kind === 'open',
    );
    if (isOpen) expect(verdict, `${port} ${text}`).toBe('hold');
  }
  if (gap === null) return;
  const within = gap.sizeMm + 0.6;
  const named = findings.some(
    ({ rule, severity, xMm, yMm }) =>
      severity !== 'note' &&
      ['dead-port', 'near-miss', 'open-end'].includes(rule) &&
      Math.hypot((xMm ?? NaN) - gap.x, (yMm ?? NaN) - gap.y) <= within,
  );
  expect(named, `${isNarrow ? 'narrow' : 'wide'} gap at ${gap.x}, ${gap.y}: ${text}`).toBe(true);
}
