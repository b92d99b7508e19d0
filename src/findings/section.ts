import { reachesOfChannel } from '../asked/reaches.ts';
import type { Channel } from '../chip/types.ts';
import { reachName } from '../network/names.ts';
import { meanRoofRise, risenResistanceFactor } from '../physics/roof.ts';
import { formatNumber, formatShare } from '../runsheet/shown.ts';
import { acrossMark, middleOfChannel } from './centrelines.ts';
import type { FindingContext } from './context.ts';
import { type FreeSpan, freeSpan } from './free-span.ts';
import { middleOfReach, othersText, reachNames, worstReach } from './reaches.ts';
import {
  found,
  isAbove,
  isBelow,
  limitRule,
  notRun,
  type Rule,
  type RuleOutcome,
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
  limitRule(
    'narrow-channel',
    'min_width',
    ({ run }) => run.limits.minWidthM,
    ({ chip }, limit) =>
      perChannel(chip.channels, (channel) => {
        const { name, drawnWidthMm } = channel;
        const limitMm = limit.value * 1e3;
        if (!isBelow(drawnWidthMm, limitMm)) return null;
        const at = middleOfChannel(channel);
        const drawn = channel.profile === 'isotropic' ? 'mask opening' : 'channel';
        return toFinding('narrow-channel', 'blocker', {
          message: `${name} is drawn ${distanceText(drawnWidthMm)} wide; the narrowest ${drawn} is ${limitText(distanceText(limitMm), limit)}`,
          fix: `draw ${name} with a stroke width of ${leastText(limitMm)} or more`,
          at,
          names: [name],
          measure: { value: drawnWidthMm / 1e3, limit: limit.value, unit: 'm' },
          ...(at === null ? {} : { mark: acrossMark(at, drawnWidthMm) }),
        });
      }),
  ),
  limitRule(
    'roof-span',
    'max_width_to_depth',
    ({ run }) => run.limits.maxWidthToDepth,
    ({ chip }, limit) =>
      perChannel(chip.channels, (channel, c) => {
        const { name, ductWidthMm, depthMm } = channel;
        if (!isAbove(ductWidthMm / depthMm, limit.value)) return null;
        const pillars = chip.obstacles.filter(({ channel: its, inside }) => its === c && inside);
        // An isotropic etch widens the way between pillars as it widens the channel.
        const free = pillars.length === 0 ? null : freeSpan(channel, pillars, chip.ports);
        const spanMm = free === null ? ductWidthMm : ductWidthMm - channel.drawnWidthMm + free.spanMm;
        const ratio = spanMm / depthMm;
        if (!isAbove(ratio, limit.value)) return null;
        const severity = isAbove(ratio, 2 * limit.value) ? 'blocker' : 'caution';
        // The place of the widest room is known to its size, not to a point: it is told, and the channel's middle marked.
        const at = middleOfChannel(channel);
        const drawnAtMost = channel.drawnWidthMm - (ductWidthMm - limit.value * depthMm);
        const between =
          free === null ? '' : ` between its ${countText(pillars.length, 'pillar')}${widestText(free)}`;
        const closer = pillars.length === 0 ? '' : 'set its pillars closer, ';
        const narrower = drawnAtMost > 0 ? `narrow ${name} to ${sizeAtMostText(drawnAtMost)}, ` : '';
        return toFinding('roof-span', severity, {
          message: `the roof of ${name}${between} spans ${formatNumber(ratio)} times its depth (${distanceText(spanMm)} over ${distanceText(depthMm)}) and may sag; the limit is ${limitText(`${formatNumber(limit.value)} times`, limit)}`,
          fix: `${closer}${narrower}etch it ${leastText(spanMm / limit.value)} deep or deeper, or split it into narrower lanes`,
          at,
          names: [name],
          measure: { value: ratio, limit: limit.value, unit: '' },
          ...(at === null ? {} : { mark: acrossMark(at, 2 * channel.stripHalfWidthMm) }),
        });
      }),
  ),
  limitRule(
    'tall-wall',
    'max_depth_to_width',
    ({ run }) => run.limits.maxDepthToWidth,
    ({ chip }, limit) =>
      perChannel(chip.channels, (channel) => {
        const { name, ductWidthMm, depthMm } = channel;
        const ratio = depthMm / ductWidthMm;
        if (!isAbove(ratio, limit.value)) return null;
        const at = middleOfChannel(channel);
        const wider = channel.drawnWidthMm + depthMm / limit.value - ductWidthMm;
        return toFinding('tall-wall', 'caution', {
          message: `${name} is ${formatNumber(ratio)} times as deep as wide (${distanceText(depthMm)} by ${distanceText(ductWidthMm)}); the limit is ${limitText(`${formatNumber(limit.value)} times`, limit)}`,
          fix: `draw ${name} ${leastText(wider)} wide or wider, or etch it at most ${mostText(limit.value * ductWidthMm)} deep`,
          at,
          names: [name],
          measure: { value: ratio, limit: limit.value, unit: '' },
          ...(at === null ? {} : { mark: acrossMark(at, 2 * channel.stripHalfWidthMm) }),
        });
      }),
  ),
  { names: ['soft-walls'], run: softWalls },
  { names: ['isotropic-etch'], run: (context) => found(isotropicEtch(context)) },
];

