import { type Assembled, assembleChip } from '../../src/chip/assemble.ts';
import type { Chip } from '../../src/chip/types.ts';
import { layOut } from '../../src/layout/layout.ts';
import { buildNetwork } from '../../src/network/build.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';
import { solveFlow } from '../../src/solve/flow-state.ts';
import { readSvg } from '../../src/svg/read.ts';
import { type DenseFlow, denseFlow, type PortDrive, seriesResistance } from './dense-flow.ts';
import { type Drawing, randomDrawing, svgOf } from './drawing.ts';
import { type Duct, type DuctPart, type Graph, reversed, simplified } from './graph.ts';
import { joined } from './joining.ts';
import type { Line } from './line.ts';
import type { Hole } from './places.ts';
import { graphOfPlan, type Plan, randomPlan, VISCOSITY_PA_S } from './plan.ts';
import { distance, type Point } from './points.ts';
import { Random } from './random.ts';

/**
 * A random chip, known before it was drawn, against what the whole program reads out of the drawing, and against the
 * joining rules as a second implementation reads them from the same centrelines.
 *
 * What may differ. From the known chip: drawn points are off by rounding and loose ends, at most `offMm` each (below 1 µm).
 * A length between two nodes then is off by at most 2 offMm for each of its parts (2.2 times that on arcs up to 0.3 chords
 * high), a place on an oblique main by offMm/sin 12°, a trimmed piece by about as much again: LENGTH_FACTOR offMm in all;
 * curves by 1e-4 of their length. From the second implementation, which reads the same centrelines: rounding alone where
 * ends are drawn exactly and no curve was cut finely; where they are loose, which of several points within the slack a length counts from is nobody's
 * to say, so as much again. Places that were meant to be one and lie apart for these reasons are one to the comparison
 * (ducts drawn shorter than SHORTEST_MM; nothing is planned as short).
 */
const SHORTEST_MM = 0.02;

export interface Comparison {
  readonly seed: number;
  readonly svg: string;
  readonly sheet: string;
  /** What is wrong, a sentence each; empty when all agree. */
  readonly faults: readonly string[];
  /** Worst relative deviation of flows and pressures from the second implementation. */
  readonly worstFromSecond: number;
  /** Worst of duct lengths from the known chip, as a share of what the slack, rounding and curves explain. */
  readonly worstFromPlan: number;
  /** Worst relative deviation of a flow from the known chip, of the largest flow. */
  readonly worstFlowFromPlan: number;
  /** Whether nothing is loose or rounded coarsely: the second implementation then agrees to rounding. */
  readonly isExact: boolean;
}

/** What failed, with the texts to replay it. */
export function failureText({ seed, faults, svg, sheet }: Comparison): string {
  return `seed ${seed}:\n${faults.slice(0, 6).join('\n')}\n--- layout\n${svg}--- run sheet\n${sheet}`;
}

export function compareSeed(seed: number): Comparison {
  const random = new Random(seed);
  const plan = randomPlan(random);
  const drawing = randomDrawing(plan, random);
  const svg = svgOf(drawing);
  const faults: string[] = [];
  const drives = drivesOf(plan);
  const truth = answerOf(simplified(graphOfPlan(plan), SHORTEST_MM), drives);
  let worstFromSecond = 0;
  let worstFromPlan = 0;
  let worstFlowFromPlan = 0;

  const made = assembled(svg, drawing.sheet);
  const program = programAnswer(made);
  faults.push(...program.faults);
  const second = answerOf(simplified(secondGraph(made.chip), SHORTEST_MM), drives);
  const fromSecond = deviation(second, program, sameReadingBound(drawing, plan));
  faults.push(...fromSecond.faults.map((fault) => `second implementation: ${fault}`));
  worstFromSecond = fromSecond.worstFlow;
  const known = deviation(truth, second, lengthBound(drawing, plan));
  faults.push(...known.faults.map((fault) => `known chip against second implementation: ${fault}`));
  const fromPlan = deviation(truth, program, lengthBound(drawing, plan));
  faults.push(...fromPlan.faults.map((fault) => `known chip: ${fault}`));
  worstFromPlan = fromPlan.worstLength;
  worstFlowFromPlan = fromPlan.worstFlow;

  for (const [way, text, map] of otherWays(drawing, random)) {
    const other = programAnswer(assembled(text, drawing.sheet));
    const same = deviation(moved(program, map), other, sameReadingBound(drawing, plan));
    faults.push(...same.faults.map((fault) => `${way}: ${fault}`));
  }
  return {
    seed,
    svg,
    sheet: drawing.sheet,
    faults,
    worstFromSecond,
    worstFromPlan,
    worstFlowFromPlan,
    isExact: drawing.offMm < 1e-8,
  };
}

