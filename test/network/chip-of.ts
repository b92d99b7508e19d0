import { SectionList } from '../../src/chip/sections.ts';
import type { Channel, Chip, ChipLayer, Port, Run } from '../../src/chip/types.ts';

export interface ChannelSpec {
  readonly name: string;
  readonly widthMm: number;
  readonly depthMm?: number;
  readonly plane?: number;
  readonly closed?: boolean;
  /** One or more centrelines, each x0 y0 x1 y1 … in mm. */
  readonly lines: readonly (readonly number[])[];
  /** Bend radius of each piece of each line, mm; straight unless given. */
  readonly radii?: readonly (readonly number[])[];
}

export interface PortSpec {
  readonly name: string;
  readonly x: number;
  readonly y: number;
  readonly radiusMm: number;
}

/** A chip made by hand from straight centrelines, for tests of what comes after reading. Depth 0.1 mm unless said. */
export function chipOf(channels: readonly ChannelSpec[], ports: readonly PortSpec[] = []): Chip {
  const depths = [...new Set(channels.map((spec) => `${spec.depthMm ?? 0.1} ${spec.plane ?? 0}`))];
  const layers: ChipLayer[] = depths.map((key) => ({
    name: key,
    plane: Number(key.split(' ')[1]),
    depthM: Number(key.split(' ')[0]) * 1e-3,
    depthOrigin: 'run sheet',
    profile: 'rectangle',
  }));
  const sections = new SectionList();
  return {
    file: 'test.svg',
    unitMm: 1,
    unitReason: 'made by hand',
    widthMm: null,
    heightMm: null,
    planes: ['chip', 'top'],
    layers,
    channels: channels.map((spec, ordinal) => toChannel(spec, ordinal, depths, sections)),
    sections: sections.forms,
    ports: ports.map(toPort),
    edge: null,
    sizeMm: null,
    obstacles: [],
    unreadLines: [],
    ignored: {},
    faults: [],
    joinWithinMm: 1e-3,
    joints: 'centreline',
    process: null,
    leastWall: null,
  };
}

/** How such a chip is run when nobody said: a fluid of 1 mPa s and 1000 kg/m³, no port set, nothing asked. */
export function runOf({ channels, ports }: Pick<Chip, 'channels' | 'ports'>): Run {
  return {
    fluid: {
      name: 'as given',
      temperatureK: 298.15,
      viscosityPaS: 1e-3,
      densityKgM3: 1000,
      source: 'run sheet',
      mixture: { kind: 'custom' },
    },
    ports: ports.map(() => ({ condition: { kind: 'unset' }, tubing: [], expect: null })),
    channels: channels.map(() => null),
    limits: {
      minWidthM: null,
      maxWidthToDepth: null,
      maxDepthToWidth: null,
      edgeMarginM: null,
      portGapM: null,
      portDiameterM: { value: [0.2e-3, 10e-3], origin: 'default' },
      portGridM: null,
      maxPressurePa: null,
      minPressurePa: null,
      maxReynolds: { value: 1000, origin: 'default' },
      minCornerAngleRad: null,
      stiffnessPa: null,
    },
    accept: [],
    sheet: null,
  };
}

function toChannel(
  spec: ChannelSpec,
  ordinal: number,
  depths: readonly string[],
  sections: SectionList,
): Channel {
  return {
    name: spec.name,
    drawnName: spec.name,
    ordinal,
    layer: depths.indexOf(`${spec.depthMm ?? 0.1} ${spec.plane ?? 0}`),
    plane: spec.plane ?? 0,
    drawnWidthMm: spec.widthMm,
    ductWidthMm: spec.widthMm,
    stripHalfWidthMm: spec.widthMm / 2,
    depthMm: spec.depthMm ?? 0.1,
    depthOrigin: 'run sheet',
    profile: 'rectangle',
    section: sections.indexOf('rectangle', spec.widthMm, spec.depthMm ?? 0.1),
    linecap: 'butt',
    centrelines: spec.lines.map((line, k) => ({
      points: Float64Array.from(line),
      closed: spec.closed ?? false,
      bendRadius: Float64Array.from(spec.radii?.[k] ?? new Array(line.length / 2 - 1).fill(0)),
      curves: null,
    })),
    disguises: [],
    dataChannel: false,
  };
}

function toPort(spec: PortSpec, ordinal: number): Port {
  return {
    name: spec.name,
    drawnName: spec.name,
    ordinal,
    xMm: spec.x,
    yMm: spec.y,
    radiusMm: spec.radiusMm,
  };
}
