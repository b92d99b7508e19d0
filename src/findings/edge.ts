import { isAbove } from '../asked/within.ts';
import type { Sourced } from '../chip/types.ts';
import type { FindingContext } from './context.ts';
import { type EdgeFault, findEdgeFaults } from './edge-distances.ts';
import {
  found,
  lengthMeasure,
  notRun,
  type Rule,
  type RuleOutcome,
  rule,
  toFinding,
  withoutLimit,
} from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText, limitText, moveText } from './words.ts';

/** What lies how near to the chip edge, and whether the chip is as large as the run sheet says. */
export const edgeRules: readonly Rule[] = [
  { names: ['outside-chip', 'edge-margin'], run: nearEdge },
  { names: ['wrong-size'], run: wrongSize },
  rule('no-edge', noEdge),
];

const NO_EDGE = 'the drawing has no chip edge';

function noEdge({ chip }: FindingContext): Finding[] {
  if (chip.edge !== null) return [];
  return [
    toFinding('no-edge', 'note', {
      message: `${NO_EDGE}, so what lies near or beyond it is not checked`,
      fix: 'draw the outline of the part and name it chip-edge, or name it with outline: in the run sheet',
      at: null,
      names: [],
    }),
  ];
}

function nearEdge(context: FindingContext): RuleOutcome {
  const { edge } = context.chip;
  const margin = context.run.limits.edgeMarginM;
  if (edge === null) {
    return {
      findings: [],
      notRun: ['outside-chip', 'edge-margin'].map((name) => ({ rule: name, why: NO_EDGE })),
    };
  }
  const marginMm = margin === null ? 0 : margin.value * 1e3;
  const findings = findEdgeFaults(context, edge, marginMm).map((fault) =>
    fault.gapMm < 0 || margin === null ? outside(fault) : tooNear(fault, marginMm, margin),
  );
  return {
    findings,
    notRun: margin === null ? withoutLimit('edge-margin', 'edge_margin', context).notRun : [],
  };
}

function tooNear(fault: EdgeFault, marginMm: number, margin: Sourced<number>): Finding {
  const { name, gapMm } = fault;
  return toFinding('edge-margin', 'caution', {
    message: `${whoText(fault)} comes within ${distanceText(gapMm)} of the chip edge; edge_margin is ${limitText(distanceText(marginMm), margin)}`,
    fix: `move ${name} ${moveText(marginMm - gapMm)} away from the chip edge`,
    at: fault,
    names: [name],
    mark: fault.mark,
    measure: lengthMeasure(gapMm, marginMm),
  });
}

function outside(fault: EdgeFault): Finding {
  const { name, gapMm } = fault;
  return toFinding('outside-chip', 'blocker', {
    message: `${whoText(fault)} reaches ${distanceText(-gapMm)} beyond the chip edge`,
    fix: `move ${name} ${moveText(-gapMm)} or more into the chip, or draw the chip edge round it; if it is no part of this chip, name the chip's edge under outline: in the run sheet (only what lies inside is read), or ${name} under ignore:`,
    at: fault,
    names: [name],
    mark: fault.mark,
    measure: lengthMeasure(gapMm, 0),
  });
}

function whoText({ name, isHole }: EdgeFault): string {
  return isHole ? `the well ${name}` : name;
}

/** The sides of the chip edge may differ from the run sheet's size by this share of it. */
const SIZE_SHARE = 0.005;

function wrongSize({ chip }: FindingContext): RuleOutcome {
  const { edge, sizeMm } = chip;
  if (edge === null) return notRun('wrong-size', NO_EDGE);
  if (sizeMm === null) return notRun('wrong-size', 'the run sheet gives no size');
  const wanted = [Math.max(...sizeMm), Math.min(...sizeMm)];
  const off = wanted.map((size, k) => Math.abs(edge.sidesMm[k] - size) / size);
  const worst = Math.max(...off);
  if (!isAbove(worst, SIZE_SHARE)) return found([]);
  const size = (sides: readonly number[]): string => `${distanceText(sides[0])} × ${distanceText(sides[1])}`;
  return found([
    toFinding('wrong-size', 'blocker', {
      message: `the chip edge ${edge.name} is ${size(edge.sidesMm)}; the run sheet says ${size(wanted)}`,
      fix: `draw ${edge.name} ${size(wanted)}, or correct size in the run sheet; if every length is off alike, the unit of the drawing is wrong (unit:)`,
      at: null,
      names: [edge.name],
      measure: { value: worst, limit: SIZE_SHARE, unit: '' },
    }),
  ]);
}