/** Turned, mirrored, and with its elements in another order. */
function otherWays(drawing: Drawing, random: Random): (readonly [string, string, (p: Point) => Point])[] {
  const t = (37 * Math.PI) / 180;
  return [
    [
      'turned',
      svgOf(drawing, 'rotate(37)'),
      ({ x, y }) => ({ x: x * Math.cos(t) - y * Math.sin(t), y: x * Math.sin(t) + y * Math.cos(t) }),
    ],
    ['mirrored', svgOf(drawing, 'scale(-1 1)'), ({ x, y }) => ({ x: -x, y })],
    ['renumbered', svgOf(drawing, '', random.shuffled(drawing.elements)), (p) => p],
  ];
}

function drivesOf({ nodes }: Plan): Map<string, PortDrive> {
  return new Map(nodes.flatMap(({ port }) => (port === null ? [] : [[port.name, port.drive] as const])));
}

/** A simplified network with its flows. */
interface Answer {
  readonly graph: Graph;
  readonly flow: DenseFlow;
}

function answerOf(graph: Graph, drives: ReadonlyMap<string, PortDrive>): Answer {
  return { graph, flow: denseFlow(graph, drives, VISCOSITY_PA_S) };
}

function assembled(svg: string, sheet: string): Assembled {
  return assembleChip({
    layout: layOut(readSvg(svg, 'random.svg'), 'random.svg'),
    sheet: parseRunSheet(sheet, 'random.run.yaml'),
    file: 'random.svg',
  });
}

export function secondGraph({ channels, ports, joinWithinMm }: Chip): Graph {
  const lines = channels.flatMap((channel): Line[] =>
    channel.centrelines.map(({ points, closed }) => ({
      points: pointsOf(points),
      closed,
      widthMm: channel.ductWidthMm,
      halfMm: channel.stripHalfWidthMm,
      depthMm: channel.depthMm,
      plane: channel.plane,
    })),
  );
  const holes = ports.map(
    ({ name, xMm, yMm, radiusMm }): Hole => ({ name, at: { x: xMm, y: yMm }, radius: radiusMm }),
  );
  return joined(lines, holes, joinWithinMm);
}

const pointsOf = (flat: Float64Array): Point[] =>
  Array.from({ length: flat.length / 2 }, (_, i) => ({ x: flat[2 * i], y: flat[2 * i + 1] }));

/** What the program makes of it. */
function programAnswer({ chip, run }: Assembled): Answer & { readonly faults: readonly string[] } {
  const network = buildNetwork(chip);
  const state = solveFlow(network, run);
  const nodes = Array.from({ length: network.nodeCount }, (_, n) => ({
    at: { x: network.nodeX[n], y: network.nodeY[n] },
    port: network.nodePort[n] < 0 ? null : chip.ports[network.nodePort[n]].name,
  }));
  const ducts = Array.from({ length: network.reachCount }, (_, r): Duct => {
    const { ductWidthMm, depthMm } = chip.channels[network.reachChannel[r]];
    const part: DuctPart = { widthMm: ductWidthMm, depthMm, lengthMm: network.reachDuctMm[r] };
    const flow = state.reachFlow[r];
    return {
      from: network.reachFrom[r],
      to: network.reachTo[r],
      parts: [part],
      drawnMm: network.reachDrawnMm[r],
      flow: Number.isFinite(flow) ? flow : null,
    };
  });
  const pressures = new Map(nodes.map((node, n) => [node, state.nodePressure[n]]));
  const graph = simplified({ nodes, ducts }, SHORTEST_MM);
  const orNull = (value: number) => (Number.isFinite(value) ? value : null);
  return {
    graph,
    flow: {
      nodePressure: graph.nodes.map((node) => orNull(pressures.get(node as (typeof nodes)[number])!)),
      ductFlow: graph.ducts.map(({ flow }) => flow),
      portFlow: new Map(chip.ports.map(({ name }, p) => [name, orNull(state.portFlow[p])])),
    },
    faults: [],
  };
}

function moved(answer: Answer, map: (p: Point) => Point): Answer {
  const nodes = answer.graph.nodes.map(({ at, port }) => ({ at: map(at), port }));
  return { ...answer, graph: { ...answer.graph, nodes } };
}

type LengthBound = (duct: Duct) => number;

const LENGTH_FACTOR = 30;

/** How far the length of a duct may be off, mm. */
function lengthBound({ offMm }: Drawing, plan: Plan): LengthBound {
  const share = hasCurves(plan) ? 1e-4 : 4e-7;
  return ({ drawnMm }) => LENGTH_FACTOR * offMm + share * drawnMm;
}

/**
 * The same between two readings of one drawing. The program cuts curves finely where something is near, which makes them
 * longer by at most 1e-4; the second implementation takes them as they were laid out.
 */
