import { describe, expect, it } from 'vitest';
import { findingsOf } from '../findings/findings-of.ts';
import { randomFrom } from '../solve/graphs.ts';
import { cadExport } from './cad-exports.ts';
import { pillarsCounted, saidOfExport } from './check-exports.ts';
import { chipOf, circle, type Draft, filled, line, rectangle, stroke } from './drawing.ts';

/** Few here; `npm run fuzz` takes thousands. */
const COUNT = 40;

describe('a chip that is exported as the areas to be etched', () => {
  it('is held for that and nothing else, as fills or hairlines, framed or not, at any angle', () => {
    for (let seed = 1; seed <= COUNT; seed++) {
      expect(saidOfExport(seed), `seed ${seed}`).toBe('hold: filled-outline');
    }
  });

  it('lists the rules that were not run, and why', () => {
    const { svg, sheet } = cadExport(randomFrom(1));
    expect(findingsOf(svg, sheet).notRun).toContainEqual({
      rule: 'loose-port',
      why: 'there is no channel, only outlines (filled-outline)',
    });
  });
});

describe('pillars', () => {
  it('are counted in the channel in which they stand, whatever their shape, size and layer', () => {
    for (let seed = 1; seed <= COUNT; seed++) {
      const { counted, drawn, blockers } = pillarsCounted(seed);
      expect({ counted, blockers }, `seed ${seed}`).toEqual({ counted: drawn, blockers: [] });
    }
  });

  it('are those of the widest channel that holds them, not of a feeder that reaches in', () => {
    const drafts = [
      stroke('feeder', [0, 0, 10, 0], { width: 1 }),
      stroke('chamber', [8, 0, 20, 0], { width: 6 }),
      circle(null, 9, 0, 0.05),
    ];
    expect(obstaclesOf(drafts)).toEqual([['chamber', true]]);
  });

  it('stand in the channel also where two strokes make up the area that holds them', () => {
    const drafts = [
      stroke('one', [0, 0, 10, 0], { width: 2 }),
      stroke('two', [10, 0, 20, 0], { width: 2 }),
      filled(null, rectangle(9, -0.5, 2, 1)),
    ];
    expect(obstaclesOf(drafts)).toEqual([['one', true]]);
  });
});

describe('a filled shape', () => {
  it('is no obstacle where only its corners are etched: it may join what they lie in', () => {
    const drafts = [
      stroke('a', [0, 0, 10, 0]),
      stroke('b', [30, 0, 40, 0]),
      filled('between', [9.95, -0.1, 30.05, -0.1, 30.05, 0.1, 9.95, 0.1, 9.95, -0.1]),
    ];
    expect(faultsOf(drafts)).toMatchObject([{ name: 'between', reason: 'end' }]);
  });

  it('is none where it is a thin bridge from one channel to another, askew', () => {
    const drafts = [
      stroke('a', [0, 0, 30, 0], { width: 2 }),
      stroke('b', [0, 10, 30, 10], { width: 2 }),
      filled('bridge', [5, 0, 5.02, 0, 8.02, 4.1, 15.02, 10, 15, 10, 8, 4.1, 5, 0]),
    ];
    expect(obstaclesOf(drafts)).toEqual([['a', false]]);
  });

  it('is none either where its edges run in channels round what is not etched', () => {
    const loop = stroke('loop', [], { width: 1, centrelines: [line(rectangle(0, 0, 10, 10), true)] });
    const away = stroke('away', [30, 0, 40, 0]);
    expect(obstaclesOf([loop, away, filled('island', rectangle(0, 0, 10, 10))])).toEqual([['loop', false]]);
  });

  it('that a channel end or a port touches is an outline, unless all that is drawn lies on it', () => {
    const chamber = filled('chamber', rectangle(10, 0, 10, 10));
    expect(faultsOf([stroke('a', [0, 5, 30, 5]), chamber, circle('p', 9, 2)])).toMatchObject([
      { name: 'chamber', reason: 'port', ports: ['p'] },
    ]);
    expect(faultsOf([stroke('a', [11, 5, 19, 5]), chamber, circle('p', 11, 5, 0.5)])).toEqual([]);
    expect(faultsOf([stroke('a', [10, 5, 20, 5]), chamber])).toEqual([]);
  });

  it('of another layer than the ports is an outline where a channel ends on it, and a pad round a port is none', () => {
    const holes = { groups: ['holes'] };
    const sheet = 'ports_layer: holes';
    const away = circle('away', 50, 0, 1, holes);
    expect(faultsOf([away, stroke('a', [0, 0, 10, 0]), circle('room', 13, 0, 3)], sheet)).toMatchObject([
      { name: 'room', reason: 'end', ends: [{ channel: 'a', xMm: 10, yMm: 0 }] },
    ]);
    const pad = [circle('p', 10, 0, 1, holes), circle('pad', 10, 0, 2)];
    expect(faultsOf([stroke('a', [0, 0, 10, 0]), ...pad], sheet)).toEqual([]);
    expect(obstaclesOf([stroke('a', [0, 0, 10, 0]), ...pad], sheet)).toEqual([]);
  });
});

