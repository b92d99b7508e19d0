import { after, IDENTITY, inverse, isMirrored, mapped, type Similarity, scaleOf } from './map.ts';
import { DENSITY_KG_M3, holeOf, type Part, type Plan, VISCOSITY_PA_S } from './plan.ts';
import { distance, type Point } from './points.ts';
import type { Random } from './random.ts';
import { type PlanStroke, randomStrokes } from './strokes.ts';

/** A plan as texts for the whole program. */
export interface Drawing {
  readonly elements: readonly string[];
  readonly head: string;
  readonly sheet: string;
  /** What a coordinate may be off by its rounding and by loose ends, mm. */
  readonly offMm: number;
}

const SIZE_MM = 80;

/** How large a user unit is, and how the file says so. */
const UNITS = [
  { mm: 1, size: `${SIZE_MM}mm`, sheet: '' },
  { mm: 0.01, size: `${SIZE_MM / 10}cm`, sheet: '' },
  { mm: 25.4, size: `${SIZE_MM / 25.4}in`, sheet: '' },
  { mm: 25.4 / 96, size: `${(SIZE_MM * 96) / 25.4}px`, sheet: '' },
  { mm: 1, size: `${SIZE_MM}`, sheet: 'unit: 1 mm\n' },
];

export function randomDrawing(plan: Plan, random: Random): Drawing {
  const unit = random.oneOf(UNITS);
  const isOneFrame = random.chance(0.35);
  const isExact = random.chance(0.3);
  const hasBundles = plan.edges.some(({ isCarried }) => isCarried);
  const coarsest = isOneFrame && !hasBundles ? 1e-3 : 4e-4;
  const decimals = isOneFrame
    ? fewestDecimals(unit.mm, coarsest) + (isExact ? 9 : random.oneOf([0, 0, 1, 2, 5]))
    : 0;
  const fineness = isOneFrame ? unit.mm * 10 ** -decimals : isExact ? 1e-11 : random.oneOf([1e-4, 4e-4]);
  const endOffset = isExact || fineness > 4e-4 ? 0 : (0.95e-3 - 1.5 * fineness) / 2;
  const strokes = randomStrokes(plan, random, {
    endOffset,
    fineness,
    inside: fineness > 4e-4 ? 2 * fineness : 0,
  });
  const place = (): Frame => {
    const root = { ...IDENTITY, a: 1 / unit.mm, d: 1 / unit.mm };
    if (isOneFrame) return { toLocal: root, decimals, transforms: [] };
    let transforms = Array.from({ length: random.whole(0, 3) }, () => randomTransform(random));
    const compose = () => transforms.reduce((outer, { map }) => after(outer, map), IDENTITY);
    // Far from every habit, and then coordinates run out of digits.
    if (scaleOf(compose()) < 0.02 || scaleOf(compose()) > 50) transforms = [];
    const whole = compose();
    const toLocal = after(inverse(whole), root);
    return {
      toLocal,
      decimals: Math.min(15, fewestDecimals(1 / scaleOf(toLocal), fineness) + random.oneOf([0, 0, 1, 3])),
      transforms: transforms.map(({ text }) => text),
    };
  };
  const elements = [
    ...subpaths(strokes, random).map((group) => channelElement(plan, group, place(), random)),
    ...plan.nodes.flatMap((node) =>
      node.port === null ? [] : [circleElement(node.port.name, holeOf(node), node.port.radius, place())],
    ),
  ];
  const view = SIZE_MM / unit.mm;
  return {
    elements: random.shuffled(elements),
    head: `<svg xmlns="http://www.w3.org/2000/svg" width="${unit.size}" height="${unit.size}"${unit.sheet === '' && unit.size.endsWith('px') ? '' : ` viewBox="0 0 ${view} ${view}"`}>`,
    sheet: unit.sheet + sheetOf(plan),
    offMm: 0.71 * fineness + endOffset,
  };
}

/** The SVG text; what is given as `around` (a transform) is put round everything. */
export function svgOf({ head, elements }: Drawing, around = '', order: readonly string[] = elements): string {
  const [open, close] = around === '' ? ['', ''] : [`<g transform="${around}">\n`, '</g>\n'];
  return `${head}\n${open}${order.join('\n')}\n${close}</svg>\n`;
}

interface Frame {
  /** From mm of the plan to coordinates of the innermost group. */
  readonly toLocal: Similarity;
  readonly decimals: number;
  readonly transforms: readonly string[];
}

/** How many decimals a coordinate needs, where one unit is so many mm, to be no coarser than asked. */
function fewestDecimals(unitMm: number, coarsestMm: number): number {
  return Math.max(0, Math.ceil(Math.log10(unitMm / coarsestMm) - 1e-9));
}

function randomTransform(random: Random): { readonly text: string; readonly map: Similarity } {
  switch (random.whole(0, 4)) {
    case 0: {
      const [e, f] = [
        random.oneOf([2.000000000001, -7.3, 1 / 3, 1000]),
        random.oneOf([0, 2.000000000001, 5.5]),
      ];
      return { text: `translate(${e} ${f})`, map: { ...IDENTITY, e, f } };
    }
    case 1: {
      const degrees = random.oneOf([90, 37, random.between(-180, 180)]);
      const t = (degrees * Math.PI) / 180;
      const [cos, sin] = [Math.cos(t), Math.sin(t)];
      return { text: `rotate(${degrees})`, map: { a: cos, b: sin, c: -sin, d: cos, e: 0, f: 0 } };
    }
    case 2: {
      const s = random.oneOf([0.1, 25.4 / 96, 3, 7.7, random.between(0.2, 5)]);
      return { text: `scale(${s})`, map: { ...IDENTITY, a: s, d: s } };
    }
    case 3:
      return { text: 'scale(-1 1)', map: { ...IDENTITY, a: -1 } };
    default: {
      const [a, b] = [random.between(-2, 2), random.between(0.3, 2)];
      const [e, f] = [random.between(-20, 20), random.between(-20, 20)];
      const map = random.chance(0.5) ? { a, b, c: -b, d: a, e, f } : { a, b, c: b, d: -a, e, f };
      return { text: `matrix(${[map.a, map.b, map.c, map.d, map.e, map.f].join(' ')})`, map };
    }
  }
}

