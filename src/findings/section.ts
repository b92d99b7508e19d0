import { isAbove, isBelow } from '../asked/within.ts';
import { grouped } from '../by-key.ts';
import type { Channel, Chip, Sourced } from '../chip/types.ts';
import { meanRoofRise, risenResistanceFactor } from '../physics/roof.ts';
import { formatNumber, formatShare } from '../runsheet/shown.ts';
import { acrossMark, middleOfChannel } from './centrelines.ts';
import type { FindingContext } from './context.ts';
import { type FreeSpan, freeSpan } from './free-span.ts';
import { type AtWorst, perChannel } from './reaches.ts';
import {
  found,
  limitRule,
  notRun,
  type Rule,
  type RuleOutcome,
  rule,
  toFinding,
  withoutLimit,
} from './rule.ts';
import type { Finding } from './types.ts';
import {
  countText,
  distanceText,
  leastText,
  limitText,
  listText,
  mostText,
  placeText,
  showFor,
  sizeAtMostText,
} from './words.ts';

/** A channel's own section: can it be made, does its roof stay up, does its relief stand. */
export const sectionRules: readonly Rule[] = [
  limitRule('narrow-channel', 'min_width', 'minWidthM', ({ chip }, limit) =>
    chip.channels.flatMap((channel) => narrowChannel(channel, limit) ?? []),
  ),
  limitRule('roof-span', 'max_width_to_depth', 'maxWidthToDepth', ({ chip }, limit) =>
    chip.channels.flatMap((_, channel) => roofSpan(chip, channel, limit) ?? []),
  ),
  limitRule('tall-wall', 'max_depth_to_width', 'maxDepthToWidth', ({ chip }, limit) =>
    chip.channels.flatMap((channel) => tallWall(channel, limit) ?? []),
  ),
  { names: ['soft-walls'], run: softWalls },
  rule('isotropic-etch', isotropicEtch),
];

/** A fault of all of a channel is shown across its middle. */
function acrossMiddle(channel: Channel, widthMm: number) {
  const at = middleOfChannel(channel);
  return { at, names: [channel.name], mark: at && acrossMark(at, widthMm) };
}

function narrowChannel(channel: Channel, limit: Sourced<number>): Finding | null {
  const { name, drawnWidthMm } = channel;
  const limitMm = limit.value * 1e3;
  if (!isBelow(drawnWidthMm, limitMm)) return null;
  const drawn = channel.profile === 'isotropic' ? 'mask opening' : 'channel';
  return toFinding('narrow-channel', 'blocker', {
    message: `${name} is drawn ${distanceText(drawnWidthMm)} wide; the narrowest ${drawn} is ${limitText(distanceText(limitMm), limit)}`,
    fix: `draw ${name} with a stroke width of ${leastText(limitMm)} or more`,
    ...acrossMiddle(channel, drawnWidthMm),
    measure: { value: drawnWidthMm / 1e3, limit: limit.value, unit: 'm' },
  });
}

