import { formatMm } from '../runsheet/shown.ts';
import type { FindingContext } from './context.ts';
import { deadPartAt } from './dead-parts.ts';
import { type NearMiss, nearMisses } from './misses.ts';
import { endsOnOutline } from './outlines.ts';
import { partsOnDrawing } from './parts.ts';
import { found, type Rule, toFinding } from './rule.ts';
import { type Tip, tipOfEnd, tipsOf } from './tips.ts';
import type { Finding } from './types.ts';
import { distanceText, listText, moveText, placeText } from './words.ts';

/** Channel ends that lead nowhere. */
export const endRules: readonly Rule[] = [
  {
    names: ['open-end'],
    run: (context) => {
      const { chip, network } = context;
      const { pieces } = network.trace.near;
      const onOutline = endsOnOutline(context);
      const missing = new Set<Tip>();
      for (const { tip, missedEnd } of nearMisses(context)) {
        missing.add(tip);
        if (missedEnd >= 0) missing.add(tipsOf(context)[tipOfEnd(context)[missedEnd]]);
      }
      return found(
        tipsOf(context)
          .filter((tip) => tip.kind === 'end' && !missing.has(tip) && !onOutline(tip))
          .map(({ ends, x, y }) => {
            const names = [
              ...new Set(ends.map((end) => chip.channels[pieces.centrelineChannel[end >> 1]].name)),
            ];
            const all = listText(names);
            const verbs = names.length === 1 ? 'ends' : 'end together';
            return toFinding('open-end', 'caution', {
              message: `${all} ${verbs} at ${placeText(x, y)} and ${names.length === 1 ? 'meets' : 'meet'} no port and no channel there`,
              fix: `end ${all} in a port or on a channel, or give it a port that the run sheet names sealed if it is meant to be a dead end`,
              at: { xMm: x, yMm: y },
              names,
            });
          }),
      );
    },
  },
  {
    names: ['near-miss'],
    run: (context) => found(nearMisses(context).map((miss) => toMissFinding(context, miss))),
  },
];

/** Gaps below this are a matter of the drawing program's rounding: a wider join_within mends them all. */
const ROUNDING_GAP_MM = 0.01;

function toMissFinding(context: FindingContext, miss: NearMiss): Finding {
  const { chip, network } = context;
  const { pieces } = network.trace.near;
  const { x, y, ends } = miss.tip;
  const names = [...new Set(ends.map((end) => chip.channels[pieces.centrelineChannel[end >> 1]].name))];
  const name = listText(names);
  const other =
    miss.port >= 0 ? chip.ports[miss.port].name : chip.channels[pieces.centrelineChannel[miss.missed]].name;
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
    measure: { value: miss.gapMm / 1e3, limit: miss.limitMm / 1e3, unit: 'm' },
    mark: { x1Mm: miss.mark[0], y1Mm: miss.mark[1], x2Mm: miss.mark[2], y2Mm: miss.mark[3] },
  });
}

/**
 * An end that points at something was meant to meet it, and so were three that begin there. Two may be a corner, unless a
 * part stands still for want of the join.
 */
function isSurelyMeant(context: FindingContext, { tip, pointsAtIt, missed, port }: NearMiss): boolean {
  if (!pointsAtIt || tip.kind === 'end' || tip.ends.length > 2) return pointsAtIt;
  const { ofCentreline, ofPort } = partsOnDrawing(context);
  const from = ofCentreline[tip.ends[0] >> 1];
  const to = port >= 0 ? ofPort[port] : ofCentreline[missed];
  return from !== to && [from, to].some((part) => deadPartAt(context, part)?.severity === 'blocker');
}
