import { formatMm } from '../runsheet/shown.ts';
import type { FindingContext } from './context.ts';
import { endPlace, type NearMiss, nearMisses, openEnds } from './misses.ts';
import { endsOnOutline } from './outlines.ts';
import { found, type Rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText, moveText, placeText } from './words.ts';

/** Channel ends that lead nowhere. */
export const endRules: readonly Rule[] = [
  {
    names: ['open-end'],
    run: (context) => {
      const { chip, network } = context;
      const { pieces } = network.trace.near;
      const onOutline = endsOnOutline(context);
      const missing = new Set<number>();
      for (const { end, missedEnd } of nearMisses(context)) {
        missing.add(end);
        if (missedEnd >= 0) missing.add(missedEnd);
      }
      return found(
        openEnds(network)
          .filter((end) => !missing.has(end) && !onOutline(endPlace(network, end)))
          .map((end) => {
            const { name } = chip.channels[pieces.centrelineChannel[end >> 1]];
            const { x, y } = endPlace(network, end);
            return toFinding('open-end', 'caution', {
              message: `${name} ends at ${placeText(x, y)} and meets no port and no channel there`,
              fix: `end ${name} in a port or on a channel, or give it a port that the run sheet names sealed if it is meant to be a dead end`,
              at: { xMm: x, yMm: y },
              names: [name],
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

function toMissFinding({ chip, network }: FindingContext, miss: NearMiss): Finding {
  const { pieces } = network.trace.near;
  const { name } = chip.channels[pieces.centrelineChannel[miss.centreline]];
  const other =
    miss.port >= 0 ? chip.ports[miss.port].name : chip.channels[pieces.centrelineChannel[miss.missed]].name;
  const { x, y } = endPlace(network, miss.end);
  const own = other === name && miss.port < 0;
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
  return toFinding('near-miss', miss.pointsAtIt ? 'blocker' : 'caution', {
    message: `the end of ${name} at ${placeText(x, y)} ${how}${aim}; nothing flows across`,
    fix: `${carry}${join}; if they are meant to be apart, leave ${distanceText(miss.limitMm)} or more between them`,
    at: { xMm: x, yMm: y },
    names: own ? [name] : [name, other],
    measure: { value: miss.gapMm / 1e3, limit: miss.limitMm / 1e3, unit: 'm' },
    mark: { x1Mm: miss.mark[0], y1Mm: miss.mark[1], x2Mm: miss.mark[2], y2Mm: miss.mark[3] },
  });
}
