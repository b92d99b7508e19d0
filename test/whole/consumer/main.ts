/**
 * A user's program: every function and every type that the package exports, under its own strict compiler options.
 * package.test.ts compiles it against the packed tarball and runs it; it is no part of this repository's own program.
 */
import * as rillcheck from 'rillcheck';

/** No exported type is any: where T is, the answer is never, which nothing fits. */
type Known<T> = 0 extends 1 & T ? never : T;

/** Of each stage what it hands on, so that a wrong type anywhere fails to compile. */
export async function useAll(svg: string, yaml: string): Promise<string> {
  const drawing: Known<rillcheck.SvgDrawing> = rillcheck.readSvg(svg, 'chip.svg');
  const layout: Known<rillcheck.Layout> = rillcheck.layOut(drawing, 'chip.svg');
  const items: readonly Known<rillcheck.LayoutItem>[] = layout.items;
  const drawn = items.map(linesIn);
  const draftInput: Known<rillcheck.DraftInput> = { layout, file: 'chip.svg', tool: rillcheck.VERSION };
  const draft: string = rillcheck.draftRunSheet(draftInput);
  const sheet: Known<rillcheck.RunSheet> = rillcheck.parseRunSheet(yaml, 'chip.run.yaml');

  const input: Known<rillcheck.AnalysisInput> & Known<rillcheck.ChipInput> = {
    layout,
    sheet,
    file: 'chip.svg',
  };
  const assembled: Known<rillcheck.Assembled> = rillcheck.assembleChip(input);
  const chip: Known<rillcheck.Chip> = assembled.chip;
  const run: Known<rillcheck.Run> = assembled.run;
  const channels: readonly Known<rillcheck.Channel>[] = chip.channels;
  const ports: readonly Known<rillcheck.Port>[] = chip.ports;
  const portRuns: readonly Known<rillcheck.PortRun>[] = run.ports;
  const conditions: readonly Known<rillcheck.PortCondition>[] = portRuns.map(({ condition }) => condition);
  const layers: readonly Known<rillcheck.ChipLayer>[] = chip.layers;
  const edge: Known<rillcheck.ChipEdge> | null = chip.edge;
  const limits: Known<rillcheck.Limits> = run.limits;
  const fluid: Known<rillcheck.Fluid> = run.fluid;
  const mixture: Known<rillcheck.Mixture> = fluid.mixture;
  const faults: readonly Known<rillcheck.ReadingFault>[] = chip.faults;
  const outlines = faults.filter(
    (fault): fault is Known<rillcheck.OutlineFault> => fault.kind === 'filled-outline',
  );
  const obstacles: readonly Known<rillcheck.Obstacle>[] = chip.obstacles;
  const leastWall: Known<rillcheck.LeastWall> | null = chip.leastWall;
  const maxReynolds: Known<rillcheck.Sourced<number>> = limits.maxReynolds;
  const origin: Known<rillcheck.Origin> = maxReynolds.origin;

  const network: Known<rillcheck.Network> = rillcheck.buildNetwork(chip);
  const kinds: readonly Known<rillcheck.NodeKind>[] = rillcheck.NODE_KINDS;
  const trace: Known<rillcheck.NetworkTrace> = network.trace;
  const round: readonly number[] = trace.near.index?.search(0, 0, 1, 1) ?? [];
  const flowNetwork: Known<rillcheck.FlowNetwork> = network;
  const flowRun: Known<rillcheck.FlowRun> = run;
  const flow: Known<rillcheck.FlowState> = rillcheck.solveFlow(flowNetwork, flowRun);
  const parts: readonly Known<rillcheck.FlowPart>[] = flow.parts;

  const context: Known<rillcheck.FindingContext> = { chip, run, network, flow };
  const rule: Known<rillcheck.Rule> = {
    names: ['my-own'],
    run: ({ chip: { file } }): Known<rillcheck.RuleOutcome> => ({
      findings: [],
      notRun: [{ rule: 'my-own', why: file }],
    }),
  };
  const judged: Known<rillcheck.FindingReport> = rillcheck.findAll(context);
  const own: readonly Known<rillcheck.NotRun>[] = rillcheck.findAll(context, [rule]).notRun;
  const findings: readonly Known<rillcheck.Finding>[] = judged.findings;
  const severities: readonly Known<rillcheck.Severity>[] = findings.map(({ severity }) => severity);

  const stages: string[] = [];
  const onStage: Known<rillcheck.OnStage> = async (stage) => {
    stages.push(stage);
  };
  const analysis: Known<rillcheck.Analysis> = await rillcheck.analyse(input, onStage);
  const shares: Known<rillcheck.JointShares> = analysis.jointShares;
  const asRun: Known<rillcheck.RunNetwork> = { network, run };
  const settings: Known<rillcheck.FoundSettings> = rillcheck.findSettings(asRun);
  const targets: readonly Known<rillcheck.FoundTarget>[] = settings.targets;
  const pumped: Known<rillcheck.Analysis> = await rillcheck.analyse({ ...input, pump: true });

  const tolerances: Known<rillcheck.Tolerances> | null = sheet.tolerances;
  if (tolerances === null) throw new Error('the run sheet of this example has tolerances');
  const draws: Known<rillcheck.SpreadOptions> = { draws: 16, seed: 1 };
  const pace: Known<rillcheck.Pace> = { due: () => false, rest: async () => 'go on' };
  const spread: Known<rillcheck.Spread> = await rillcheck.spreadOf(asRun, tolerances, draws, pace);
  const moved: readonly Known<rillcheck.SpreadOutput>[] = spread.outputs;

  const computed: Known<rillcheck.CaseInput> = { name: null, ...analysis };
  const reportInput: Known<rillcheck.ReportInput> = {
    tool: { name: 'rillcheck', version: rillcheck.VERSION },
    layout: { file: 'chip.svg', sha256: '0'.repeat(64) },
    sheet: null,
    cases: [computed],
  };
  const inCases: Known<rillcheck.Report> = rillcheck.buildReport(reportInput);
  const source: Known<rillcheck.SourceFile> = { name: 'chip.svg', text: svg };
  const files: Known<rillcheck.LayoutFiles> = {
    layout: source,
    runSheet: { name: 'chip.run.yaml', text: yaml },
  };
  const checked: Known<rillcheck.CheckLayoutOptions> = { pump: true, spread: draws };
  const report: Known<rillcheck.Report> = await rillcheck.checkLayout(files, checked);
  const paper: Known<rillcheck.PdfFileOptions> = { paper: 'letter', date: new Date(0) };
  const pdf: Uint8Array = await rillcheck.writePdf(report, paper);
  const [one]: readonly Known<rillcheck.ReportedCase>[] = report.cases;
  if (one === undefined) throw new Error('a report has a case');
  useRows(report.result, one.part);

  const detail: Known<rillcheck.Detail> = 'reaches';
  const json: string = [...rillcheck.writeJson(inCases.result, detail)].join('');
  const reaches: string = [...rillcheck.writeReachesCsv(one.part.reaches)].join('');
  const segments: string = [...rillcheck.writeSegmentsCsv(one.part.segments)].join('');
  const quantity: Known<rillcheck.MapQuantity> = 'shear';
  const picture: Known<rillcheck.SvgOptions> = { quantity };
  const terminal: Known<rillcheck.TerminalOptions> = { colour: false, columns: 80, quiet: true };

  const given: Known<rillcheck.Given> = { kind: 'flow', flowM3s: 1e-10 };
  const section: Known<rillcheck.SectionInput> = {
    widthM: 5e-4,
    depthM: 5e-5,
    lengthM: 0.02,
    profile: 'rectangle',
    viscosityPaS: 1e-3,
    densityKgM3: 1000,
    given,
  };
  const duct: Known<rillcheck.SectionState> = rillcheck.computeSection(section);
  const inDuct: Known<rillcheck.DuctState> = duct;
  const form: Known<rillcheck.DuctForm> = rillcheck.ductForm(5e-4, 5e-5);

  void [
    edge,
    limits,
    fluid,
    mixture,
    faults,
    ports,
    conditions,
    layers,
    kinds,
    round,
    parts,
    own,
    severities,
  ];
  void [shares, targets, pumped, drawn, form, inDuct, moved, outlines, obstacles, leastWall, origin];
  useEntries(sheet);
  const texts = [draft, json, reaches, segments, rillcheck.svgPicture(one, picture)];
  return [
    rillcheck.terminalSummary(inCases, terminal).trim(),
    `${channels.length} channels, ${stages.length} stages, ${spread.draws} draws`,
    texts.every((text) => text.length > 100) && pdf.length > 10_000 ? 'all written' : 'something is missing',
  ].join('\n');
}