function sameReadingBound(drawing: Drawing, plan: Plan): LengthBound {
  return hasCurves(plan) ? lengthBound(drawing, plan) : () => 1e-7 + LENGTH_FACTOR * drawing.offMm;
}

function hasCurves({ edges }: Plan): boolean {
  return edges.some(({ path }) => path.some(({ kind }) => kind !== 'line'));
}

interface Deviation {
  readonly faults: readonly string[];
  readonly worstLength: number;
  readonly worstFlow: number;
}

/**
 * Node by node, duct by duct, port by port. Flows and pressures may differ by what the differing lengths explain and no
 * more: a resistance that is off by δR acts as a source of δR·Q in its duct, and such a source moves no pressure by more
 * than itself and no flow by more than itself over R. So |δp| ≤ Σ |δR Q| and |δQ| ≤ Σ |δR Q|/R, to first order.
 */
function deviation(wanted: Answer, got: Answer, bound: LengthBound): Deviation {
  const faults: string[] = [];
  const pair = pairedNodes(wanted.graph, got.graph, faults);
  if (faults.length > 0) return { faults, worstLength: Number.NaN, worstFlow: Number.NaN };
  const ducts = pairedDucts(wanted, got, pair, faults);
  if (faults.length > 0) return { faults, worstLength: Number.NaN, worstFlow: Number.NaN };
  let worstLength = 0;
  let sourcePa = 0;
  let sourceM3s = 0;
  for (const [mine, theirs] of ducts) {
    const limit = bound(mine);
    const lengths = [partSums(mine.parts), partSums(theirs.parts)];
    if (lengths[0].length !== lengths[1].length) {
      faults.push(
        `${named(wanted.graph, mine)} is made of other ducts: ${shown(mine.parts)}, got ${shown(theirs.parts)}`,
      );
      continue;
    }
    lengths[0].forEach((part, i) => {
      const other = lengths[1][i];
      const off = Math.abs(part.lengthMm - other.lengthMm);
      worstLength = Math.max(worstLength, off / limit);
      if (
        !(off <= limit) ||
        !isNearly(part.widthMm, other.widthMm) ||
        !isNearly(part.depthMm, other.depthMm)
      ) {
        faults.push(
          `${named(wanted.graph, mine)}: duct ${shown([part])}, got ${shown([other])} (limit ${limit.toExponential(1)} mm)`,
        );
      }
    });
    const R = [mine, theirs].map(({ parts }) => seriesResistance(parts, VISCOSITY_PA_S));
    // As much of each size of duct may be hidden in places that were meant to be one.
    const hidden = seriesResistance(
      mine.parts.map((part) => ({ ...part, lengthMm: limit })),
      VISCOSITY_PA_S,
    );
    const source = (Math.abs(R[1] - R[0]) + hidden + 1e-10 * R[0]) * Math.abs(mine.flow ?? 0);
    sourcePa += source;
    sourceM3s += source / Math.min(...R);
  }
  if (faults.length > 0) return { faults, worstLength, worstFlow: Number.NaN };
  const flows = [...wanted.flow.portFlow.values(), ...ducts.map(([{ flow }]) => flow)];
  const highest = Math.max(1e-9, ...wanted.flow.nodePressure.map((pressure) => Math.abs(pressure ?? 0)));
  // Where all drives are equal nothing flows but rounding.
  const least = Math.min(...ducts.map(([{ parts }]) => seriesResistance(parts, VISCOSITY_PA_S)));
  const largest = Math.max((1e-4 * highest) / least, ...flows.map((flow) => Math.abs(flow ?? 0)));
  let worstFlow = 0;
  const checkValue = (what: string, a: number | null, b: number | null, limit: number, scale: number) => {
    if (a !== null && b !== null) worstFlow = Math.max(worstFlow, Math.abs(a - b) / scale);
    const agrees = a === null || b === null ? a === b : Math.abs(a - b) <= 1.1 * limit + 1e-9 * scale;
    if (!agrees) faults.push(`${what}: ${a}, got ${b} (limit ${limit.toExponential(1)})`);
  };
  for (const [mine, theirs] of ducts) {
    checkValue(`flow in ${named(wanted.graph, mine)}`, mine.flow, theirs.flow, sourceM3s, largest);
  }
  for (const [port, flow] of wanted.flow.portFlow) {
    checkValue(`flow at ${port}`, flow, got.flow.portFlow.get(port) ?? null, sourceM3s, largest);
  }
  wanted.flow.nodePressure.forEach((pressure, n) => {
    checkValue(
      `pressure at ${nodeName(wanted.graph, n)}`,
      pressure,
      got.flow.nodePressure[pair[n]],
      sourcePa,
      highest,
    );
  });
  return { faults, worstLength, worstFlow };
}

