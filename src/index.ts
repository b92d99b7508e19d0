/**
 * The public API: the same steps as the command line, as functions, one by one, and the types that they take and give.
 * The command line itself is not among them: importing the package does not load it.
 *
 *   readSvg → layOut → assembleChip (with parseRunSheet) → buildNetwork → solveFlow → findAll → buildReport → writers
 */
export { type Analysis, type AnalysisInput, analyse, type OnStage } from './analyse.ts';
export type { RunNetwork } from './asked/run-network.ts';
export { type CheckLayoutOptions, checkLayout, type LayoutFiles, type SourceFile } from './check-layout.ts';
export { type Assembled, assembleChip, type ChipInput } from './chip/assemble.ts';
export type {
  Channel,
  Chip,
  ChipEdge,
  ChipLayer,
  Fluid,
  LeastWall,
  Limits,
  Mixture,
  Obstacle,
  Origin,
  OutlineFault,
  Port,
  PortRun,
  ReadingFault,
  Run,
  Sourced,
} from './chip/types.ts';
export { type PdfFileOptions, writePdf } from './commands/pdf.ts';
export { type DraftInput, draftRunSheet } from './draft/draft.ts';
export { InputError } from './errors.ts';
export { findAll } from './findings/check.ts';
export type { FindingContext } from './findings/context.ts';
export type { Rule, RuleOutcome } from './findings/rule.ts';
export type { Finding, FindingReport, NotRun, Severity } from './findings/types.ts';
export { layOut } from './layout/layout.ts';
export type { Centreline, Hole, Ignored, Layout, LayoutItem, Outline, Stroke } from './layout/types.ts';
export { buildNetwork } from './network/build.ts';
export { type Network, type NetworkTrace, NODE_KINDS, type NodeKind } from './network/types.ts';
export { type DuctForm, ductForm } from './physics/duct.ts';
export type { DuctState } from './physics/duct-state.ts';
export { writeReachesCsv, writeSegmentsCsv } from './report/csv.ts';
export { type Detail, writeJson } from './report/json.ts';
export type { MapQuantity } from './report/reach-values.ts';
export { buildReport, type Report, type ReportedCase } from './report/report.ts';
export type { CaseInput, CasePart, CasesResult, ReportInput, Result, SingleResult } from './report/result.ts';
export type {
  BalanceRow,
  CountsRow,
  FindingRow,
  FluidRow,
  LayoutRow,
  NodeRow,
  NotRunRow,
  PortRow,
  PumpPart,
  ReachRow,
  RunSheetRow,
  SegmentRow,
  SpreadPart,
  ToolRow,
} from './report/result-rows.ts';
export type { Rows } from './report/rows.ts';
export { type SvgOptions, svgPicture } from './report/svg.ts';
export { type TerminalOptions, terminalSummary } from './report/terminal.ts';
export { parseRunSheet } from './runsheet/parse.ts';
export type {
  AcceptEntry,
  ChannelEntry,
  LayerEntry,
  PortCondition,
  PortEntry,
  ProcessName,
  PumpLimitEntry,
  RunSheet,
  TargetEntry,
  Tolerance,
  Tolerances,
  TubingPiece,
} from './runsheet/types.ts';
export { computeSection, type Given, type SectionInput, type SectionState } from './section/section.ts';
export type { FlowNetwork, FlowRun } from './solve/flow-network.ts';
export { solveFlow } from './solve/flow-state.ts';
export type { JointShares } from './solve/joint-share.ts';
export { type FoundSettings, type FoundTarget, findSettings } from './solve/targets.ts';
export type { FlowPart, FlowState } from './solve/types.ts';
export { type Pace, type SpreadOptions, spreadOf } from './spread/spread.ts';
export type { Spread, SpreadOutput } from './spread/types.ts';
export { readSvg } from './svg/read.ts';
export type { SvgDrawing } from './svg/types.ts';
export { VERSION } from './version.ts';