function widestText({ xMm, yMm }: FreeSpan): string {
  const near = (mm: number): number => Math.round(mm * 10) / 10;
  return Number.isNaN(xMm) ? '' : `, where it is widest, near ${placeText(near(xMm), near(yMm))},`;
}

function perChannel(
  channels: readonly Channel[],
  look: (channel: Channel, index: number) => Finding | null,
): Finding[] {
  return channels.map(look).filter((finding) => finding !== null);
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
  const show = showFor(context);
  let unknown = 0;
  const findings = chip.channels.map((channel, c) => {
    const widthM = (2 * channel.stripHalfWidthMm) / 1e3;
    const depthM = channel.depthMm / 1e3;
    const worst = worstReach(
      reachesOfChannel(context.network, c),
      (reach) => {
        const pressurePa = meanPressure(reach);
        if (Number.isNaN(pressurePa) || !(widthM > 0 && depthM > 0)) {
          unknown++;
          return null;
        }
        const riseM = meanRoofRise(pressurePa, widthM, stiffness.value);
        const share = Math.abs(riseM) / depthM;
        return isAbove(share, RISE_SHARE) ? { pressurePa, riseM, share } : null;
      },
      ({ share }) => share,
    );
    if (worst === null) return null;
    const { pressurePa, riseM, share } = worst.fault;
    const name = reachName(network, worst.reach);
    const factor = risenResistanceFactor(depthM, riseM);
    const effect =
      factor === Infinity
        ? 'it comes down to the floor and the duct closes'
        : `the resistance is about ${formatNumber(Math.abs(factor - 1) * 100, 2)} % ${riseM > 0 ? 'lower' : 'higher'} than computed, and flow and wall shear are off with it`;
    const narrowMm = (channel.drawnWidthMm * RISE_SHARE) / share;
    const leastDepthM = Math.abs(riseM) / RISE_SHARE;
    const { minWidthM, maxDepthToWidth } = run.limits;
    // Advice that another rule would hold, or that nobody could make, is none.
    const ways = [
      ...(narrowMm >= Math.max(LEAST_WIDTH_MM, 1e3 * (minWidthM?.value ?? 0))
        ? [`narrow it to ${sizeAtMostText(narrowMm)}`]
        : []),
      ...(leastDepthM * 1e3 <= (maxDepthToWidth?.value ?? 1) * channel.ductWidthMm
        ? [`etch it ${leastText(leastDepthM * 1e3)} deep`]
        : []),
    ];
    return toFinding('soft-walls', 'caution', {
      message: `the roof of ${name} ${riseM > 0 ? 'rises' : 'sinks'} by ${show.text('cross_length', Math.abs(riseM))} on average, ${formatShare(share)} of its depth, at ${show.text('pressure', pressurePa)} and a stiffness of ${limitText(show.text('pressure', stiffness.value), stiffness)}: ${effect}${othersText(context, worst)}`,
      fix: `keep ${name} below ${show.text('pressure', (Math.abs(pressurePa) * RISE_SHARE) / share)}${ways.map((way) => `, ${way}`).join('')}, or make the chip of something stiffer`,
      at: middleOfReach(network, worst.reach),
      names: reachNames(context, worst),
      measure: { value: share, limit: RISE_SHARE, unit: '' },
    });
  });
  const all = unknown === network.reachCount && unknown > 0;
  return all
    ? notRun('soft-walls', 'no pressure in the chip is known')
    : found(findings.filter((finding) => finding !== null));

  function meanPressure(reach: number): number {
    if (flow === null) return Number.NaN;
    return (flow.nodePressure[network.reachFrom[reach]] + flow.nodePressure[network.reachTo[reach]]) / 2;
  }
}

/** One finding per layer: everyone who reads the drawing must know that the etch is wider than the mask. */
function isotropicEtch({ chip }: FindingContext): Finding[] {
  const byLayer = new Map<number, Channel[]>();
  for (const channel of chip.channels) {
    if (channel.profile !== 'isotropic' || Number.isNaN(channel.depthMm)) continue;
    const group = byLayer.get(channel.layer);
    if (group === undefined) byLayer.set(channel.layer, [channel]);
    else group.push(channel);
  }
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
