import { hasWindow } from '../asked/windows.ts';
import { roomLengthM } from '../network/lengths.ts';
import { reachName } from '../network/names.ts';
import { residenceTime, volumeOf } from '../physics/duct-state.ts';
import { formatShare, type Show } from '../runsheet/shown.ts';
import type { ChannelEntry } from '../runsheet/types.ts';
import { reachState } from '../solve/reach-state.ts';
import type { ReportedCase } from './report.ts';
import type { ReachRow } from './result-rows.ts';
import { windowText } from './window-text.ts';

/** What a map can be coloured by. */
export type MapQuantity = 'shear' | 'pressure' | 'flow' | 'residence';

/**
 * One value per reach (SI; NaN where there is none), without making rows: mean floor shear, magnitude of the flow,
 * residence time, or the mean of the two end pressures.
 */
export function reachValues(one: ReportedCase, quantity: MapQuantity): Float64Array {
  const { network, flow } = one;
  const values = new Float64Array(network.reachCount);
  for (let reach = 0; reach < network.reachCount; reach++) values[reach] = valueAlong(reach);
  return values;

  function valueAlong(reach: number): number {
    switch (quantity) {
      case 'pressure':
        return (flow.nodePressure[network.reachFrom[reach]] + flow.nodePressure[network.reachTo[reach]]) / 2;
      case 'flow':
        return Math.abs(flow.reachFlow[reach]);
      case 'shear':
        return reachState(one, reach)?.floorMeanPa ?? Number.NaN;
      case 'residence': {
        const state = reachState(one, reach);
        if (state === null) return Number.NaN;
        const seconds = residenceTime(volumeOf(state.form, roomLengthM(network, reach)), state.flowM3s);
        return Number.isFinite(seconds) ? seconds : Number.NaN;
      }
      default:
        return quantity satisfies never;
    }
  }
}

/**
 * Reaches that a reader looks for first: those of channels with a window, the ones that a finding calls outside it before the
 * others; without windows the most sheared. At most `count`, each with its row.
 */
export function reachesThatMatter(
  one: ReportedCase,
  count: number,
): { readonly rows: readonly ReachRow[]; readonly windows: boolean; readonly of: number } {
  const { network, run, part } = one;
  const { channels } = network.chip;
  const outside = outsideWindows(one);
  const shear = reachValues(one, 'shear');
  const failing: number[] = [];
  const windowed: number[] = [];
  const sheared: number[] = [];
  for (let reach = 0; reach < network.reachCount; reach++) {
    const channel = network.reachChannel[reach];
    if (hasWindow(run.channels[channel])) {
      (outside(channels[channel].name, reachName(network, reach)) ? failing : windowed).push(reach);
    }
    if (!Number.isNaN(shear[reach])) sheared.push(reach);
  }
  const windows = failing.length + windowed.length > 0;
  sheared.sort((a, b) => shear[b] - shear[a] || a - b);
  const chosen = windows ? [...failing, ...windowed] : sheared;
  return { rows: chosen.slice(0, count).map((reach) => part.reaches.at(reach)), windows, of: chosen.length };
}

const WINDOW_RULES = new Set(['shear-window', 'residence-window', 'flow-window']);

/**
 * Whether a window finding speaks of a reach. A finding names the reach to look at first, its channel, then other reaches at fault;
 * one that names the channel first means all of it.
 */
export function outsideWindows({
  findings,
  network,
}: ReportedCase): (channel: string, reach: string) => boolean {
  const window = findings.findings.filter(({ rule }) => WINDOW_RULES.has(rule));
  if (window.length === 0) return () => false;
  const channelNames = new Set(network.chip.channels.map(({ name }) => name));
  const channels = new Set<string>();
  const reaches = new Set<string>();
  for (const { names } of window) {
    if (names.length > 0 && channelNames.has(names[0])) channels.add(names[0]);
    for (const name of names) if (!channelNames.has(name)) reaches.add(name);
  }
  return (channel, reach) => channels.has(channel) || reaches.has(reach);
}

const STYLE = { digits: 4, most: '≤', least: '≥' } as const;

/** The windows of a channel as text: "shear 0.05 to 0.5 Pa over 80 %". */
export function windowTexts(settings: ChannelEntry | null, show: Show): readonly string[] {
  if (settings === null) return [];
  const { wallShear, residenceTime, flow, walls } = settings;
  const texts: string[] = [];
  if (wallShear !== null) {
    const over = wallShear.over === null ? '' : ` over ${formatShare(wallShear.over)}`;
    texts.push(
      `shear ${windowText(show, 'wall_shear', wallShear, STYLE)}${over}${walls === 'all' ? ', all walls' : ''}`,
    );
  }
  if (residenceTime !== null) texts.push(`time ${windowText(show, 'residence_time', residenceTime, STYLE)}`);
  if (flow !== null) texts.push(`flow ${windowText(show, 'flow', flow, STYLE)}`);
  return texts;
}

/** What a table says of a reach's windows: "outside: shear 0.05 to 0.5 Pa"; nothing without a window. */
export function windowCell(one: ReportedCase): (row: Pick<ReachRow, 'channel' | 'name'>) => string {
  const { network, run, show } = one;
  const windowed = new Map<string, ChannelEntry>();
  run.channels.forEach((settings, c) => {
    if (hasWindow(settings)) windowed.set(network.chip.channels[c].name, settings);
  });
  const outside = outsideWindows(one);
  return (row) => {
    const settings = windowed.get(row.channel);
    if (settings === undefined) return '';
    return `${outside(row.channel, row.name) ? 'outside: ' : ''}${windowTexts(settings, show).join('; ')}`;
  };
}
