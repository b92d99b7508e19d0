import { NEAR_VACUUM_PA } from '../asked/near-vacuum.ts';
import { isAbove, isBelow } from '../asked/within.ts';
import { nodeName } from '../network/names.ts';
import type { FindingContext } from './context.ts';
import { found, type Rule, type RuleOutcome, toFinding, withoutLimit } from './rule.ts';
import type { Finding, NotRun } from './types.ts';
import { limitText, listText, placeText, showFor } from './words.ts';

/** Does the chip, or a supply, see more or less pressure than it may. */
export const pressureRules: readonly Rule[] = [
  { names: ['over-pressure'], run: overPressure },
  { names: ['under-pressure'], run: underPressure },
];

function overPressure(context: FindingContext): RuleOutcome {
  const limit = context.run.limits.maxPressurePa;
  if (limit === null) return withoutLimit('over-pressure', 'max_pressure', context);
  const show = showFor(context);
  return judge(context, 'over-pressure', 1, (highest, names) => {
    if (!isAbove(highest.pressurePa, limit.value)) return null;
    return toFinding('over-pressure', 'blocker', {
      message: `${highest.where} stands at ${show.text('pressure', highest.pressurePa)}; the chip holds ${limitText(show.text('pressure', limit.value), limit)}${alsoText(names, 'above')}`,
      fix: `lower what drives it (by a factor of ${(highest.pressurePa / limit.value).toFixed(2)} all pressures and flows together), or make ${highest.isSupply ? 'its tubing shorter or of a wider bore' : 'the channels that lead from it wider, deeper or shorter'}`,
      at: highest.at,
      names,
      measure: { value: highest.pressurePa, limit: limit.value, unit: 'Pa' },
    });
  });
}

function underPressure(context: FindingContext): RuleOutcome {
  const limit = context.run.limits.minPressurePa;
  const show = showFor(context);
  const outcome = judge(context, 'under-pressure', -1, (lowest, names) => {
    const { pressurePa, where, isSupply, at } = lowest;
    const isVacuum = isBelow(pressurePa, NEAR_VACUUM_PA);
    if (!isVacuum && (limit === null || !isBelow(pressurePa, limit.value))) return null;
    const most =
      isVacuum || limit === null
        ? `below ${show.text('pressure', NEAR_VACUUM_PA)} the liquid boils or gives off its gas`
        : `the least is ${limitText(show.text('pressure', limit.value), limit)}`;
    return toFinding('under-pressure', isVacuum ? 'blocker' : 'caution', {
      message: `${where} stands at ${show.text('pressure', pressurePa)}; ${most}${alsoText(names, 'below')}`,
      fix: `draw more gently, push from the inlets instead of pulling from the outlets, or make ${isSupply ? 'its tubing shorter or of a wider bore' : 'the channels that lead to it wider, deeper or shorter'}`,
      at,
      names,
      measure: {
        value: pressurePa,
        limit: isVacuum || limit === null ? NEAR_VACUUM_PA : limit.value,
        unit: 'Pa',
      },
    });
  });
  if (limit !== null) return outcome;
  const { notRun } = withoutLimit('under-pressure', 'min_pressure', context);
  const partly = notRun.map(
    ({ rule, why }): NotRun => ({
      rule,
      why: `${why} (only the blocker below ${show.text('pressure', NEAR_VACUUM_PA)} was looked at)`,
    }),
  );
  return { findings: outcome.findings, notRun: outcome.notRun.length > 0 ? outcome.notRun : partly };
}

interface Extreme {
  readonly pressurePa: number;
  readonly where: string;
  readonly name: string;
  readonly isSupply: boolean;
  readonly at: { readonly xMm: number; readonly yMm: number };
}

/**
 * One finding per connected part, at its highest (sense 1) or lowest (−1) pressure, in the chip or at the far end of a
 * tubing. The names are all places and ports that would be at fault by themselves, the worst first.
 */
function judge(
  context: FindingContext,
  rule: string,
  sense: 1 | -1,
  look: (extreme: Extreme, names: readonly string[]) => Finding | null,
): RuleOutcome {
  const { network, flow, chip, run } = context;
  if (flow === null) return { findings: [], notRun: [{ rule, why: 'nothing was solved' }] };
  const worst = new Map<number, Extreme>();
  const candidates = new Map<number, Extreme[]>();
  let known = 0;
  const consider = (part: number, extreme: Extreme): void => {
    const before = worst.get(part);
    if (before === undefined || sense * (extreme.pressurePa - before.pressurePa) > 0)
      worst.set(part, extreme);
  };
  chip.ports.forEach(({ name, xMm, yMm }, p) => {
    const node = network.portNode[p];
    const inChip = flow.portPressure[p];
    const atSupply = flow.supplyPressure[p];
    if (Number.isNaN(inChip)) return;
    known++;
    const isSupplyWorse = run.ports[p].tubing.length > 0 && sense * (atSupply - inChip) > 0;
    const extreme = {
      pressurePa: isSupplyWorse ? atSupply : inChip,
      where: isSupplyWorse ? `the supply of ${name}` : `port ${name}`,
      name,
      isSupply: isSupplyWorse,
      at: { xMm, yMm },
    };
    const part = flow.nodePart[node];
    consider(part, extreme);
    const list = candidates.get(part);
    if (list === undefined) candidates.set(part, [extreme]);
    else list.push(extreme);
  });
  // By the maximum principle no inner node beats every port; looked at all the same, for it costs nothing.
  for (let node = 0; node < network.nodeCount; node++) {
    const pressurePa = flow.nodePressure[node];
    if (network.nodePort[node] >= 0 || Number.isNaN(pressurePa)) continue;
    known++;
    const part = flow.nodePart[node];
    const before = worst.get(part);
    if (before !== undefined && !(sense * (pressurePa - before.pressurePa) > 1e-9 * Math.abs(pressurePa)))
      continue;
    const xMm = network.nodeX[node];
    const yMm = network.nodeY[node];
    const name = nodeName(network, node);
    worst.set(part, {
      pressurePa,
      where: `node ${name} at ${placeText(xMm, yMm)}`,
      name,
      isSupply: false,
      at: { xMm, yMm },
    });
  }
  if (known === 0) return { findings: [], notRun: [{ rule, why: 'no pressure in the chip is known' }] };
  const findings: Finding[] = [];
  for (const [part, extreme] of worst) {
    const others = (candidates.get(part) ?? [])
      .filter((other) => other !== extreme && look(other, [other.name]) !== null)
      .sort((a, b) => sense * (b.pressurePa - a.pressurePa));
    const finding = look(extreme, [...new Set([extreme.name, ...others.map(({ name }) => name)])]);
    if (finding !== null) findings.push(finding);
  }
  return found(findings);
}

function alsoText(names: readonly string[], side: 'above' | 'below'): string {
  if (names.length < 2) return '';
  const rest = names.slice(1);
  return ` (${listText(rest)} ${rest.length === 1 ? 'is' : 'are'} ${side} it too)`;
}
