import type { Quantity } from './units.ts';

/** What `accept` may say about a rule: in which quantities its measure is, none for a rule that measures nothing. */
interface RuleMeasure {
  readonly quantities: readonly Quantity[];
  /** An entry must then say `up_to`. */
  readonly ceilingNeeded: boolean;
}

/**
 * Every rule that a run sheet may accept, with the quantity of its measure. The finding's `measured` is in the SI
 * unit of that quantity; a ratio or share is a plain number there.
 */
export const RULE_MEASURES: ReadonlyMap<string, RuleMeasure> = new Map([
  ...rules(
    ['length'],
    [
      ...[
        'narrow-channel',
        'thin-wall',
        'slender-wall',
        'near-miss',
        'small-port',
        'outside-chip',
        'edge-margin',
      ],
      ...['port-crowding', 'port-grid', 'tight-bend'],
    ],
  ),
  ...rules(
    ['ratio', 'share'],
    ['roof-span', 'tall-wall', 'soft-walls', 'not-laminar', 'curved-flow', 'short-reach'],
  ),
  ...rules(['ratio', 'share'], ['level-sensitive', 'uneven-flow']),
  ...rules(['angle'], ['sharp-corner']),
  ...rules(['pressure'], ['over-pressure', 'under-pressure']),
  ...rules(['time'], ['residence-window']),
  ...rules(['flow'], ['flow-window']),
  ...rules(['wall_shear', 'ratio', 'share'], ['shear-window']),
  ...rules(['length', 'ratio', 'share'], ['wrong-size', 'corner-notch', 'developing-flow'], false),
  ...rules(['flow', 'ratio', 'share'], ['stagnant', 'backflow'], false),
  ...rules(['pressure', 'flow'], ['pump-limit'], false),
  ...rules(
    [],
    [
      ...[
        'open-end',
        'loose-port',
        'swallowed-channel',
        'stray-channel',
        'dead-port',
        'layers-cross',
        'assumed-scale',
        'unset-port',
        'default-depth',
      ],
      ...['ignored-shapes', 'no-edge', 'isotropic-etch', 'disguised-stroke', 'obstacle'],
    ],
  ),
]);

/** Rules that nobody can take on: with the fault there, the numbers themselves are wrong. */
export const UNACCEPTABLE_RULES: ReadonlySet<string> = new Set([
  'no-reference',
  'unsized-stroke',
  'missing-depth',
  'filled-outline',
  'no-channel',
  'merged-walls',
  'double-stroke',
  'not-computed',
]);

/** Rules measured in these quantities; each that is accepted must say how far, unless it measures nothing or may leave it open. */
function rules(
  quantities: readonly Quantity[],
  names: readonly string[],
  ceilingNeeded = quantities.length > 0,
): readonly (readonly [string, RuleMeasure])[] {
  return names.map((name) => [name, { quantities, ceilingNeeded }] as const);
}
