import { channelForm } from '../../chip/sections.ts';
import { formatNumber, type Shown } from '../../runsheet/shown.ts';
import { figures, words } from '../columns.ts';
import { reachesThatMatter } from '../reach-values.ts';
import type { ReportedCase } from '../report.ts';
import type { ReachRow } from '../result-rows.ts';
import type { PageContext } from './context.ts';
import { chapter, type Section } from './section.ts';

/** What can be checked with pencil and paper: plate formulas beside the exact values, flows in and out, the power of the depth. */
export function writeHandCheck(context: PageContext): void {
  const { paper, one } = context;
  const row = reachToCheck(one);
  const section = chapter(paper, 'Hand check', 'portrait', 330);
  if (row === null) {
    section.paragraph('No reach has a known flow, so there is nothing to check by hand.');
    return;
  }
  writePlates(context, section, row);
  writeBalance(context, section);
  writeDepth(context, section, row);
}

/** A reach of which everything is known and something flows. */
type Checked = ReachRow &
  Readonly<
    Record<
      | 'flow_m3_s'
      | 'pressure_drop_pa'
      | 'width_m'
      | 'depth_m'
      | 'wall_shear_floor_peak_pa'
      | 'wall_shear_side_peak_pa',
      number
    >
  >;

function reachToCheck(one: ReportedCase): Checked | null {
  const known = reachesThatMatter(one, 50).rows.find(
    (row) => row.flow_m3_s && row.width_m !== null && row.depth_m !== null && row.pressure_drop_pa !== null,
  );
  // with width, depth and flow known, pressure drop and shear are
  return known === undefined ? null : (known as Checked);
}

function writePlates({ paper, one }: PageContext, section: Section, row: Checked): void {
  const { show } = one;
  const { viscosityPaS } = one.run.fluid;
  const flow = Math.abs(row.flow_m3_s);
  const [long, short] = row.width_m >= row.depth_m ? [row.width_m, row.depth_m] : [row.depth_m, row.width_m];
  const wall = row.width_m >= row.depth_m ? 'floor' : 'side';
  const peak = wall === 'floor' ? row.wall_shear_floor_peak_pa : row.wall_shear_side_peak_pa;
  const platesDrop = (12 * viscosityPaS * row.length_m * flow) / (long * short ** 3);
  const platesShear = (6 * viscosityPaS * flow) / (long * short ** 2);
  section.heading(2, `Reach ${row.name} as parallel plates`);
  section.paragraph(whyThisReach(one));
  section.paragraph(
    `µ = ${formatNumber(viscosityPaS * 1000)} mPa s, L = ${show.text('length', row.length_m)} (duct length), Q = ${show.text('flow', flow)}, ` +
      `w = ${show.text('cross_length', long)}, h = ${show.text('cross_length', short)} (w the longer side, h the shorter).`,
  );
  section.table(
    [
      {
        what: 'pressure drop',
        formula: '12 µ L Q / (w h³)',
        shown: 'pressure',
        plates: platesDrop,
        exact: Math.abs(row.pressure_drop_pa),
      },
      {
        what: `peak shear on the ${wall}`,
        formula: '6 µ Q / (w h²)',
        shown: 'wall_shear',
        plates: platesShear,
        exact: peak,
      },
    ] as const,
    [
      words('what', ({ what }) => what, 'share'),
      words('by hand, plates', ({ formula }) => formula),
      figures('plates', ({ plates, exact, shown }) => textOf(plates, Math.max(plates, exact), shown)),
      figures('exact', ({ plates, exact, shown }) => textOf(exact, Math.max(plates, exact), shown)),
      figures('exact / plates', ({ plates, exact }) => formatNumber(exact / plates)),
    ],
    { size: 7.5 },
  );
  section.paragraph(
    'Plates have no side walls. The exact drop is larger by what the sides hold back; the exact peak is larger because the flow keeps away from the sides and ' +
      'so is stronger in the middle. For h/w = 0.1 the factors are 1.067 for both; for a square 2.371 and 1.601.',
  );
  paper.y += 6;

  function textOf(value: number, largest: number, shown: Shown): string {
    const { text, si } = show.unit(shown, largest);
    return `${formatNumber(value / si)} ${text}`;
  }
}

function whyThisReach(one: ReportedCase): string {
  return reachesThatMatter(one, 1).windows
    ? 'The reach that matters most: the first with a window, one outside it before the others.'
    : 'The reach that matters most: no channel has a window, so the one with the largest wall shear.';
}

function writeBalance({ paper, one }: PageContext, section: Section): void {
  const { part, show } = one;
  section.heading(2, 'Flows in and out');
  const flows = part.ports.map(({ flow_m3_s }) => flow_m3_s).filter((flow) => flow !== null);
  const sum = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);
  const into = sum(flows.filter((flow) => flow > 0));
  const out = -sum(flows.filter((flow) => flow < 0));
  const unknown = part.ports.length - flows.length;
  const share = into === 0 && out === 0 ? 0 : Math.abs(into - out) / Math.max(into, out);
  section.paragraph(
    `Into the chip ${show.text('flow', into)}, out of it ${show.text('flow', out)}: ${share === 0 ? 'they agree' : `they differ by ${formatNumber(share, 2)} of the larger`}.` +
      (unknown === 0 ? '' : ` Of ${unknown} ports the flow is not known.`),
  );
  const { worst_imbalance, worst_node } = part.balance;
  section.paragraph(
    worst_node === null
      ? 'No inner node to balance.'
      : `Largest imbalance at an inner node: ${formatNumber(worst_imbalance, 2)} of what flows through it, at ${worst_node}.`,
  );
  paper.y += 6;
}

function writeDepth({ one }: PageContext, section: Section, row: Checked): void {
  const { chip } = one.network;
  const channel = chip.channels.findIndex(({ name }) => name === row.channel);
  const form = channelForm(chip, channel);
  if (form === null) return;
  const { byDepth, byWidth } = form;
  // isotropic: width = mask + π·depth/2, so the width grows with the depth
  const follow =
    chip.channels[channel].profile === 'isotropic' ? ((Math.PI / 2) * row.depth_m) / row.width_m : 0;
  const resistance = byDepth.resistance + follow * byWidth.resistance;
  const shearPerGradient = byDepth.floorMean + follow * byWidth.floorMean;
  const area = 1 + follow;
  const change = (exponent: number): string => {
    const share = 1.05 ** exponent - 1;
    return `${share > 0 ? '+' : ''}${formatNumber(share * 100, 3)} %`;
  };
  section.heading(2, 'The power of the depth');
  section.paragraph(
    `In ${row.name} the resistance goes with depth to the power ${formatNumber(resistance)} (exact, at this width and depth). So 5 % more depth changes, in this reach:`,
  );
  section.table(
    [
      ['flow', change(-resistance), '0 %'],
      ['pressure drop', '0 %', change(resistance)],
      ['mean floor shear', change(shearPerGradient), change(resistance + shearPerGradient)],
      ['residence time', change(area + resistance), change(area)],
    ] as const,
    [
      words('5 % more depth changes', ([what]) => what, 'share'),
      figures('at the same pressure drop by', ([, atDrop]) => atDrop),
      figures('at the same flow by', ([, , atFlow]) => atFlow),
    ],
    { size: 7.5 },
  );
}
