import { isAbove, isBelow } from '../asked/within.ts';
import { foundPumpLimits, givenPumpLimits, type PumpLimits } from '../chip/pump-limits.ts';
import type { Sourced } from '../chip/types.ts';
import type { Show } from '../runsheet/shown.ts';
import type { FoundTarget } from '../solve/targets.ts';
import { lineAt } from '../solve/targets-limits.ts';
import { targetValue } from '../solve/targets-wanted.ts';
import type { FindingContext } from './context.ts';
import { notRun, type Rule, type RuleOutcome, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { limitText, listText, showFor } from './words.ts';

/**
 * Can the pumps do what the ports ask of them? At found settings the finding also says what the nearest setting within reach does
 * to the target, and what no pump usually does is a caution although the run sheet gives no limit.
 */
export const pumpRules: readonly Rule[] = [{ names: ['pump-limit'], run: pumpLimit }];

function pumpLimit(context: FindingContext): RuleOutcome {
  const { chip, run, flow, found: settings } = context;
  const ports = chip.ports.flatMap((port, p): Limited[] => {
    const target = settings?.targets.find(({ wanted }) => wanted.port === p) ?? null;
    const limits =
      target === null ? givenPumpLimits(run, port.drawnName) : foundPumpLimits(run, port.drawnName);
    return limits === null ? [] : [{ port: p, limits, target }];
  });
  if (ports.length === 0) return notRun('pump-limit', 'no pump_limits are given');
  if (flow === null) return notRun('pump-limit', 'nothing was solved');
  const findings: Finding[] = [];
  const unknown: string[] = [];
  for (const { port, limits, target } of ports) {
    const asked = { port, pressurePa: flow.supplyPressure[port], flowM3s: flow.portFlow[port], target };
    const needsPressure = limits.minPressurePa !== null || limits.maxPressurePa !== null;
    if (
      (needsPressure && Number.isNaN(asked.pressurePa)) ||
      (limits.maxFlowM3s !== null && Number.isNaN(asked.flowM3s))
    ) {
      unknown.push(chip.ports[port].name);
    }
    for (const severity of ['blocker', 'caution'] as const) {
      const finding = findingFor(context, limits, asked, severity);
      if (finding !== null) findings.push(finding);
    }
  }
  if (unknown.length === 0) return { findings, notRun: [] };
  const why = `the pressure or flow of ${listText(unknown)} is not known`;
  return { findings, notRun: notRun('pump-limit', why).notRun };
}

interface Limited {
  readonly port: number;
  readonly limits: PumpLimits;
  /** null for a port whose setting the run sheet gives. */
  readonly target: FoundTarget | null;
}

/** What a pump is asked for, at the far end of the tubing. */
interface Asked {
  readonly port: number;
  readonly pressurePa: number;
  readonly flowM3s: number;
  readonly target: FoundTarget | null;
}

interface Excess {
  /** Of a limit that nobody gave: a caution. */
  readonly severity: 'blocker' | 'caution';
  readonly value: number;
  readonly limit: number;
  readonly unit: 'Pa' | 'm³/s';
  readonly text: string;
}

function findingFor(
  context: FindingContext,
  limits: PumpLimits,
  asked: Asked,
  severity: Excess['severity'],
): Finding | null {
  const show = showFor(context);
  const [excess, ...rest] = excesses(show, limits, asked).filter((one) => one.severity === severity);
  if (excess === undefined) return null;
  const { name, xMm, yMm } = context.chip.ports[asked.port];
  const { target } = asked;
  const why = target === null ? '' : `to reach ${wantedText(show, target)}, `;
  const others = rest.map(({ text }) => `, and ${text}`).join('');
  return toFinding('pump-limit', severity, {
    message: `${why}the pump at ${name} would have to ${excess.text}${others}`,
    fix:
      severity === 'blocker'
        ? fixText(show, name, asked)
        : `write under pump_limits what the pump at ${name} can do, or aim at less; ${fixText(show, name, asked)}`,
    at: { xMm, yMm },
    names: target === null ? [name] : [...new Set([name, target.wanted.name, target.wanted.entry.name])],
    measure: { value: excess.value, limit: excess.limit, unit: excess.unit },
  });
}

/** Limits passed, a pressure first. */
function excesses(show: Show, limits: PumpLimits, { pressurePa, flowM3s }: Asked): Excess[] {
  const { minPressurePa, maxPressurePa, maxFlowM3s } = limits;
  // a pressure may be unknown, and is then beyond no limit
  const held = (): string => `hold ${show.text('pressure', pressurePa)}`;
  const moved = Math.abs(flowM3s);
  const passed: Excess[] = [];
  const add = (
    value: number,
    limit: Sourced<number>,
    unit: Excess['unit'],
    does: string,
    side: 'more' | 'less',
  ): void => {
    const limitNow = show.text(unit === 'Pa' ? 'pressure' : 'flow', limit.value);
    const isGiven = limit.origin === 'run sheet';
    const than = isGiven
      ? `${side} than the ${limitNow} that it can`
      : `${side} than the ${limitText(limitNow, limit)} that a pump usually can`;
    const severity = isGiven ? 'blocker' : 'caution';
    passed.push({ severity, value, limit: limit.value, unit, text: `${does}, ${than}` });
  };
  if (maxPressurePa !== null && isAbove(pressurePa, maxPressurePa.value))
    add(pressurePa, maxPressurePa, 'Pa', held(), 'more');
  if (minPressurePa !== null && isBelow(pressurePa, minPressurePa.value))
    add(pressurePa, minPressurePa, 'Pa', held(), 'less');
  if (maxFlowM3s !== null && isAbove(moved, maxFlowM3s.value))
    add(moved, maxFlowM3s, 'm³/s', `${flowM3s < 0 ? 'draw' : 'give'} ${show.text('flow', moved)}`, 'more');
  return passed;
}

function fixText(show: Show, name: string, { target }: Asked): string {
  const wider = `make the channels or tubing between ${name} and the rest wider, deeper or shorter, or take another pump`;
  if (target === null) return `ask less of it, ${wider}`;
  const { reach, response, wanted } = target;
  if (reach.nearest === null) {
    return `no setting of ${name} keeps its limits while the other ports are as they are: ${wider}`;
  }
  const pressure = show.text('pressure', lineAt(response, response.supplyPressurePa, reach.nearest));
  const flow = show.text('flow', lineAt(response, response.flowM3s, reach.nearest));
  const value = targetValue(wanted.measure, lineAt(response, response.observed, reach.nearest));
  const gives = Number.isFinite(value)
    ? `with which the ${quantityWords(wanted.entry)} of ${wanted.name} is ${show.text(wanted.entry.quantity, value)}`
    : `with which nothing flows through ${wanted.name}`;
  return `the nearest setting within reach is ${pressure} at the pump (${flow}), ${gives}; else ${wider}`;
}

function wantedText(show: Show, { wanted, reached }: FoundTarget): string {
  return `${show.text(wanted.entry.quantity, reached)} of ${quantityWords(wanted.entry)} in ${wanted.name}`;
}

/** "mean wall shear", "residence time" */
function quantityWords({ quantity, at }: FoundTarget['wanted']['entry']): string {
  return quantity === 'wall_shear' ? `${at} wall shear` : quantity.replaceAll('_', ' ');
}