function roofSpan(chip: Chip, c: number, limit: Sourced<number>): Finding | null {
  const channel = chip.channels[c];
  const { name, ductWidthMm, drawnWidthMm, depthMm } = channel;
  if (!isAbove(ductWidthMm / depthMm, limit.value)) return null;
  const pillars = chip.obstacles.filter(({ channel: its, inside }) => its === c && inside);
  // An isotropic etch widens the way between pillars as it widens the channel.
  const free = pillars.length === 0 ? null : freeSpan(channel, pillars, chip.ports);
  const spanMm = free === null ? ductWidthMm : ductWidthMm - drawnWidthMm + free.spanMm;
  const ratio = spanMm / depthMm;
  if (!isAbove(ratio, limit.value)) return null;
  const drawnAtMost = drawnWidthMm - (ductWidthMm - limit.value * depthMm);
  const between =
    free === null ? '' : ` between its ${countText(pillars.length, 'pillar')}${widestText(free)}`;
  const closer = pillars.length === 0 ? '' : 'set its pillars closer, ';
  const narrower = drawnAtMost > 0 ? `narrow ${name} to ${sizeAtMostText(drawnAtMost)}, ` : '';
  return toFinding('roof-span', isAbove(ratio, 2 * limit.value) ? 'blocker' : 'caution', {
    message: `the roof of ${name}${between} spans ${formatNumber(ratio)} times its depth (${distanceText(spanMm)} over ${distanceText(depthMm)}) and may sag; the limit is ${timesText(limit)}`,
    fix: `${closer}${narrower}etch it ${leastText(spanMm / limit.value)} deep or deeper, or split it into narrower lanes`,
    // The place of the widest room is known to its size, not to a point: it is told, and the channel's middle marked.
    ...acrossMiddle(channel, 2 * channel.stripHalfWidthMm),
    measure: { value: ratio, limit: limit.value, unit: '' },
  });
}

function tallWall(channel: Channel, limit: Sourced<number>): Finding | null {
  const { name, ductWidthMm, depthMm } = channel;
  const ratio = depthMm / ductWidthMm;
  if (!isAbove(ratio, limit.value)) return null;
  const wider = channel.drawnWidthMm + depthMm / limit.value - ductWidthMm;
  return toFinding('tall-wall', 'caution', {
    message: `${name} is ${formatNumber(ratio)} times as deep as wide (${distanceText(depthMm)} by ${distanceText(ductWidthMm)}); the limit is ${timesText(limit)}`,
    fix: `draw ${name} ${leastText(wider)} wide or wider, or etch it at most ${mostText(limit.value * ductWidthMm)} deep`,
    ...acrossMiddle(channel, 2 * channel.stripHalfWidthMm),
    measure: { value: ratio, limit: limit.value, unit: '' },
  });
}

function timesText(limit: Sourced<number>): string {
  return limitText(`${formatNumber(limit.value)} times`, limit);
}

function widestText({ xMm, yMm }: FreeSpan): string {
  const near = (mm: number): number => Math.round(mm * 10) / 10;
  return Number.isNaN(xMm) ? '' : `, where it is widest, near ${placeText(near(xMm), near(yMm))},`;
}

/** Rise of the roof over the depth above which flow and shear are off by more than a reader would expect. */
const RISE_SHARE = 0.05;

/** Below this no width is proposed where nobody gave a least one. */
const LEAST_WIDTH_MM = 0.005;

/** One finding per channel, at the reach whose roof moves most. */
function softWalls(context: FindingContext): RuleOutcome {
  const { chip, run, network, flow } = context;
  const stiffness = run.limits.stiffnessPa;
  if (stiffness === null) return withoutLimit('soft-walls', 'stiffness', context);
  let unknown = 0;
  const findings = perChannel(
    context,
    (reach, channel): SoftWall | null => {
      const { stripHalfWidthMm, depthMm } = chip.channels[channel];
      const widthM = (2 * stripHalfWidthMm) / 1e3;
      const depthM = depthMm / 1e3;
      const pressurePa = meanPressure(reach);
      if (Number.isNaN(pressurePa) || !(widthM > 0 && depthM > 0)) {
        unknown++;
        return null;
      }
      const riseM = meanRoofRise(pressurePa, widthM, stiffness.value);
      const share = Math.abs(riseM) / depthM;
      return isAbove(share, RISE_SHARE) ? { pressurePa, riseM, depthM, share, channel } : null;
    },
    ({ share }) => share,
    (fault, worst) => toSoftWall(context, fault, worst, stiffness),
  );
  const all = unknown === network.reachCount && unknown > 0;
  return all ? notRun('soft-walls', 'no pressure in the chip is known') : found(findings);

  function meanPressure(reach: number): number {
    if (flow === null) return Number.NaN;
    return (flow.nodePressure[network.reachFrom[reach]] + flow.nodePressure[network.reachTo[reach]]) / 2;
  }
}