describe('a closed hairline', () => {
  const ring = (name: string, x: number, y: number, w: number, h: number, width = 0.2): Draft =>
    stroke(name, [], { width, centrelines: [line(rectangle(x, y, w, h), true)] });
  const reasons = (drafts: readonly Draft[]) => faultsOf(drafts).map(({ name }) => name);

  it('round a port is an outline, unless it is wide or a channel joins it', () => {
    const port = circle('p', 5, 5);
    expect(reasons([ring('r', 0, 0, 10, 10, 0.3), port])).toEqual(['r']);
    expect(reasons([ring('r', 0, 0, 10, 10, 0.31), port])).toEqual([]);
    expect(reasons([ring('r', 0, 0, 10, 10), port, stroke('a', [-5, 5, -0.1, 5])])).toEqual([]);
    expect(reasons([ring('r', 0, 0, 10, 10), port, stroke('a', [-5, 5, -0.11, 5])])).toEqual(['r']);
    expect(reasons([ring('r', 0, 0, 10, 10), port, stroke('a', [-5, 5, 15, 5])])).toEqual([]);
  });

  it('that meets one which a channel joins is a channel too', () => {
    const drafts = [ring('r', 0, 0, 10, 10), ring('s', 5, 5, 10, 10), circle('p', 12, 12)];
    expect(reasons(drafts)).toEqual(['r', 's']);
    expect(reasons([...drafts, stroke('a', [-5, 5, 0, 5])])).toEqual([]);
  });

  it('through wells is a channel; one that is narrower than its wells is the outline of one', () => {
    const wells = [circle('p', 0, 5), circle('q', 20, 5)];
    expect(reasons([ring('r', 0, 0, 20, 10), ...wells])).toEqual([]);
    expect(reasons([ring('r', 0, 4.5, 20, 1), ...wells])).toEqual(['r']);
    expect(reasons([ring('r', 1, 4.5, 18, 1), ...wells])).toEqual(['r']);
    expect(reasons([ring('r', 1.01, 4.5, 17.98, 1), ...wells])).toEqual([]);
  });

  it('leaves nothing of the channel that it is not: no depth is missing, no name is unknown', () => {
    const chip = chipOf([ring('r', 0, 0, 10, 10), circle('p', 5, 5)], 'channels: { r: {} }');
    expect(chip.channels).toEqual([]);
    expect(chip.faults.map(({ kind }) => kind)).toEqual(['filled-outline']);
  });
});

function faultsOf(drafts: readonly Draft[], sheet = '') {
  return chipOf(drafts, `depth: 50 um\n${sheet}`).faults.filter((fault) => fault.kind === 'filled-outline');
}

function obstaclesOf(drafts: readonly Draft[], sheet = '') {
  const { obstacles, channels } = chipOf(drafts, `depth: 50 um\n${sheet}`);
  return obstacles.map(({ channel, inside }) => [channels[channel].name, inside]);
}
