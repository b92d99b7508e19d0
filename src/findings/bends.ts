import { isBelow } from '../asked/within.ts';
import type { Pieces } from '../geometry/pieces.ts';
import { middleOf } from './closest.ts';
import type { FindingContext } from './context.ts';
import { lineOf } from './painted.ts';
import { channelPaths } from './paths.ts';
import { lengthMeasure, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { distanceText } from './words.ts';

/** A curve that turns by less than this is a joggle of the drawing, whatever its radius. */
const LEAST_BEND_RAD = (15 * Math.PI) / 180;

/** One finding for each run of a curve whose radius is below the channel's width. */
export function tightBends(context: FindingContext): Finding[] {
  const { pieces } = context.network.trace.near;
  const paths = channelPaths(context);
  const findings: Finding[] = [];
  for (let i = 0; i < pieces.count; ) {
    const end = pieces.firstPiece[pieces.centreline[i] + 1];
    let next = i;
    let turnRad = 0;
    for (; next < end && isTight(next); next++) turnRad += pieces.length[next] / pieces.bendRadius[next];
    if (turnRad >= LEAST_BEND_RAD) findings.push(toTightBend(context, tightestOf(pieces, i, next)));
    i = Math.max(next, i + 1);
  }
  return findings;

  function isTight(i: number): boolean {
    const radius = pieces.bendRadius[i];
    return (
      radius > 0 &&
      isBelow(radius, 2 * pieces.half[i]) &&
      !paths.isInWell(pieces.centreline[i], pieces.start[i] + pieces.length[i] / 2)
    );
  }
}

/** The middle one of the pieces from first to end − 1 that bend most. */
function tightestOf({ bendRadius }: Pieces, first: number, end: number): number {
  let least = bendRadius[first];
  for (let i = first; i < end; i++) if (bendRadius[i] < least * (1 - 1e-6)) least = bendRadius[i];
  const even = [];
  for (let i = first; i < end; i++) if (bendRadius[i] <= least * (1 + 1e-6)) even.push(i);
  return even[even.length >> 1];
}

function toTightBend({ chip, network }: FindingContext, at: number): Finding {
  const { pieces } = network.trace.near;
  const radiusMm = pieces.bendRadius[at];
  const widthMm = 2 * pieces.half[at];
  const { name } = chip.channels[pieces.channel[at]];
  const folds = isBelow(radiusMm, widthMm / 2);
  return toFinding('tight-bend', folds ? 'blocker' : 'caution', {
    message: `${name} bends with a radius of ${distanceText(radiusMm)} and is ${distanceText(widthMm)} wide${folds ? ': its inner wall folds over itself' : ''}`,
    fix: `give the bend a radius of ${distanceText(widthMm)} or more${folds ? '' : ', or draw a mitred corner'}`,
    at: middleOf(lineOf(pieces, at)),
    names: [name],
    measure: lengthMeasure(radiusMm, widthMm),
  });
}
