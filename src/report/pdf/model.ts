import { LIMIT_SLACK, minWallM } from '../../chip/limits.ts';
import type { Chip, Limits, Sourced } from '../../chip/types.ts';
import { formatMm, formatNumber } from '../../runsheet/shown.ts';
import { figures, words } from '../columns.ts';
import { jointsText } from '../joints-text.ts';
import { known } from '../known.ts';
import type { ReportedCase } from '../report.ts';
import { depthFrom, type PageContext } from './context.ts';
import { jointText } from './port-columns.ts';
import { chapter, type Section } from './section.ts';

/** The model in words, its formulas with their sources, and the depths and limits in force with where each came from. */
export function writeModel({ paper, one }: PageContext): void {
  const { chip } = one.network;
  const section = chapter(paper, 'Model', 'portrait', 500);
  for (const text of modelTexts(chip)) section.paragraph(text);
  paper.y += 4;
  section.heading(2, 'Formulas and sources');
  section.table(
    FORMULAS,
    [
      words('what', ([what]) => what),
      words('formula', ([, formula]) => formula, 'wrap'),
      words('source', ([, , source]) => source, 'wrap'),
    ],
    { size: 6.8 },
  );
  writeJoints(section, one);
  writeLayers(section, chip);
  writeLimits(section, chip, one.run.limits);
}

function modelTexts(chip: Chip): readonly string[] {
  return [
    'Each channel is cut into straight rectangular ducts. In each the flow is laminar, steady, fully developed and Newtonian between rigid walls, solved exactly; pressures and flows balance at every node. Entrance lengths, inertia, compressible or yielding walls, gravity inside the chip and surface tension are left out; findings say where that may matter.',
    `Meeting. Centrelines of one plane that meet or cross are joined, also where no vertex is drawn. A channel end inside another channel's strip is carried on to that channel's centreline. "Inside" has a slack of ${formatNumber(chip.joinWithinMm * 1000)} µm, which decides whether two things meet and never how long they are.`,
    'Ends. What overshoots a join and ends dead inside the strip it joined is left out; so are short overlaps of two ends along one line.',
    'Trimming. Near a node, the part of a channel (width w, depth h) that lies inside the strip of another that meets there (W, H) counts as p·min(1, w/W)·min(1, h/H)³ of its length p. Equal ducts lose nothing, a far wider or deeper one takes nearly all.',
    'Wells. Inside a port the fluid is open: no resistance, part of no reach. Lengths start at the rim.',
    chip.joints === 'centreline'
      ? 'Joints. Lengths follow the centrelines; corners, bends and junctions add nothing of their own. Against resolved three-dimensional flow that over-estimates a serpentine of mitred turns by 5 to 8 % and under-estimates a feeder into a chamber by about 5 %.'
      : 'Joints. Corners, bends and junctions whose case was computed add their end correction; the others keep the centreline rules, and how far they could move flows and pressures is with the ports and reaches.',
    'Shear is that of the fully developed profile: the floor is the etched bottom (and the lid), width wide; the sides are depth high. Mean is over the wall, peak is in its middle. Cells sit on the floor.',
    'Residence time is volume over flow; the fastest fluid moves on the axis and passes in length over peak velocity. Both use the duct length without what joints add.',
  ];
}

