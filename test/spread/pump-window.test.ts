import { expect, test } from 'vitest';
import { modelOf, oneDuct, varying } from './spread-of.ts';

test('a pump may draw as much as it may give: its flow is held to both sides of nought', () => {
  const sheet = `depth: 50 um
ports: { feed: { flow: -5 uL/min }, waste: open }
pump_limits: { feed: { max_flow: 6 uL/min } }
tolerances: { flow: { feed: 5 % } }
`;
  const { outputs } = modelOf(varying(oneDuct(), sheet));
  const flow = outputs.find(({ name, quantity }) => name === 'feed' && quantity === 'flow');
  // 6 µL/min
  expect((flow?.max ?? 0) / 1e-10).toBeCloseTo(1, 9);
  expect((flow?.min ?? 0) / 1e-10).toBeCloseTo(-1, 9);
});
