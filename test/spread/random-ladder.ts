import { reachName } from '../../src/network/names.ts';
import { sectionForm } from '../../src/physics/section.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { randomFrom } from '../solve/graphs.ts';
import { varying } from './spread-of.ts';

export interface RandomSpread {
  readonly shapes: string;
  readonly sheet: string;
}

/**
 * A feed, two headers with lanes between them and a drain, in two layers; what is asked of it lies near its nominal values, so that
 * some draws keep it and some do not. Several things are asked of one number as often as not.
 */
export function randomLadder(seed: number): RandomSpread {
  const random = randomFrom(seed);
  const between = (low: number, high: number): number => low + (high - low) * random();
  const chance = (share: number): boolean => random() < share;
  const lanes = 2 + Math.floor(random() * 3);
  const shapes: string[] = ['<g id="heads" fill="none" stroke="#000" stroke-width="0.4">'];
  const far = 10 + 8 * (lanes - 1);
  shapes.push(`<path id="top" d="M6 10 H${far + 4}"/><path id="foot" d="M6 30 H${far + 4}"/></g>`);
  shapes.push('<g id="lanes" fill="none" stroke="#000">');
  for (let i = 0; i < lanes; i++)
    shapes.push(
      `<path id="lane-${i + 1}" stroke-width="${between(0.15, 0.5).toFixed(3)}" d="M${10 + 8 * i} 10 V30"/>`,
    );
  // a bridge may flow either way, whichever lane is narrower
  if (chance(0.5)) shapes.push('<path id="bridge" stroke-width="0.3" d="M10 20 H18"/>');
  shapes.push('</g><circle id="feed" cx="6" cy="10" r="1"/>');
  shapes.push(
    `<circle id="spare" cx="${far + 4}" cy="10" r="1"/><circle id="waste" cx="${far + 4}" cy="30" r="1"/>`,
  );
  const drawing = shapes.join('\n');

  const drive = chance(0.5)
    ? `flow: ${between(5, 50).toFixed(3)} uL/min`
    : `pressure: ${between(1, 9).toFixed(3)} kPa`;
  const tubing = chance(0.5) ? ', tubing: { bore: 0.3 mm, length: 200 mm }' : '';
  const base = `fluid: water
layers: { heads: { depth: 150 um }, lanes: { depth: 80 um${chance(0.2) ? ', profile: isotropic' : ''} } }
ports: { feed: { ${drive}${tubing} }, waste: open, spare: ${chance(0.5) ? 'sealed' : 'open'} }
tolerances: { depth: ${between(1, 6).toFixed(2)} %, width${chance(0.5) ? '' : '_own'}: ${between(2, 12).toFixed(1)} um, temperature: 2 degC, viscosity: 2 %, pressure: 2 %, flow: 2 %, bore: 2 % }
`;
  const { network, run } = varying(drawing, base);
  const { chip } = network;
  const flow = solveFlow(network, run);
  /** A window round a value, at about one standard deviation, open on one side as often as not. */
  const window = (value: number, unit: string, si: number, most = value): string => {
    const ends = [(between(0.85, 0.99) * value) / si, (between(1.01, 1.15) * most) / si];
    const sides = random();
    const [min, max] = ends.sort((a, b) => a - b);
    if (sides < 0.3) return `{ min: ${min.toPrecision(9)} ${unit} }`;
    if (sides < 0.6) return `{ max: ${max.toPrecision(9)} ${unit} }`;
    return `{ min: ${min.toPrecision(9)} ${unit}, max: ${max.toPrecision(9)} ${unit} }`;
  };
  const valuesOf = (reach: number) => {
    const { profile, ductWidthMm, depthMm } = chip.channels[network.reachChannel[reach]];
    const form = sectionForm(profile, ductWidthMm / 1000, depthMm / 1000);
    const size = Math.abs(flow.reachFlow[reach]);
    const gradient = run.fluid.viscosityPaS * form.resistance * size;
    const roomM = (network.reachDuctMm[reach] - network.reachJointMm[reach]) / 1000;
    return {
      flow: window(size, 'uL/min', 1e-9 / 60),
      signed: window(flow.reachFlow[reach], 'uL/min', 1e-9 / 60),
      wall_shear: window(gradient * form.floorMean, 'Pa', 1, gradient * form.floorPeak),
      mean_shear: window(gradient * form.floorMean, 'Pa', 1),
      residence_time: window((form.areaM2 * roomM) / size, 's', 1),
      velocity: window(size / form.areaM2, 'm/s', 1),
    };
  };
  const channels: string[] = [];
  const targets: string[] = [];
  for (let reach = 0; reach < network.reachCount; reach++) {
    const { drawnName } = chip.channels[network.reachChannel[reach]];
    if (drawnName === null || network.reachNumber[reach] !== 1 || !(Math.abs(flow.reachFlow[reach]) > 1e-13))
      continue;
    const values = valuesOf(reach);
    const asked = (['flow', 'wall_shear', 'residence_time'] as const).filter(() => chance(0.15));
    if (asked.length > 0)
      channels.push(
        `  ${drawnName}: { ${asked.map((key) => `${key}: ${values[key]}`).join(', ')}${chance(0.1) ? ', walls: all' : ''} }`,
      );
    // one target by each port
    if (targets.length < 2 && chance(0.6)) {
      const by = targets.length === 0 ? 'feed' : 'waste';
      const pick = random();
      const quantity =
        pick < 0.25
          ? `flow: ${chance(0.5) ? '1 uL/min' : values.signed}`
          : pick < 0.5
            ? `wall_shear: ${chance(0.5) ? '0.1 Pa' : values.mean_shear}`
            : pick < 0.75
              ? `residence_time: ${chance(0.5) ? '10 s' : values.residence_time}`
              : `velocity: ${chance(0.5) ? '1 mm/s' : values.velocity}`;
      targets.push(
        `  - { channel: ${drawnName}, reach: "${reachName(network, reach)}", ${quantity}, by: ${by} }`,
      );
    }
  }
  const lines: string[] = [];
  if (channels.length > 0) lines.push('channels:', ...channels);
  if (targets.length > 0) lines.push('targets:', ...targets);
  const supply = (flow.supplyPressure[0] / 1000) * between(1.005, 1.06);
  if (chance(0.3))
    lines.push(
      `pump_limits: { feed: { max_pressure: ${supply.toPrecision(9)} kPa, max_flow: ${(Math.abs(flow.portFlow[0]) * 6e10 * between(1.005, 1.06)).toPrecision(9)} uL/min } }`,
    );
  if (chance(0.3))
    lines.push(
      `limits: { max_pressure: ${((flow.supplyPressure[0] / 1000) * between(1.005, 1.08)).toPrecision(9)} kPa }`,
    );
  return { shapes: drawing, sheet: `${base}${lines.join('\n')}${lines.length > 0 ? '\n' : ''}` };
}