interface SoftWall {
  readonly channel: number;
  readonly pressurePa: number;
  readonly depthM: number;
  readonly riseM: number;
  /** Of the depth. */
  readonly share: number;
}

function toSoftWall(
  context: FindingContext,
  { channel, pressurePa, depthM, riseM, share }: SoftWall,
  { name, others, place, names }: AtWorst,
  stiffness: Sourced<number>,
): Finding {
  const show = showFor(context);
  const { drawnWidthMm, ductWidthMm } = context.chip.channels[channel];
  const factor = risenResistanceFactor(depthM, riseM);
  const effect =
    factor === Infinity
      ? 'it comes down to the floor and the duct closes'
      : `the resistance is about ${formatNumber(Math.abs(factor - 1) * 100, 2)} % ${riseM > 0 ? 'lower' : 'higher'} than computed, and flow and wall shear are off with it`;
  const narrowMm = (drawnWidthMm * RISE_SHARE) / share;
  const leastDepthM = Math.abs(riseM) / RISE_SHARE;
  const { minWidthM, maxDepthToWidth } = context.run.limits;
  // Advice that another rule would hold, or that nobody could make, is none.
  const canNarrow = narrowMm >= Math.max(LEAST_WIDTH_MM, 1e3 * (minWidthM?.value ?? 0));
  const canDeepen = leastDepthM * 1e3 <= (maxDepthToWidth?.value ?? 1) * ductWidthMm;
  const narrower = canNarrow ? `, narrow it to ${sizeAtMostText(narrowMm)}` : '';
  const deeper = canDeepen ? `, etch it ${leastText(leastDepthM * 1e3)} deep` : '';
  return toFinding('soft-walls', 'caution', {
    message: `the roof of ${name} ${riseM > 0 ? 'rises' : 'sinks'} by ${show.text('cross_length', Math.abs(riseM))} on average, ${formatShare(share)} of its depth, at ${show.text('pressure', pressurePa)} and a stiffness of ${limitText(show.text('pressure', stiffness.value), stiffness)}: ${effect}${others}`,
    fix: `keep ${name} below ${show.text('pressure', (Math.abs(pressurePa) * RISE_SHARE) / share)}${narrower}${deeper}, or make the chip of something stiffer`,
    at: place,
    names,
    measure: { value: share, limit: RISE_SHARE, unit: '' },
  });
}

/** One finding per layer: everyone who reads the drawing must know that the etch is wider than the mask. */
function isotropicEtch({ chip }: FindingContext): Finding[] {
  const etched = chip.channels.filter(
    ({ profile, depthMm }) => profile === 'isotropic' && !Number.isNaN(depthMm),
  );
  const byLayer = grouped(etched, ({ layer }) => layer);
  return [...byLayer].map(([layer, channels]) => {
    const [first] = channels;
    const { name } = chip.layers[layer];
    const where = name === '' ? listText(channels.map((channel) => channel.name)) : `layer ${name}`;
    return toFinding('isotropic-etch', 'caution', {
      message: `${where} ${name === '' && channels.length > 1 ? 'are' : 'is'} etched isotropically: the drawn widths are the mask's, the etch undercuts it by its depth on both sides; ${first.name}, drawn ${distanceText(first.drawnWidthMm)} wide and ${distanceText(first.depthMm)} deep, is ${distanceText(2 * first.stripHalfWidthMm)} from wall to wall, and is computed as a rectangle of the same depth and area, ${distanceText(first.ductWidthMm)} wide (good to 5 % in resistance and 3 % in wall shear)`,
      fix: `check that the drawing shows the mask openings; write profile: rectangle for ${name === '' ? 'its layer' : name} if it shows the finished widths of straight walls`,
      at: middleOfChannel(first),
      names: name === '' ? channels.map((channel) => channel.name) : [name, first.name],
    });
  });
}