const FORMULAS: readonly (readonly [string, string, string])[] = [
  [
    'resistance',
    'R = 12 µ L/(l s³ F), F = 1 − (192/π⁵)(s/l) Σ tanh(nπl/2s)/n⁵, n odd; s the shorter, l the longer side',
    'R. K. Shah & A. L. London, Laminar Flow Forced Convection in Ducts, Academic Press 1978, ch. VII',
  ],
  ['peak velocity', 'u = (G s²/8µ)[1 − (32/π³) Σ (−1)^((n−1)/2) sech(nπl/2s)/n³], G = Δp/L', 'the same'],
  [
    'shear, long wall',
    'mean (G s/2)[1 − (16 s/π³l) Σ tanh(nπl/2s)/n³]; peak (G s/2)[1 − (8/π²) Σ sech(nπl/2s)/n²]',
    'the same',
  ],
  [
    'shear, short wall',
    'mean (8 G s/π³) Σ tanh(nπl/2s)/n³; peak (4 G s/π²) Σ (−1)^((n−1)/2) tanh(nπl/2s)/n²',
    'the same',
  ],
  ['Reynolds number', 'Re = ρ u D/µ, u the mean velocity, D = 2wh/(w + h)', 'definition'],
  [
    'entrance length',
    'D·(0.6/(1 + 0.035 Re) + 0.056 Re), the tube form on the hydraulic diameter',
    'R.-Y. Chen, J. Fluids Eng. 95 (1973) 153',
  ],
  ['Dean number', 'De = Re √(D/2r), r the bend radius', 'C. M. White, Proc. R. Soc. A 123 (1929) 645'],
  ['tubing', 'R = 128 µ L/(π d⁴)', 'Hagen and Poiseuille, any textbook'],
  ['reservoir', 'p = ρ g × level above the chip, g = 9.80665 m/s²', 'definition; standard gravity'],
  [
    'isotropic profile',
    'duct as deep and of the same area: width = mask + π·depth/2; walls at mask + 2·depth',
    'good to 5 % in resistance and 3 % in shear',
  ],
  ['water', 'viscosity and density at 0.1 MPa, 253.15 K to 383.15 K', 'IAPWS SR6-08(2011)'],
  [
    'glycerol in water',
    'viscosity and density by mass fraction and temperature',
    'N.-S. Cheng, Ind. Eng. Chem. Res. 47 (2008) 3285; A. Volk & C. J. Kähler, Exp. Fluids 59 (2018) 75',
  ],
  [
    'network',
    'ΣQ = 0 at each inner node, Δp = R Q on each reach; sparse LDLᵀ with refinement',
    'T. A. Davis, ACM Trans. Math. Softw. 31 (2005) 587',
  ],
];

/** Joints by kind, and what they come to beside plain centrelines. */
function writeJoints(section: Section, one: ReportedCase): void {
  const { network } = one;
  if (network.joints.length === 0) return;
  section.heading(2, 'Joints');
  section.table(network.joints, [
    words('kind', ({ kind }) => kind, 'share'),
    figures('number', ({ count }) => String(count)),
    figures('together they add', ({ addedMm }) => lengthText(addedMm), 'mm'),
    figures('one could be off by ±', ({ boundMm }) => lengthText(boundMm), 'mm'),
    figures('first at x', ({ xMm }) => formatMm(xMm), 'mm'),
    figures('y', ({ yMm }) => formatMm(yMm), 'mm'),
  ]);
  const joints = jointsText(network.joints);
  if (joints !== null && network.chip.joints === 'resolved') section.paragraph(`${joints}.`);
  const sum = (lengths: Float64Array): number => lengths.reduce((total, length) => total + length, 0);
  const centreline = lengthText(sum(network.reachCentrelineMm));
  const counted = lengthText(sum(network.reachDuctMm));
  section.paragraph(
    network.chip.joints === 'resolved'
      ? `All reaches together: ${counted} mm of duct as counted here, ${centreline} mm by centrelines alone.`
      : `The numbers of this document count centrelines: ${counted} mm of duct in all. With joints: resolved the lengths above would be added.`,
  );
  writeCentrelineFlows(section, one);
}

/** Without a depth there may be no length either. */
function lengthText(mm: number): string {
  return Number.isNaN(mm) ? '–' : formatNumber(mm);
}

const PORT_BOUND = 60;

