import { describe, expect, it } from 'vitest';
import { isDrawnAlike } from '../../src/network/alike.ts';
import { chipOf } from './chip-of.ts';

describe('two cases of one layout', () => {
  const chip = chipOf(
    [{ name: 'a', widthMm: 0.2, lines: [[0, 0, 5, 0]] }],
    [{ name: 'in', x: 0, y: 0, radiusMm: 0.5 }],
  );

  it('share their network where only fluid, conditions and windows differ', () => {
    const ports = chip.ports.map((port) => ({ ...port, condition: { kind: 'open' as const } }));
    expect(isDrawnAlike(chip, { ...chip, ports, fluid: { ...chip.fluid, viscosityPaS: 2e-3 } })).toBe(true);
  });

  const [channel] = chip.channels;
  const others = {
    'another depth': { channels: [{ ...channel, depthMm: 0.2 }] },
    'another width': { channels: [{ ...channel, ductWidthMm: 0.3 }] },
    'another plane': { channels: [{ ...channel, plane: 1 }] },
    'a stroke left out': { channels: [] },
    'another well': { ports: [{ ...chip.ports[0], radiusMm: 0.6 }] },
    'another slack': { joinWithinMm: 2e-3 },
    'joints resolved': { joints: 'resolved' as const },
    'another scale': { unitMm: 2 },
  };
  for (const [name, change] of Object.entries(others)) {
    it(`do not with ${name}`, () => {
      expect(isDrawnAlike(chip, { ...chip, ...change })).toBe(false);
    });
  }
});
