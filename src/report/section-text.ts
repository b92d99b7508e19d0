import { DEFAULT_MAX_REYNOLDS } from '../chip/defaults.ts';
import { formatNumber, formatShare, showOf } from '../runsheet/shown.ts';
import type { SectionInput, SectionState } from '../section/section.ts';
import { figures, words } from './columns.ts';
import { textWidth, wrapText } from './plain-text.ts';
import { textTable } from './text-table.ts';

export interface SectionFluid {
  readonly name: string;
  /** null where the fluid was given by its viscosity and density. */
  readonly temperatureK: number | null;
}

/** One duct as a table for people. Ends with a line end. */
export function sectionText(
  input: SectionInput,
  state: SectionState,
  fluid: SectionFluid,
  columns: number,
): string {
  const width = textWidth(columns);
  const show = showOf(null);
  const size = (metres: number): string => show.text('cross_length', metres);
  const isGiven = (kind: SectionInput['given']['kind']): string => (input.given.kind === kind ? 'given' : '');
  const at =
    fluid.temperatureK === null
      ? ''
      : ` at ${formatNumber(Number((fluid.temperatureK - 273.15).toFixed(6)))} °C`;
  const shear = (pa: number): string => show.text('wall_shear', pa);
  const rows = [
    ['resistance', show.text('resistance', state.resistance), ''],
    ['flow', show.text('flow', state.flowM3s), isGiven('flow')],
    ['pressure drop', show.text('pressure', state.pressurePa), isGiven('pressure')],
    ['wall shear, floor mean', shear(state.floorMeanPa), isGiven('wall_shear')],
    ['wall shear, floor peak', shear(state.floorPeakPa), ''],
    ['wall shear, side mean', shear(state.sideMeanPa), ''],
    ['wall shear, side peak', shear(state.sidePeakPa), ''],
    ['mean velocity', show.text('velocity', state.meanVelocity), ''],
    ['peak velocity', show.text('velocity', state.peakVelocity), ''],
    ['Reynolds number', formatNumber(state.reynolds), ''],
    ['entrance length', show.text('length', state.entranceM), ''],
    ['residence time, mean', show.text('residence_time', state.residenceS), ''],
    ['residence time, fastest', show.text('residence_time', state.fastestS), ''],
    ['volume', show.text('volume', state.volumeM3), ''],
  ];
  const { plates } = state;
  const lines = [
    `duct ${size(input.widthM)} wide, ${size(input.depthM)} deep, ${show.text('length', input.lengthM)} long`,
    `${fluid.name}${at}: viscosity ${formatNumber(input.viscosityPaS * 1e3)} mPa s, density ${formatNumber(input.densityKgM3)} kg/m³`,
    '',
    ...textTable(
      rows,
      [words('', ([what]) => what), figures('', ([, value]) => value), words('', ([, , given]) => given)],
      width,
    ).slice(1),
    '',
    `Parallel plates as far apart as the shorter side and as wide as the longer would have a resistance of ${show.text('resistance', plates.resistance)} (${formatShare(plates.resistance / state.resistance)} of the duct's) and a wall shear of ${shear(plates.shearPa)} (${formatShare(plates.shearPa / Math.max(state.floorPeakPa, state.sidePeakPa))} of its peak).`,
    ...notes(input, state),
  ];
  return `${lines
    .flatMap((line) => wrapText(line, width))
    .map((line) => line.trimEnd())
    .join('\n')}\n`;
}

/** A developing share of the length above which the developed duct's numbers are in doubt. */
const DEVELOPING_SHARE = 0.1;

function notes(input: SectionInput, state: SectionState): string[] {
  const show = showOf(null);
  const texts: string[] = [];
  if (input.profile === 'isotropic') {
    texts.push(
      `Isotropic etch: the width is the mask's; computed as a rectangle of the same depth and area, ${show.text('cross_length', state.ductWidthM)} wide (good to 5 % in resistance and 3 % in wall shear).`,
    );
  }
  if (state.reynolds > DEFAULT_MAX_REYNOLDS)
    texts.push(
      `Above a Reynolds number of ${DEFAULT_MAX_REYNOLDS} the flow may not be laminar: then none of this holds.`,
    );
  if (state.entranceM > DEVELOPING_SHARE * input.lengthM)
    texts.push(
      'The flow develops over more than a tenth of the length: there the resistance and wall shear are higher.',
    );
  return texts;
}