/** Strokes of one layer and width may be subpaths of one element. */
function subpaths(strokes: readonly PlanStroke[], random: Random): PlanStroke[][] {
  const groups: PlanStroke[][] = [];
  for (const stroke of strokes) {
    const like = groups.find(
      ([first]) => first.layer === stroke.layer && first.widthMm === stroke.widthMm && random.chance(0.15),
    );
    if (like === undefined) groups.push([stroke]);
    else like.push(stroke);
  }
  return groups;
}

function channelElement(plan: Plan, strokes: readonly PlanStroke[], frame: Frame, random: Random): string {
  const { layer, widthMm } = strokes[0];
  // A hairline loop with a port beside its line, on the inner side, reads as an outline round that port unless it says what it is.
  const isSaid = strokes.some(comesBack) && plan.nodes.some(({ port }) => port?.aside);
  const style = `fill="none" stroke="#000" stroke-width="${widthMm * scaleOf(frame.toLocal)}"${isSaid ? ' data-channel=""' : ''}`;
  const isStraight = strokes.every(({ parts }) => parts.every(({ kind }) => kind === 'line'));
  const points = [strokes[0].start, ...strokes[0].parts.map(({ to }) => to)].map((p) => written(p, frame));
  let element: string;
  if (strokes.length === 1 && isStraight && !strokes[0].isClosed && random.chance(0.4)) {
    const [[x1, y1], [x2, y2]] = [points[0].split(' '), points[points.length - 1].split(' ')];
    element =
      points.length === 2
        ? `<line x1="${x1}" y1="${y1}" x2="${x2}" y2="${y2}" ${style}/>`
        : `<polyline points="${points.join(' ')}" ${style}/>`;
  } else {
    element = `<path d="${strokes.map((stroke) => pathData(stroke, frame)).join(' ')}" ${style}/>`;
  }
  const [outer = '', ...inner] = frame.transforms;
  const innermost = inner.reduceRight(
    (text, transform) => `<g transform="${transform}">${text}</g>`,
    element,
  );
  return `<g data-name="${plan.layers[layer].name}"${outer === '' ? '' : ` transform="${outer}"`}>${innermost}</g>`;
}

/** Drawn closed, or back to where it began. */
const comesBack = ({ start, parts, isClosed }: PlanStroke): boolean =>
  isClosed || distance(start, parts[parts.length - 1].to) < 2e-3;

function pathData({ start, parts, isClosed }: PlanStroke, frame: Frame): string {
  const texts = parts.map((part, i) => {
    if (isClosed && i === parts.length - 1 && part.kind === 'line') return 'Z';
    return partData(part, frame);
  });
  const closing = isClosed && parts[parts.length - 1].kind !== 'line' ? 'Z' : '';
  return `M${written(start, frame)}${texts.join('')}${closing}`;
}

function partData(part: Part, frame: Frame): string {
  const to = written(part.to, frame);
  switch (part.kind) {
    case 'line':
      return `L${to}`;
    case 'arc': {
      const r = part.radius * scaleOf(frame.toLocal);
      const sweep = isMirrored(frame.toLocal) ? 1 - part.sweep : part.sweep;
      return `A${r} ${r} 0 0 ${sweep} ${to}`;
    }
    case 'cubic':
      return `C${written(part.c1, frame)} ${written(part.c2, frame)} ${to}`;
    default:
      return part satisfies never;
  }
}

function written(p: Point, { toLocal, decimals }: Frame): string {
  const { x, y } = mapped(toLocal, p);
  return `${Number(x.toFixed(decimals))} ${Number(y.toFixed(decimals))}`;
}

function circleElement(name: string, at: Point, radius: number, frame: Frame): string {
  const [x, y] = written(at, frame).split(' ');
  const circle = `<circle id="${name}" cx="${x}" cy="${y}" r="${radius * scaleOf(frame.toLocal)}"/>`;
  return frame.transforms.reduceRight((text, transform) => `<g transform="${transform}">${text}</g>`, circle);
}

function sheetOf({ layers, nodes, edges }: Plan): string {
  const layerLines = layers.flatMap(({ name, depthMm, plane }, l) =>
    edges.some(({ layer, isCarried }) => layer === l && !isCarried)
      ? [`  ${name}: { depth: ${depthMm * 1000} um${plane === 'chip' ? '' : `, plane: ${plane}`} }`]
      : [],
  );
  const portLines = nodes.flatMap(({ port }) => (port === null ? [] : [`  ${port.name}: ${port.entry}`]));
  return [
    'joints: centreline',
    `fluid: { viscosity: ${VISCOSITY_PA_S * 1000} mPa s, density: ${DENSITY_KG_M3} kg/m^3 }`,
    'layers:',
    ...layerLines,
    'ports:',
    ...portLines,
    '',
  ].join('\n');
}
