import type { Spread } from '../spread/types.ts';
import { known } from './known.ts';
import type { SpreadPart } from './result-rows.ts';

/** The spread as it stands in the result document. */
export function spreadPartOf(spread: Spread): SpreadPart {
  const { causes, corner, outputs, draws } = spread;
  return {
    draws,
    draws_asked: spread.asked,
    draws_outside_model: spread.outside,
    seed: spread.seed,
    outputs: outputs.map((output) => ({
      ...spokenOf(output),
      nominal: known(output.nominal),
      mean: known(output.mean),
      sd: known(output.sd),
      p2_5: known(output.p2_5),
      p97_5: known(output.p97_5),
      linear_sd: known(output.linearSd),
      linear: output.isLinear,
      kept: keptShare(output, spread),
      shares: namedShares(output.shares, spread),
    })),
    outputs_left_out: spread.leftOut,
    yield: spread.yield?.share ?? null,
    yield_low: spread.yield?.low ?? null,
    yield_high: spread.yield?.high ?? null,
    even: Object.fromEntries(
      spread.evenGroups.map(({ key, failures }) => [
        key,
        draws === 0 ? null : known((draws - spread.outside - failures) / draws),
      ]),
    ),
    not_judged: [...spread.unknownWindows, ...spread.unknownLimits],
    worst_corner:
      corner === null
        ? null
        : {
            ...spokenOf(outputs[corner.output]),
            limit: corner.limit,
            room_sd: corner.room,
            value: known(corner.value),
            kept: corner.isKept,
            at: Object.fromEntries(causes.map(({ key }, cause) => [key, END[corner.signs[cause] + 1]])),
          },
  };
}

function spokenOf({ on, name, quantity, unit }: Spread['outputs'][number]) {
  return { on, name, quantity, unit };
}

const END = ['lower', 'each its own', 'upper'] as const;

/** Share of the draws that keep what is asked of one number; null where nothing is asked, or without draws. Draws outside the model do not keep it. */
export function keptShare(
  { min, max, failures }: Pick<Spread['outputs'][number], 'min' | 'max' | 'failures'>,
  { draws, outside }: Pick<Spread, 'draws' | 'outside'>,
): number | null {
  if ((min === null && max === null) || draws === 0) return null;
  return (draws - outside - failures) / draws;
}

function namedShares(shares: Float64Array | null, { causes }: Spread): Record<string, number> {
  if (shares === null) return {};
  return Object.fromEntries(causes.map(({ key }, cause) => [key, shares[cause]]));
}
