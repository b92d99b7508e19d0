import type { Chip, Run } from '../../chip/types.ts';
import { countText, unreadText } from '../../findings/words.ts';
import { formatMm, formatNumber } from '../../runsheet/shown.ts';
import { jointsText } from '../joints-text.ts';
import { depthFrom, isoDate, type PageContext } from './context.ts';

/** What went in: files with their checksums, fluid, depths, size, joints, and what was not read. */
export function inputFacts({ report, one, date }: PageContext): readonly (readonly [string, string])[] {
  const { chip } = one.network;
  const { layout, run_sheet, tool } = report.result;
  const joints = jointsText(one.network.joints);
  return [
    ['layout', `${layout.file}, SHA-256 ${layout.sha256}`],
    [
      'run sheet',
      run_sheet === null
        ? 'none: geometry rules only, defaults elsewhere'
        : `${run_sheet.file}, SHA-256 ${run_sheet.sha256}`,
    ],
    ['fluid', fluidText(one.run)],
    ['depth', depthText(chip)],
    ['chip size', sizeText(chip)],
    [
      'joints',
      chip.joints === 'centreline'
        ? 'centreline: corners, bends and junctions add nothing of their own'
        : `resolved: each computed joint adds its end correction${joints === null ? '' : `; ${joints}`}`,
    ],
    ['not read', ignoredText(chip)],
    ['written', `by ${tool.name} ${tool.version} on ${isoDate(date)}`],
  ];
}

function fluidText({ fluid }: Run): string {
  const celsius = formatNumber(Number((fluid.temperatureK - 273.15).toFixed(6)));
  return `${fluid.name} at ${celsius} °C: viscosity ${formatNumber(fluid.viscosityPaS * 1000)} mPa s, density ${formatNumber(fluid.densityKgM3)} kg/m³ (${fluid.source})`;
}

const LAYERS_LISTED = 8;

function depthText({ layers }: Chip): string {
  const listed = layers.slice(0, LAYERS_LISTED).map((layer) => {
    const { name, depthM, profile } = layer;
    const depth = Number.isNaN(depthM)
      ? 'depth unknown'
      : `${formatNumber(depthM * 1e6)} µm (${depthFrom(layer)})`;
    return `${name === '' ? 'strokes in no layer' : name} ${depth}${profile === 'isotropic' ? ', isotropic profile' : ''}`;
  });
  const more = layers.length - listed.length;
  return (
    [...listed, ...(more > 0 ? [`and ${countText(more, 'more layer')}, listed with the model`] : [])].join(
      '; ',
    ) || 'no layer'
  );
}

function sizeText({ edge, sizeMm, widthMm, heightMm, unitReason }: Chip): string {
  const sides = (size: readonly [number, number]): string => `${formatMm(size[0])} × ${formatMm(size[1])} mm`;
  const read = edge === null ? 'no chip edge drawn' : `${sides(edge.sidesMm)} as read from ${edge.name}`;
  const wanted = sizeMm === null ? 'no size given to compare' : `${sides(sizeMm)} wanted`;
  const drawing = widthMm === null || heightMm === null ? '' : `; drawing ${sides([widthMm, heightMm])}`;
  return `${read}; ${wanted}${drawing}; scale: ${unitReason}`;
}

function ignoredText({ ignored }: Chip): string {
  const kinds = Object.entries(ignored).filter(([, count]) => count > 0);
  return kinds.length === 0
    ? 'nothing: all that is drawn was read'
    : kinds.map(([kind, count]) => unreadText(kind, count)).join(', ');
}
