/**
 * The public API: the same steps as the command line, as functions, one by one.
 *
 *   readSvg → layOut → assembleChip (with parseRunSheet) → buildNetwork → solveFlow → findAll → buildReport → writers
 */
export { type Analysis, type AnalysisInput, analyse, analysePump, type OnStage } from './analyse.ts';
export { assembleChip } from './chip/assemble.ts';
export type {
  Channel,
  Chip,
  ChipEdge,
  ChipLayer,
  ChipLimits,
  Fluid,
  Port,
  ReadingFault,
} from './chip/types.ts';
export { run } from './cli.ts';
export type { Io } from './commands/io.ts';
export { draftRunSheet } from './draft/draft.ts';
export { InputError } from './errors.ts';
export { findAll } from './findings/check.ts';
export type { Finding, FindingReport, NotRun, Severity } from './findings/types.ts';
export { layOut } from './layout/layout.ts';
export type { Layout, LayoutItem } from './layout/types.ts';
export { buildNetwork } from './network/build.ts';
export { type Network, NODE_KINDS, type NodeKind } from './network/types.ts';
export { type DuctForm, ductForm } from './physics/duct.ts';
export { writeReachesCsv, writeSegmentsCsv } from './report/csv.ts';
export { type Detail, writeJson } from './report/json.ts';
export { buildCasesReport, buildReport, type Report } from './report/report.ts';
export type { Result } from './report/result.ts';
export { svgPicture } from './report/svg.ts';
export { terminalSummary } from './report/terminal.ts';
export { parseRunSheet } from './runsheet/parse.ts';
export type { RunSheet } from './runsheet/types.ts';
export { computeSection } from './section/section.ts';
export { solveFlow } from './solve/flow-state.ts';
export { type FoundSettings, findSettings } from './solve/targets.ts';
export type { FlowPart, FlowState } from './solve/types.ts';
export { spreadOf } from './spread/spread.ts';
export { readSvg } from './svg/read.ts';
export type { SvgDrawing } from './svg/types.ts';
export { VERSION } from './version.ts';
