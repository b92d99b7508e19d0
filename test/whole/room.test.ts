import { expect, test } from 'vitest';
import { findAll } from '../../src/findings/check.ts';
import { reachValues } from '../../src/report/reach-values.ts';
import { findSettings } from '../../src/solve/targets.ts';
import { outputValue } from '../../src/spread/outputs.ts';
import { contextOf } from '../findings/findings-of.ts';
import { reportOf } from '../report/demo.ts';
import { drawing } from '../solve/network-from.ts';
import { modelOf, varying } from '../spread/spread-of.ts';

const SVG = drawing({ lane: 'M5 10H20V25' }, { in: [5, 10], out: [20, 25] });
/** 6 µL/min through 29 mm of 0.2 × 0.08 mm, rim to rim: a corner adds resistance, not room. */
const SECONDS = (0.2 * 0.08 * 29) / (6 / 60);

const sheet = (more: string): string =>
  `joints: resolved\ndepth: 80 um\nports: { in: { flow: 6 uL/min }, out: open }\n${more}`;

test('findings, targets, spread and maps take one residence time, that of the centreline', async () => {
  const context = contextOf(SVG, sheet('channels: { lane: { residence_time: { max: 1 s } } }\n'));
  const window = findAll(context).findings.find(({ rule }) => rule === 'residence-window');
  expect((window?.measured ?? 0) / SECONDS).toBeCloseTo(1, 9);

  const wanted = sheet(`targets: [{ channel: lane, residence_time: ${SECONDS} s, by: in }]\n`);
  const [{ response }] = findSettings(contextOf(SVG, wanted)).targets;
  expect(response.setting / 1e-10).toBeCloseTo(1, 9);

  const inner = SVG.replace(/^<svg[^>]*>|<\/svg>$/g, '');
  const { model, outputs } = modelOf(
    varying(
      inner,
      sheet('channels: { lane: { residence_time: { max: 9 s } } }\ntolerances: { depth: 5 % }\n'),
    ),
  );
  const times = outputs.filter(({ quantity }) => quantity === 'residence_time');
  expect(times.map((output) => outputValue(output, model, model.nominalState) / SECONDS)).toEqual([
    expect.closeTo(1, 9),
  ]);

  const [reported] = (await reportOf('chip', SVG, sheet(''))).cases;
  expect(reachValues(reported, 'residence')[0] / SECONDS).toBeCloseTo(1, 9);
});
