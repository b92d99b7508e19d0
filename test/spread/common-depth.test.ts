import { describe, expect, it } from 'vitest';
import { outputNamed, shareOf, spreadOfDrawing } from './spread-of.ts';

/** Two equal ducts in series, each in a layer of its own: under a given flow their pressures add. */
const TWO =
  '<g id="first" fill="none" stroke="#000" stroke-width="0.2"><path id="a" d="M10 20 H20"/></g>' +
  '<g id="second" fill="none" stroke="#000" stroke-width="0.2"><path id="b" d="M20 20 H30"/></g>' +
  '<circle id="feed" cx="9.5" cy="20" r="0.5"/><circle id="waste" cx="30.5" cy="20" r="0.5"/>';

async function sdOf(tolerances: string) {
  const sheet = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
layers: { first: { depth: 50 um }, second: { depth: 50 um } }
ports: { feed: { flow: 1 uL/min }, waste: open }
tolerances: ${tolerances}
`;
  const spread = await spreadOfDrawing(TWO, sheet, { draws: 4000 });
  const output = outputNamed(spread, 'feed', 'pressure');
  return { sd: output.sd, linearSd: output.linearSd, share: (key: string) => shareOf(spread, output, key) };
}

describe('etch depth of several layers', () => {
  it('is independent between layers: two equal parts add in quadrature', async () => {
    const own = await sdOf('{ depth: 0.2 % }');
    const common = await sdOf('{ depth_common: 0.2 % }');
    expect(common.linearSd / own.linearSd).toBeCloseTo(Math.SQRT2, 10);
    expect(common.sd / own.sd).toBeCloseTo(Math.SQRT2, 1);
  });

  it('counts the common part as a cause of its own', async () => {
    const both = await sdOf('{ depth: 0.2 %, depth_common: 0.2 % }');
    // own: 2 · ¼, common: 1 (of the square of the whole resistance)
    expect(both.share('depth_common')).toBeCloseTo(2 / 3, 10);
    expect(both.share('depth:first')).toBeCloseTo(1 / 6, 10);
  });
});
