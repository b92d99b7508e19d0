import { expect, test } from 'vitest';
import { passagesOf } from '../../src/asked/passages.ts';
import { reachesOfChannel } from '../../src/asked/reaches.ts';
import { hasWindow } from '../../src/asked/windows.ts';
import { varying } from '../spread/spread-of.ts';

// lane is cut into three reaches by the two side channels that leave it
const LADDER = `<g id="lanes" fill="none" stroke="#000" stroke-width="0.2">
    <path id="lane" d="M10 20 H40"/><path id="up" d="M20 20 V10"/><path id="down" d="M30 20 V30"/></g>
  <circle id="feed" cx="10" cy="20" r="0.5"/><circle id="waste" cx="40" cy="20" r="0.5"/>
  <circle id="top" cx="20" cy="10" r="0.5"/><circle id="bottom" cx="30" cy="30" r="0.5"/>`;
const SHEET = `layers: { lanes: { depth: 100 um } }
ports: { feed: { pressure: 1 kPa }, '*': open }
channels: { lane: { flow: { min: 1 uL/min } }, up: { walls: all } }
tolerances: { depth: 5 % }
`;

const { network, run } = varying(LADDER, SHEET);
const channelNamed = (name: string): number =>
  network.chip.channels.findIndex(({ drawnName }) => drawnName === name);
const lane = [...reachesOfChannel(network, channelNamed('lane'))];

test('the reaches of a channel come in drawn order, and each reach is of one channel', () => {
  expect(lane.map((reach) => network.reachNumber[reach])).toEqual([1, 2, 3]);
  const all = network.chip.channels.flatMap((_, channel) => [...reachesOfChannel(network, channel)]);
  expect(all.sort((a, b) => a - b)).toEqual([...Array(network.reachCount).keys()]);
});

test('reaches are one passage while all flow one way, and each for itself otherwise', () => {
  const flowing = (first: number, second: number, third: number): Float64Array => {
    const flow = new Float64Array(network.reachCount);
    lane.forEach((reach, k) => {
      flow[reach] = [first, second, third][k];
    });
    return flow;
  };
  expect(passagesOf(network, lane, flowing(3, 2, 1))).toEqual([lane]);
  expect(passagesOf(network, lane, flowing(-3, -2, -1))).toEqual([lane]);
  expect(passagesOf(network, lane, flowing(3, -2, 1))).toEqual(lane.map((reach) => [reach]));
  expect(passagesOf(network, lane, flowing(0, 0, 0))).toEqual(lane.map((reach) => [reach]));
  expect(passagesOf(network, [lane[0], lane[2]], flowing(3, 2, 1))).toEqual([[lane[0]], [lane[2]]]);
});

test('an entry without a window asks for none', () => {
  expect(['lane', 'up', 'down'].map((name) => hasWindow(run.channels[channelNamed(name)]))).toEqual([
    true,
    false,
    false,
  ]);
});
