import { channelOf } from './centrelines.ts';
import type { FindingContext } from './context.ts';
import { doubleStrokes } from './overlaps.ts';
import { lengthMeasure, type Rule, rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText } from './words.ts';

/** Strokes that say the same thing twice. */
export const strokeRules: readonly Rule[] = [rule('double-stroke', doubles)];

function doubles(context: FindingContext): Finding[] {
  return doubleStrokes(context).map((double) => {
    const { a, b, from, to, limitMm, apartMm } = double;
    const lengthMm = to - from;
    const one = channelOf(context.network, a).name;
    const two = channelOf(context.network, b).name;
    const same = one === two;
    const pair = same ? `two stretches of ${one}` : `${two} and ${one}`;
    const offset = apartMm > 0.0005 ? `, ${distanceText(apartMm)} apart at most` : '';
    return toFinding('double-stroke', 'blocker', {
      message: `${pair} are drawn over each other along ${distanceText(lengthMm)}${offset}: they would be one duct, but count as two; more than ${distanceText(limitMm)} (twice the wider width) is no joint`,
      fix: same
        ? `draw that part of ${one} once`
        : `delete the part of ${two} that runs along ${one}, or move it clear if it is meant to be a channel of its own; in the run sheet, name it under ignore: if it is no channel, or give its layer a plane: of its own if it lies in another sheet`,
      at: double,
      names: same ? [one] : [two, one],
      measure: lengthMeasure(lengthMm, limitMm),
    });
  });
}
