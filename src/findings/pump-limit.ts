import type { Show } from '../runsheet/shown.ts';
import type { PumpLimitEntry } from '../runsheet/types.ts';
import type { FoundSettings, FoundTarget } from '../solve/targets.ts';
import { lineAt } from '../solve/targets-limits.ts';
import { targetValue } from '../solve/targets-wanted.ts';
import type { FindingContext } from './context.ts';
import { isAbove, isBelow, notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { listText, showFor } from './words.ts';

/** Can the pumps do what the ports ask of them: at the conditions of the run sheet. */
export const pumpRules: readonly Rule[] = [pumpLimitRule(null)];

/** The same at found settings, where the finding also says what the nearest setting within reach does to the target. */
export function pumpLimitRule(settings: FoundSettings | null): Rule {
  return { names: ['pump-limit'], run: (context) => pumpLimit(context, settings) };
}

function pumpLimit(context: FindingContext, settings: FoundSettings | null): RuleOutcome {
  const { chip, flow } = context;
  const limits = Object.entries(chip.sheet?.pumpLimits ?? {});
  if (limits.length === 0) return notRun('pump-limit', 'no pump_limits are given');
  if (flow === null) return notRun('pump-limit', 'nothing was solved');
  const findings: Finding[] = [];
  const unknown: string[] = [];
  for (const [drawnName, limit] of limits) {
    const port = chip.ports.findIndex((candidate) => candidate.drawnName === drawnName);
    const target = settings?.targets.find(({ wanted }) => wanted.port === port) ?? null;
    const asked = { port, pressurePa: flow.supplyPressure[port], flowM3s: flow.portFlow[port], target };
    const needsPressure = limit.minPressurePa !== null || limit.maxPressurePa !== null;
    if (
      (needsPressure && Number.isNaN(asked.pressurePa)) ||
      (limit.maxFlowM3s !== null && Number.isNaN(asked.flowM3s))
    ) {
      unknown.push(drawnName);
    }
    const finding = findingFor(context, limit, asked);
    if (finding !== null) findings.push(finding);
  }
  if (unknown.length === 0) return { findings, notRun: [] };
  const why = `the pressure or flow of ${listText(unknown)} is not known`;
  return { findings, notRun: notRun('pump-limit', why).notRun };
}

/** What a pump is asked for, at the far end of the tubing. */
interface Asked {
  readonly port: number;
  readonly pressurePa: number;
  readonly flowM3s: number;
  readonly target: FoundTarget | null;
}

interface Excess {
  readonly value: number;
  readonly limit: number;
  readonly unit: 'Pa' | 'm³/s';
  readonly text: string;
}

function findingFor(context: FindingContext, limit: PumpLimitEntry, asked: Asked): Finding | null {
  const show = showFor(context);
  const [excess] = excesses(show, limit, asked);
  if (excess === undefined) return null;
  const { name, xMm, yMm } = context.chip.ports[asked.port];
  const { target } = asked;
  const why = target === null ? '' : ` to reach ${wantedText(show, target)}`;
  const others = excesses(show, limit, asked)
    .slice(1)
    .map(({ text }) => `, and ${text}`)
    .join('');
  return toFinding('pump-limit', 'blocker', {
    message: `the pump at ${name} would have to ${excess.text}${others}${why}`,
    fix: fixText(show, name, asked),
    at: { xMm, yMm },
    names: target === null ? [name] : [...new Set([name, target.wanted.name, target.wanted.entry.name])],
    measure: { value: excess.value, limit: excess.limit, unit: excess.unit },
  });
}

/** Limits passed, a pressure first. */
function excesses(show: Show, limit: PumpLimitEntry, { pressurePa, flowM3s }: Asked): Excess[] {
  const { minPressurePa, maxPressurePa, maxFlowM3s } = limit;
  const passed: Excess[] = [];
  if (maxPressurePa !== null && isAbove(pressurePa, maxPressurePa)) {
    passed.push({
      value: pressurePa,
      limit: maxPressurePa,
      unit: 'Pa',
      text: `hold ${show.text('pressure', pressurePa)}, more than the ${show.text('pressure', maxPressurePa)} that it can`,
    });
  }
  if (minPressurePa !== null && isBelow(pressurePa, minPressurePa)) {
    passed.push({
      value: pressurePa,
      limit: minPressurePa,
      unit: 'Pa',
      text: `hold ${show.text('pressure', pressurePa)}, less than the ${show.text('pressure', minPressurePa)} that it can`,
    });
  }
  if (maxFlowM3s !== null && isAbove(Math.abs(flowM3s), maxFlowM3s)) {
    passed.push({
      value: Math.abs(flowM3s),
      limit: maxFlowM3s,
      unit: 'm³/s',
      text: `${flowM3s < 0 ? 'draw' : 'give'} ${show.text('flow', Math.abs(flowM3s))}, more than the ${show.text('flow', maxFlowM3s)} that it can`,
    });
  }
  return passed;
}

function fixText(show: Show, name: string, { target }: Asked): string {
  const wider = `make the channels or tubing between ${name} and the rest wider, deeper or shorter, or take another pump`;
  if (target === null) return `ask less of it, ${wider}`;
  const { reach, response, wanted } = target;
  if (reach === null || reach.nearest === null) {
    return `no setting of ${name} keeps its limits while the other ports are as they are: ${wider}`;
  }
  const pressure = show.text('pressure', lineAt(response, response.supplyPressurePa, reach.nearest));
  const flow = show.text('flow', lineAt(response, response.flowM3s, reach.nearest));
  const value = targetValue(wanted.measure, lineAt(response, response.observed, reach.nearest));
  const gives = Number.isFinite(value)
    ? `with which ${wanted.entry.quantity} of ${wanted.name} is ${show.text(wanted.entry.quantity, value)}`
    : `with which nothing flows through ${wanted.name}`;
  return `the nearest setting within reach is ${pressure} at the pump (${flow}), ${gives}; else ${wider}`;
}

function wantedText(show: Show, { wanted, reached }: FoundTarget): string {
  const { quantity, at } = wanted.entry;
  const which = quantity === 'wall_shear' ? ` (${at})` : '';
  return `${show.text(quantity, reached)} of ${quantity}${which} in ${wanted.name}`;
}
