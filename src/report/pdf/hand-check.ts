import { channelForm } from '../../chip/sections.ts';
import { formatNumber, type Show } from '../../runsheet/shown.ts';
import { reachesThatMatter } from '../reach-values.ts';
import type { ReportedCase } from '../report.ts';
import type { ReachRow } from '../result-rows.ts';
import { BODY, type PageContext } from './context.ts';
import type { Element } from './paper.ts';
import { cells, drawTable } from './table.ts';

/** What can be checked with pencil and paper: plate formulas beside the exact values, flows in and out, the power of the depth. */
export function writeHandCheck(context: PageContext): void {
  const { paper, one } = context;
  const row = reachToCheck(one);
  const section = paper.start('portrait', 330);
  paper.heading(section, 1, 'Hand check');
  if (row === null) {
    paper.paragraph(section, 'No reach has a known flow, so there is nothing to check by hand.', BODY);
    return;
  }
  writePlates(context, section, row);
  writeBalance(context, section);
  writeDepth(context, section, row);
}

/** A reach of which everything is known and something flows. */
type Checked = ReachRow & {
  readonly flow_m3_s: number;
  readonly pressure_drop_pa: number;
  readonly width_m: number;
  readonly depth_m: number;
  readonly wall_shear_floor_mean_pa: number;
  readonly wall_shear_floor_peak_pa: number;
  readonly wall_shear_side_peak_pa: number;
  readonly resistance_pa_s_m3: number;
};

function reachToCheck(one: ReportedCase): Checked | null {
  for (const row of reachesThatMatter(one, 50).rows) {
    if (
      row.flow_m3_s !== null &&
      row.flow_m3_s !== 0 &&
      row.width_m !== null &&
      row.depth_m !== null &&
      row.pressure_drop_pa !== null
    ) {
      // with width, depth and flow known, pressure drop, shear and resistance are
      return row as Checked;
    }
  }
  return null;
}

function writePlates({ paper, one }: PageContext, section: Element, row: Checked): void {
  const { show } = one;
  const { viscosityPaS } = one.run.fluid;
  const flow = Math.abs(row.flow_m3_s);
  const [long, short] = row.width_m >= row.depth_m ? [row.width_m, row.depth_m] : [row.depth_m, row.width_m];
  const wall = row.width_m >= row.depth_m ? 'floor' : 'side';
  const peak = wall === 'floor' ? row.wall_shear_floor_peak_pa : row.wall_shear_side_peak_pa;
  const platesDrop = (12 * viscosityPaS * row.length_m * flow) / (long * short ** 3);
  const platesShear = (6 * viscosityPaS * flow) / (long * short ** 2);
  paper.heading(section, 2, `Reach ${row.name} as parallel plates`);
  paper.paragraph(section, whyThisReach(one), BODY);
  paper.paragraph(
    section,
    `µ = ${formatNumber(viscosityPaS * 1000)} mPa s, L = ${show.text('length', row.length_m)} (duct length), Q = ${show.text('flow', flow)}, ` +
      `w = ${show.text('cross_length', long)}, h = ${show.text('cross_length', short)} (w the longer side, h the shorter).`,
    BODY,
  );
  drawTable(
    paper,
    section,
    [
      { head: 'what', align: 'left', width: 'share' },
      { head: 'by hand, plates', align: 'left', width: 'fit' },
      { head: 'plates', align: 'right', width: 'fit' },
      { head: 'exact', align: 'right', width: 'fit' },
      { head: 'exact / plates', align: 'right', width: 'fit' },
    ],
    [
      plateRow(
        'pressure drop',
        '12 µ L Q / (w h³)',
        'pressure',
        platesDrop,
        Math.abs(row.pressure_drop_pa),
        show,
      ),
      plateRow(`peak shear on the ${wall}`, '6 µ Q / (w h²)', 'wall_shear', platesShear, peak, show),
    ],
    { size: 7.5 },
  );
  paper.paragraph(
    section,
    'Plates have no side walls. The exact drop is larger by what the sides hold back; the exact peak is larger because the flow keeps away from the sides and ' +
      'so is stronger in the middle. For h/w = 0.1 the factors are 1.067 for both; for a square 2.371 and 1.601.',
    BODY,
  );
  paper.y += 6;
}

function whyThisReach(one: ReportedCase): string {
  return reachesThatMatter(one, 1).windows
    ? 'The reach that matters most: the first with a window, one outside it before the others.'
    : 'The reach that matters most: no channel has a window, so the one with the largest wall shear.';
}

function plateRow(
  what: string,
  formula: string,
  shown: 'pressure' | 'wall_shear',
  plates: number,
  exact: number,
  show: Show,
): ReturnType<typeof cells> {
  const unit = show.unit(shown, Math.max(plates, exact));
  const text = (value: number): string => `${formatNumber(value / unit.si)} ${unit.text}`;
  return cells(what, formula, text(plates), text(exact), formatNumber(exact / plates));
}

function writeBalance({ paper, one }: PageContext, section: Element): void {
  const { part, show } = one;
  paper.heading(section, 2, 'Flows in and out');
  const flows = part.ports.map(({ flow_m3_s }) => flow_m3_s).filter((flow) => flow !== null);
  const sum = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);
  const into = sum(flows.filter((flow) => flow > 0));
  const out = -sum(flows.filter((flow) => flow < 0));
  const unknown = part.ports.length - flows.length;
  const share = into === 0 && out === 0 ? 0 : Math.abs(into - out) / Math.max(into, out);
  paper.paragraph(
    section,
    `Into the chip ${show.text('flow', into)}, out of it ${show.text('flow', out)}: ${share === 0 ? 'they agree' : `they differ by ${formatNumber(share, 2)} of the larger`}.` +
      (unknown === 0 ? '' : ` Of ${unknown} ports the flow is not known.`),
    BODY,
  );
  const { worst_imbalance, worst_node } = part.balance;
  paper.paragraph(
    section,
    worst_node === null
      ? 'No inner node to balance.'
      : `Largest imbalance at an inner node: ${formatNumber(worst_imbalance, 2)} of what flows through it, at ${worst_node}.`,
    BODY,
  );
  paper.y += 6;
}

function writeDepth({ paper, one }: PageContext, section: Element, row: Checked): void {
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
  paper.heading(section, 2, 'The power of the depth');
  paper.paragraph(
    section,
    `In ${row.name} the resistance goes with depth to the power ${formatNumber(resistance)} (exact, at this width and depth). So 5 % more depth changes, in this reach:`,
    BODY,
  );
  drawTable(
    paper,
    section,
    [
      { head: '5 % more depth changes', align: 'left', width: 'share' },
      { head: 'at the same pressure drop by', align: 'right', width: 'fit' },
      { head: 'at the same flow by', align: 'right', width: 'fit' },
    ],
    [
      cells('flow', change(-resistance), '0 %'),
      cells('pressure drop', '0 %', change(resistance)),
      cells('mean floor shear', change(shearPerGradient), change(resistance + shearPerGradient)),
      cells('residence time', change(area + resistance), change(area)),
    ],
    { size: 7.5 },
  );
}
