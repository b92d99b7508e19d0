import { findingsOf } from '../findings/findings-of.ts';
import { randomFrom } from '../solve/graphs.ts';
import { cadExport, pillarChip } from './cad-exports.ts';

/** What is said of a chip exported as areas: must be a hold for one blocker, filled-outline. */
export function saidOfExport(seed: number): string {
  const { svg, sheet } = cadExport(randomFrom(seed));
  const { verdict, findings } = findingsOf(svg, sheet);
  const blockers = findings.filter(({ severity }) => severity === 'blocker').map(({ rule }) => rule);
  return `${verdict}: ${blockers.join(', ')}`;
}

/** Pillars counted in each channel beside those that stand there, and the blockers, of which there must be none. */
export function pillarsCounted(seed: number): {
  readonly counted: Readonly<Record<string, number>>;
  readonly drawn: Readonly<Record<string, number>>;
  readonly blockers: readonly string[];
} {
  const { svg, sheet, pillars } = pillarChip(randomFrom(seed));
  const { findings } = findingsOf(svg, sheet);
  const counted: Record<string, number> = {};
  for (const { rule, names, message } of findings) {
    if (rule === 'obstacle') counted[names[0]] = Number(/^\d+/.exec(message)?.[0]);
  }
  const blockers = findings.filter(({ severity }) => severity === 'blocker').map(({ rule }) => rule);
  return { counted, drawn: pillars, blockers };
}
