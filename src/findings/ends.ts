import { formatMm } from '../runsheet/shown.ts';
import { channelOf } from './centrelines.ts';
import type { FindingContext } from './context.ts';
import { deadPartAt } from './dead-parts.ts';
import { type NearMiss, nearMisses, sidesOf } from './misses.ts';
import { endsOnOutline } from './outlines.ts';
import { lengthMeasure, type Rule, rule, toFinding } from './rule.ts';
import { type Tip, tipOfEnd, tipsOf } from './tips.ts';
import type { Finding } from './types.ts';
import { distanceText, listText, moveText, placeText } from './words.ts';

/** Channel ends that lead nowhere. */
export const endRules: readonly Rule[] = [
  rule('open-end', openEnds),
  rule('near-miss', (context) => nearMisses(context).map((miss) => toMissFinding(context, miss))),
];

function openEnds(context: FindingContext): Finding[] {
  const onOutline = endsOnOutline(context);
  const missing = new Set<Tip>();
  for (const { tip, missedEnd } of nearMisses(context)) {
    missing.add(tip);
    if (missedEnd >= 0) missing.add(tipsOf(context)[tipOfEnd(context)[missedEnd]]);
  }
  return tipsOf(context)
    .filter((tip) => tip.kind === 'end' && !missing.has(tip) && !onOutline(tip))
    .map((tip) => {
      const names = namesAt(context, tip);
      const all = listText(names);
      const [end, meet] = names.length === 1 ? ['ends', 'meets'] : ['end together', 'meet'];
      return toFinding('open-end', 'caution', {
        message: `${all} ${end} at ${placeText(tip.x, tip.y)} and ${meet} no port and no channel there`,
        fix: `end ${all} in a port or on a channel, or give it a port that the run sheet names sealed if it is meant to be a dead end`,
        at: { xMm: tip.x, yMm: tip.y },
        names,
      });
    });
}

/** Channels whose ends stand at a tip. */
function namesAt({ network }: FindingContext, { ends }: Tip): string[] {
  return [...new Set(ends.map((end) => channelOf(network, end >> 1).name))];
}

/** Gaps below this are a matter of the drawing program's rounding: a wider join_within mends them all. */
const ROUNDING_GAP_MM = 0.01;

function toMissFinding(context: FindingContext, miss: NearMiss): Finding {
  const { x, y } = miss.tip;
  const names = namesAt(context, miss.tip);
  const name = listText(names);
  const [, { name: other }] = sidesOf(context, miss);
  const own = names.includes(other) && miss.port < 0;
  const target = own ? 'another stretch of its own' : other;
  const which = miss.missedEnd >= 0 && !own ? `the end of ${target}` : target;
  const how =
    miss.gapMm > 0 ? `misses ${which} by ${distanceText(miss.gapMm)}` : `touches ${which} without joining it`;
  const aim = miss.pointsAtIt ? ', at which it points' : '';
  const carry = `carry ${name} ${moveText(Math.max(miss.reachMm, 0.001))} on to ${target}`;
  const joinWithinUm = Math.ceil(miss.reachMm * 1e3 - 1e-6);
  const join =
    miss.gapMm < ROUNDING_GAP_MM && miss.reachMm < ROUNDING_GAP_MM
      ? `, or write join_within: ${formatMm(Math.max(1, joinWithinUm))} um in the run sheet`
      : '';
  return toFinding('near-miss', isSurelyMeant(context, miss) ? 'blocker' : 'caution', {
    message: `the ${names.length === 1 ? 'end' : 'common end'} of ${name} at ${placeText(x, y)} ${how}${aim}; nothing flows across`,
    fix: `${carry}${join}; if they are meant to be apart, leave ${distanceText(miss.limitMm)} or more between them`,
    at: { xMm: x, yMm: y },
    names: own ? names : [...names, other],
    measure: lengthMeasure(miss.gapMm, miss.limitMm),
    mark: miss.mark,
  });
}

/**
 * An end that points at something was meant to meet it, and so were three that begin there. Two may be a corner, unless a
 * part stands still for want of the join.
 */
function isSurelyMeant(context: FindingContext, miss: NearMiss): boolean {
  const { tip, pointsAtIt } = miss;
  if (!pointsAtIt || tip.kind === 'end' || tip.ends.length > 2) return pointsAtIt;
  const [from, to] = sidesOf(context, miss).map(({ part }) => part);
  return from !== to && [from, to].some((part) => deadPartAt(context, part)?.severity === 'blocker');
}
