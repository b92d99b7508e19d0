import type { FindingContext } from './context.ts';
import { type EdgeFault, findEdgeFaults } from './edge-distances.ts';
import { isAbove, type Rule, type RuleOutcome, toFinding, withoutLimit } from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText, limitText, moveText } from './words.ts';

/** What lies how near to the chip edge, and whether the chip is as large as the run sheet says. */
export const edgeRules: readonly Rule[] = [
  { names: ['outside-chip', 'edge-margin'], run: nearEdge },
  { names: ['wrong-size'], run: wrongSize },
  {
    names: ['no-edge'],
    run: ({ chip }) => ({
      findings:
        chip.edge === null
          ? [
              toFinding('no-edge', 'note', {
                message: 'the drawing has no chip edge, so what lies near or beyond it is not checked',
                fix: 'draw the outline of the part and name it chip-edge, or name it with outline: in the run sheet',
                at: null,
                names: [],
              }),
            ]
          : [],
      notRun: [],
    }),
  },
];

const NO_EDGE = 'the drawing has no chip edge';

function nearEdge(context: FindingContext): RuleOutcome {
  const { chip, run } = context;
  if (chip.edge === null) {
    return {
      findings: [],
      notRun: ['outside-chip', 'edge-margin'].map((rule) => ({ rule, why: NO_EDGE })),
    };
  }
  const margin = run.limits.edgeMarginM;
  const marginMm = margin === null ? 0 : margin.value * 1e3;
  const findings = findEdgeFaults(context, chip.edge, marginMm).map((fault) => {
    if (fault.gapMm < 0) return outside(fault);
    const { name, isHole, gapMm } = fault;
    const limit = margin === null ? '' : limitText(distanceText(marginMm), margin);
    return toFinding('edge-margin', 'caution', {
      message: `${isHole ? 'the well ' : ''}${name} comes within ${distanceText(gapMm)} of the chip edge; edge_margin is ${limit}`,
      fix: `move ${name} ${moveText(marginMm - gapMm)} away from the chip edge`,
      ...placeOf(fault),
      measure: { value: gapMm / 1e3, limit: marginMm / 1e3, unit: 'm' },
    });
  });
  return {
    findings,
    notRun: margin === null ? withoutLimit('edge-margin', 'edge_margin', context).notRun : [],
  };
}

function outside(fault: EdgeFault): Finding {
  const { name, isHole, gapMm } = fault;
  return toFinding('outside-chip', 'blocker', {
    message: `${isHole ? 'the well ' : ''}${name} reaches ${distanceText(-gapMm)} beyond the chip edge`,
    fix: `move ${name} ${moveText(-gapMm)} or more into the chip, or draw the chip edge round it; if it is no part of this chip, name the chip's edge under outline: in the run sheet (only what lies inside is read), or ${name} under ignore:`,
    ...placeOf(fault),
    measure: { value: gapMm / 1e3, limit: 0, unit: 'm' },
  });
}

function placeOf({ name, xMm, yMm, mark }: EdgeFault) {
  return {
    at: { xMm, yMm },
    names: [name],
    mark: { x1Mm: mark[0], y1Mm: mark[1], x2Mm: mark[2], y2Mm: mark[3] },
  };
}

/** The sides of the chip edge may differ from the run sheet's size by this share of it. */
const SIZE_SHARE = 0.005;

function wrongSize({ chip }: FindingContext): RuleOutcome {
  const { edge, sizeMm } = chip;
  if (edge === null) return { findings: [], notRun: [{ rule: 'wrong-size', why: NO_EDGE }] };
  if (sizeMm === null) {
    return { findings: [], notRun: [{ rule: 'wrong-size', why: 'the run sheet gives no size' }] };
  }
  const wanted = [Math.max(...sizeMm), Math.min(...sizeMm)];
  const off = wanted.map((size, k) => Math.abs(edge.sidesMm[k] - size) / size);
  const worst = Math.max(...off);
  if (!isAbove(worst, SIZE_SHARE)) return { findings: [], notRun: [] };
  const size = (sides: readonly number[]): string => `${distanceText(sides[0])} × ${distanceText(sides[1])}`;
  return {
    findings: [
      toFinding('wrong-size', 'blocker', {
        message: `the chip edge ${edge.name} is ${size(edge.sidesMm)}; the run sheet says ${size(wanted)}`,
        fix: `draw ${edge.name} ${size(wanted)}, or correct size in the run sheet; if every length is off alike, the unit of the drawing is wrong (unit:)`,
        at: null,
        names: [edge.name],
        measure: { value: worst, limit: SIZE_SHARE, unit: '' },
      }),
    ],
    notRun: [],
  };
}