/** What centreline counting would have said of each port's flow, beside what is said here. */
function writeCentrelineFlows(section: Section, { network, part, show, centrelineFlow }: ReportedCase): void {
  if (centrelineFlow === null || network.chip.joints !== 'resolved') return;
  const flows = centrelineFlow().portFlow;
  const ports = part.ports.slice(0, PORT_BOUND);
  section.table(
    ports.map((port, i) => ({ port, centreline: flows[i] })),
    [
      words('port', ({ port }) => port.name, 'share'),
      figures('flow into chip, as counted', ({ port }) => show.text('flow', port.flow_m3_s)),
      figures('by centrelines alone', ({ centreline }) => show.text('flow', known(centreline))),
      figures('joints not resolved could move by ±', ({ port }) => jointText(port)),
    ],
  );
  if (part.ports.length > ports.length) section.paragraph(`… of ${part.ports.length} ports.`);
}

const LAYER_BOUND = 500;

function writeLayers(section: Section, chip: Chip): void {
  if (chip.layers.length === 0) return;
  section.heading(2, 'Layers');
  section.table(chip.layers.slice(0, LAYER_BOUND), [
    words('layer', ({ name }) => (name === '' ? '(none)' : name), 'share'),
    words('plane', ({ plane }) => chip.planes[plane] ?? '', 'share'),
    figures('depth', ({ depthM }) => (Number.isNaN(depthM) ? '–' : formatNumber(depthM * 1e6)), 'µm'),
    words('depth from', (layer) => (Number.isNaN(layer.depthM) ? '–' : depthFrom(layer))),
    words('profile', ({ profile }) => profile),
  ]);
}

function writeLimits(section: Section, chip: Chip, limits: Limits): void {
  const { process, layers } = chip;
  section.heading(2, 'Limits');
  section.paragraph(
    process === null
      ? 'No process is named, so only limits of the run sheet and the defaults apply.'
      : `Process: ${process}.`,
  );
  const micrometres = (metres: number): string => `${formatNumber(metres * 1e6)} µm`;
  const millimetres = (metres: number): string => `${formatNumber(metres * 1e3)} mm`;
  const kilopascals = (pascals: number): string => `${formatNumber(pascals / 1e3)} kPa`;
  const depths = [
    ...new Set(layers.map(({ depthM }) => depthM).filter((depthM) => !Number.isNaN(depthM))),
  ].slice(0, 12);
  const rows = [
    limitRow('narrowest channel', limits.minWidthM, micrometres),
    ...depths.map((depthM) =>
      limitRow(`thinnest wall, depth ${micrometres(depthM)}`, minWallM(chip, depthM), micrometres),
    ),
    limitRow('width over depth', limits.maxWidthToDepth, (ratio) => `at most ${formatNumber(ratio)}`),
    limitRow('depth over width', limits.maxDepthToWidth, (ratio) => `at most ${formatNumber(ratio)}`),
    limitRow('margin to the edge', limits.edgeMarginM, millimetres),
    limitRow('gap between rims', limits.portGapM, millimetres),
    limitRow(
      'hole diameter',
      limits.portDiameterM,
      ([least, most]) => `${formatNumber(least * 1e3)} to ${millimetres(most)}`,
    ),
    limitRow('port grid', limits.portGridM, millimetres),
    limitRow('highest pressure', limits.maxPressurePa, kilopascals),
    limitRow('lowest pressure', limits.minPressurePa, kilopascals),
    limitRow('Reynolds number', limits.maxReynolds, (value) => `at most ${formatNumber(value)}`),
    limitRow(
      'sharpest corner',
      limits.minCornerAngleRad,
      (angle) => `${formatNumber((angle * 180) / Math.PI)}°`,
    ),
    limitRow('stiffness', limits.stiffnessPa, (pascals) => `${formatNumber(pascals / 1e6)} MPa`),
  ];
  section.table(rows, [
    words('limit', ([what]) => what),
    words('value', ([, value]) => value),
    words('from', ([, , origin]) => origin, 'share'),
  ]);
  section.paragraph(
    `The relative slack of every comparison is ${LIMIT_SLACK.toExponential()}, in the drawing's favour.`,
  );
}

function limitRow<T>(
  what: string,
  limit: Sourced<T> | null,
  text: (value: T) => string,
): readonly [string, string, string] {
  return limit === null ? [what, 'none', 'not given: not checked'] : [what, text(limit.value), limit.origin];
}