function linesIn(item: Known<rillcheck.LayoutItem>): readonly Float64Array[] {
  switch (item.kind) {
    case 'stroke': {
      const stroke: Known<rillcheck.Stroke> = item;
      const centrelines: readonly Known<rillcheck.Centreline>[] = stroke.centrelines;
      return centrelines.map(({ points }) => points);
    }
    case 'hole': {
      const hole: Known<rillcheck.Hole> = item;
      return [Float64Array.of(hole.x, hole.y)];
    }
    default: {
      const rest: Known<rillcheck.Outline> | Known<rillcheck.Ignored> = item;
      return rest.rings;
    }
  }
}

function useEntries(sheet: Known<rillcheck.RunSheet>): void {
  const layers: readonly Known<rillcheck.LayerEntry>[] = Object.values(sheet.layers);
  const ports: readonly Known<rillcheck.PortEntry>[] = Object.values(sheet.ports);
  const tubing: readonly Known<rillcheck.TubingPiece>[] = ports.flatMap((port) => port.tubing);
  const channels: readonly Known<rillcheck.ChannelEntry>[] = Object.values(sheet.channels);
  const pumps: readonly Known<rillcheck.PumpLimitEntry>[] = Object.values(sheet.pumpLimits);
  const targets: readonly Known<rillcheck.TargetEntry>[] = sheet.targets;
  const accepted: readonly Known<rillcheck.AcceptEntry>[] = sheet.accept;
  const process: Known<rillcheck.ProcessName> | null = sheet.process;
  const depth: Known<rillcheck.Tolerance> | null | undefined = sheet.tolerances?.depth;
  void [layers, tubing, channels, pumps, targets, accepted, process, depth];
}

