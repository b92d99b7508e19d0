import { InputError } from '../errors.ts';
import { indexBoxes } from '../geometry/box-index.ts';
import type { Hole } from '../layout/types.ts';
import { layerKey } from '../runsheet/names.ts';
import { quote } from '../runsheet/quote.ts';
import type { PortEntry, RunSheet } from '../runsheet/types.ts';
import { LIMIT_SLACK } from './limits.ts';
import type { SettingsFinder } from './settings.ts';
import type { Port } from './types.ts';
import { UniqueNames } from './unique-names.ts';

export interface PortReading {
  /** In document order. */
  readonly ports: readonly Port[];
  /** Circles that are no ports because of their size; filled ones may be drawn-out channels. */
  readonly unsuitable: readonly Hole[];
  /** Circles outside the ports layer. */
  readonly outside: readonly Hole[];
  readonly names: UniqueNames;
}

/**
 * Circles as ports: of the right size and layer, concentric ones together with the largest as the well.
 * @param diameterM smallest and largest, both included with a relative slack of 1e-6
 * @throws InputError when two ports have one name
 */
export function readPorts(
  holes: readonly Hole[],
  unitMm: number,
  sheet: RunSheet | null,
  diameterM: readonly [number, number],
  file: string,
  setAside: Map<string, string>,
  settings: SettingsFinder<PortEntry>,
): PortReading {
  const layer = sheet?.portsLayer == null ? null : layerKey(sheet.portsLayer);
  const suitable: Hole[] = [];
  const unsuitable: Hole[] = [];
  const outside: Hole[] = [];
  const note = (hole: Hole, why: string): void => {
    if (hole.name !== null && !setAside.has(hole.name)) setAside.set(hole.name, why);
  };
  for (const hole of holes) {
    const diameterMm = 2 * hole.radius * unitMm;
    if (layer !== null && !hole.groups.some((group) => layerKey(group) === layer)) {
      outside.push(hole);
      note(hole, 'it is not in the ports layer');
    } else if (
      diameterMm < diameterM[0] * 1000 * (1 - LIMIT_SLACK) ||
      diameterMm > diameterM[1] * 1000 * (1 + LIMIT_SLACK)
    ) {
      unsuitable.push(hole);
      const [least, most] = diameterM.map((limit) => number(limit * 1000));
      note(
        hole,
        `its diameter of ${number(diameterMm)} mm is outside limits.port_diameter, ${least} mm to ${most} mm`,
      );
    } else {
      suitable.push(hole);
    }
  }
  const wells = concentric(suitable, unitMm);
  const drawn = wells.map((circles) => ({ well: circles[0], name: nameOf(circles, settings) }));
  drawn.sort((a, b) => a.well.ordinal - b.well.ordinal);
  refuseTwins(drawn, unitMm, file);
  const names = new UniqueNames(drawn);
  const ports = drawn.map(
    ({ well, name }, i): Port => ({
      name: names.next(name, `port-${i + 1}`),
      drawnName: name,
      ordinal: well.ordinal,
      xMm: well.x * unitMm,
      yMm: well.y * unitMm,
      radiusMm: well.radius * unitMm,
    }),
  );
  return { ports, unsuitable, outside, names };
}

/** Centres within 1 µm, or within 1 % of the larger radius, are one centre. Each group has its largest circle first. */
function concentric(holes: readonly Hole[], unitMm: number): readonly (readonly Hole[])[] {
  const index = indexBoxes(holes.flatMap(({ x, y }) => [x, y, x, y]));
  const bySize = (a: number, b: number): number => holes[b].radius - holes[a].radius || a - b;
  const taken = new Uint8Array(holes.length);
  const groups: Hole[][] = [];
  for (const largest of [...holes.keys()].sort(bySize)) {
    if (taken[largest]) continue;
    const { x, y, radius } = holes[largest];
    const reach = Math.max(1e-3 / unitMm, 0.01 * radius) * (1 + 1e-9);
    const isMember = (i: number): boolean =>
      taken[i] === 0 && Math.hypot(holes[i].x - x, holes[i].y - y) <= reach;
    const members = index.search(x - reach, y - reach, x + reach, y + reach, isMember).sort(bySize);
    for (const i of members) taken[i] = 1;
    groups.push(members.map((i) => holes[i]));
  }
  return groups;
}

/** Of the names of concentric circles the one that the run sheet names, else one that a pattern of it matches, else the largest circle's. */
function nameOf(circles: readonly Hole[], settings: SettingsFinder<PortEntry>): string | null {
  const names = circles.flatMap(({ name }) => name ?? []);
  return names.find(settings.isNamed) ?? names.find(settings.isMatched) ?? names[0] ?? null;
}

function refuseTwins(
  drawn: readonly { readonly well: Hole; readonly name: string | null }[],
  unitMm: number,
  file: string,
): void {
  const first = new Map<string, Hole>();
  for (const { well, name } of drawn) {
    if (name === null) continue;
    const twin = first.get(name);
    if (twin !== undefined) {
      const at = ({ x, y }: Hole): string => `(${number(x * unitMm)}, ${number(y * unitMm)}) mm`;
      throw new InputError(
        file,
        `two ports are named ${quote(name)}, at ${at(twin)} and ${at(well)}; give each a name of its own in the drawing`,
      );
    }
    first.set(name, well);
  }
}

function number(value: number): string {
  return String(Number(value.toPrecision(6)));
}
