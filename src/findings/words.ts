import type { Sourced } from '../chip/types.ts';
import { formatMm, formatNumber, type Show, showOf } from '../runsheet/shown.ts';
import { type FindingContext, oncePerContext } from './context.ts';

/** Numbers for messages, in the units that the run sheet's `show` asks for. */
export const showFor = oncePerContext(({ run }): Show => showOf(run.sheet?.show ?? null));

/** A distance across the drawing (mm) as people say it: "35 µm", "1.2 mm". */
export function distanceText(mm: number): string {
  if (Math.abs(mm) >= 1) return `${formatNumber(mm)} mm`;
  return `${formatNumber(mm * 1e3)} µm`;
}

/** "35°" */
export function degreesText(rad: number): string {
  return `${formatNumber((rad * 180) / Math.PI)}°`;
}

/** A move in the drawing (mm), rounded up to 1 µm so that doing it is enough: "0.031 mm". */
export function moveText(mm: number): string {
  return `${formatMm(Math.ceil(mm * 1e3 - 1e-6) / 1e3)} mm`;
}

/** A size in the drawing (mm), rounded down to 1 µm so that keeping to it is enough: "0.17 mm". */
export function sizeAtMostText(mm: number): string {
  return `${formatMm(Math.floor(mm * 1e3 + 1e-6) / 1e3)} mm`;
}

/** The least size that will do (mm), rounded up to 1 µm: "68 µm". */
export function leastText(mm: number): string {
  return distanceText(Math.ceil(mm * 1e3 - 1e-6) / 1e3);
}

/** The largest size that will do (mm), rounded down to 1 µm. */
export function mostText(mm: number): string {
  return distanceText(Math.floor(mm * 1e3 + 1e-6) / 1e3);
}

/** A name as a key of the run sheet, quoted where YAML would read it as something else. */
export function keyText(name: string): string {
  return /^[A-Za-z_][\w.-]*$/.test(name) ? name : JSON.stringify(name);
}

/** A place in the drawing: "(12.5, 3 mm)". */
export function placeText(xMm: number, yMm: number): string {
  return `(${formatMm(xMm)}, ${formatMm(yMm)} mm)`;
}

/** A limit with where it comes from, when that is not the run sheet: "20 µm (typical value, not from your maker)". */
export function limitText(text: string, { origin }: Pick<Sourced<unknown>, 'origin'>): string {
  return origin === 'run sheet' ? text : `${text} (${origin})`;
}

/** "a", "a and b", "a, b and c", "a, b, c and 9 more". */
export function listText(names: readonly string[], most = 3): string {
  if (names.length === 0) return 'nothing';
  if (names.length === 1) return names[0];
  if (names.length > most) return `${names.slice(0, most).join(', ')} and ${names.length - most} more`;
  return `${names.slice(0, -1).join(', ')} and ${names[names.length - 1]}`;
}

export function countText(count: number, one: string, many = `${one}s`): string {
  return `${count} ${count === 1 ? one : many}`;
}

/** Kinds of drawn things that are not read, where an s at the end is not their plural; names of elements stay as they are. */
const PLURALS: Readonly<Record<string, string>> = {
  'chamber or pillar': 'chambers or pillars',
  'circle of no port size': 'circles of no port size',
  'dashed stroke': 'dashed strokes',
  'filled outline': 'filled outlines',
  'stroke along another': 'strokes along others',
  'style rule': 'style rules',
  'style sheet in another file': 'style sheets in other files',
  'subpath without length': 'subpaths without length',
  ellipse: 'ellipses',
  fill: 'fills',
  image: 'images',
  text: 'texts',
};

/** "2 dashed strokes", "1 text", "3 named under ignore" */
export function unreadText(kind: string, count: number): string {
  return countText(count, kind, PLURALS[kind] ?? kind);
}

/** A port with what the run sheet does to it: "feed 12 kPa", "drain open". */
export function portText(context: FindingContext, port: number): string {
  return `${context.chip.ports[port].name} ${conditionText(context, port)}`;
}

/** What the run sheet does to a port: "12 kPa", "40 mm of head", "open". */
export function conditionText(context: FindingContext, port: number): string {
  const show = showFor(context);
  const { condition } = context.run.ports[port];
  switch (condition.kind) {
    case 'flow':
      return show.text('flow', condition.flowM3s);
    case 'pressure':
      return show.text('pressure', condition.pressurePa);
    case 'head':
      return `${show.text('length', condition.headM)} of head`;
    case 'open':
    case 'sealed':
    case 'unset':
      return condition.kind;
    default:
      return condition satisfies never;
  }
}