function useRows(
  result: Known<rillcheck.Result>,
  part: Known<rillcheck.CasePart>,
): Known<rillcheck.SingleResult> | Known<rillcheck.CasesResult> {
  const tool: Known<rillcheck.ToolRow> = result.tool;
  const layout: Known<rillcheck.LayoutRow> = result.layout;
  const runSheet: Known<rillcheck.RunSheetRow> = result.run_sheet;
  const fluid: Known<rillcheck.FluidRow> = part.fluid;
  const counts: Known<rillcheck.CountsRow> = part.counts;
  const ports: readonly Known<rillcheck.PortRow>[] = part.ports;
  const nodes: Known<rillcheck.Rows<Known<rillcheck.NodeRow>>> = part.nodes;
  const reaches: Known<rillcheck.Rows<Known<rillcheck.ReachRow>>> = part.reaches;
  const segments: Known<rillcheck.Rows<Known<rillcheck.SegmentRow>>> = part.segments;
  const findings: readonly Known<rillcheck.FindingRow>[] = part.findings;
  const notRun: readonly Known<rillcheck.NotRunRow>[] = part.not_run;
  const balance: Known<rillcheck.BalanceRow> = part.balance;
  const pump: Known<rillcheck.PumpPart> | undefined = part.pump;
  const spread: Known<rillcheck.SpreadPart> | undefined = part.spread;
  void [tool, layout, runSheet, fluid, counts, findings, notRun, balance, pump, spread];
  const flows: readonly (number | null)[] = [...ports, ...reaches].map(({ flow_m3_s }) => flow_m3_s);
  void [flows, nodes, segments];
  return result;
}

/** What cannot be read is an error of a class of its own. */
export function whereOf(error: unknown): string {
  return error instanceof rillcheck.InputError ? error.where : '';
}