/** Width and depth to 0.1 µm as one number: nearly equal ones are equal. */
const sizeOf = ({ widthMm, depthMm }: DuctPart) =>
  Math.round(widthMm * 1e4) * 1e5 + Math.round(depthMm * 1e4);

const isNearly = (a: number, b: number) => Math.abs(a - b) <= 1e-6 * a;

/** Which node of `got` each of `wanted` is: ports by name, others by place. */
function pairedNodes(wanted: Graph, got: Graph, faults: string[]): number[] {
  if (wanted.nodes.length !== got.nodes.length) {
    faults.push(`${wanted.nodes.length} nodes, got ${got.nodes.length}`);
  }
  const pair = wanted.nodes.map(({ at, port }) => {
    if (port !== null) return got.nodes.findIndex((other) => other.port === port);
    let best = -1;
    got.nodes.forEach((other, n) => {
      if (other.port !== null) return;
      if (best < 0 || distance(at, other.at) < distance(at, got.nodes[best].at)) best = n;
    });
    return best >= 0 && distance(at, got.nodes[best].at) < 0.02 ? best : -1;
  });
  pair.forEach((n, i) => {
    if (n < 0) faults.push(`no node at ${nodeName(wanted, i)}`);
  });
  if (new Set(pair).size < pair.length) faults.push('two nodes are one');
  return pair;
}

/** Ducts between the same nodes in the same direction, those in parallel in order of size and resistance. */
function pairedDucts(
  wanted: Answer,
  got: Answer,
  pair: readonly number[],
  faults: string[],
): (readonly [Duct, Duct])[] {
  const sorted = ({ graph, flow }: Answer, name: (n: number) => number): Map<string, Duct[]> => {
    const lists = new Map<string, Duct[]>();
    graph.ducts.forEach((duct, d) => {
      const own = { ...duct, flow: flow.ductFlow[d] };
      const isForward = name(duct.from) <= name(duct.to);
      const one = isForward ? own : reversed(own);
      const key = `${name(one.from)} ${name(one.to)}`;
      lists.set(key, [...(lists.get(key) ?? []), one]);
    });
    for (const list of lists.values()) {
      list.sort((a, b) => {
        const [x, y] = [a, b].map(({ parts }) => partSums(parts).map(sizeOf).join(' '));
        if (x !== y) return x < y ? -1 : 1;
        return seriesResistance(a.parts, 1) - seriesResistance(b.parts, 1);
      });
    }
    return lists;
  };
  const theirs = sorted(got, (n) => n);
  const mine = sorted(wanted, (n) => pair[n]);
  const pairs: (readonly [Duct, Duct])[] = [];
  for (const [key, list] of mine) {
    const others = theirs.get(key) ?? [];
    if (others.length !== list.length) {
      faults.push(`${list.length} ducts ${named(wanted.graph, list[0])}, got ${others.length}`);
    } else list.forEach((duct, i) => void pairs.push([duct, others[i]]));
  }
  for (const [key, list] of theirs) {
    if (!mine.has(key)) faults.push(`a duct ${named(got.graph, list[0])} that should not be`);
  }
  return pairs;
}

/** Lengths of equal ducts in series together, by size. */
function partSums(parts: readonly DuctPart[]): DuctPart[] {
  const sums: DuctPart[] = [];
  for (const part of parts) {
    const i = sums.findIndex(
      (one) => isNearly(one.widthMm, part.widthMm) && isNearly(one.depthMm, part.depthMm),
    );
    if (i < 0) sums.push(part);
    else sums[i] = { ...sums[i], lengthMm: sums[i].lengthMm + part.lengthMm };
  }
  return sums.sort((a, b) => sizeOf(a) - sizeOf(b));
}

export const shown = (parts: readonly DuctPart[]) =>
  parts
    .map(
      ({ widthMm, depthMm, lengthMm }) =>
        `${widthMm.toFixed(4)} × ${depthMm.toFixed(4)} × ${lengthMm.toFixed(9)}`,
    )
    .join(' + ');

function nodeName({ nodes }: Graph, n: number): string {
  const { at, port } = nodes[n];
  return port ?? `(${at.x.toFixed(4)}, ${at.y.toFixed(4)})`;
}

export const named = (graph: Graph, { from, to }: Duct) =>
  `${nodeName(graph, from)} – ${nodeName(graph, to)}`;

/** Duct lengths of the program against the second implementation on any texts: to replay and to reduce a drawing that failed. */
export function compareTexts(svg: string, sheet: string, limitMm = 4e-3): readonly string[] {
  const made = assembled(svg, sheet);
  const none = new Map<string, PortDrive>();
  const program = answerOf(programAnswer(made).graph, none);
  const second = answerOf(simplified(secondGraph(made.chip), SHORTEST_MM), none);
  return deviation(second, program, () => limitMm).faults;
}
