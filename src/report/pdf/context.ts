import type { ChipLayer } from '../../chip/types.ts';
import { type ChipGeometry, chipGeometry } from '../map-geometry.ts';
import type { Report, ReportedCase } from '../report.ts';
import { type Paper, POINTS_PER_MM } from './paper.ts';

/** What every page of one case is written from. */
export interface PageContext {
  readonly paper: Paper;
  readonly report: Report;
  readonly one: ReportedCase;
  readonly geometry: ChipGeometry;
  /** Printed on the first pages. */
  readonly date: Date;
  /** For maps: width in mm of a text in the bolder weight, which is the wider. */
  readonly measure: (text: string, sizeMm: number) => number;
  /** For maps: a name with a code for each character that either weight lacks. */
  readonly readable: (name: string) => string;
}

export function pageContext(paper: Paper, report: Report, one: ReportedCase, date: Date): PageContext {
  return {
    paper,
    report,
    one,
    geometry: chipGeometry(one.network.chip),
    date,
    measure: (text, sizeMm) =>
      paper.widthOf(text, { size: sizeMm * POINTS_PER_MM, weight: 'bold' }) / POINTS_PER_MM,
    readable: (name) => paper.readable(paper.readable(name), 'bold'),
  };
}

/** Text sizes in points, the same on all pages. */
export const BODY = { size: 7.5 } as const;
export const BODY_BOLD = { size: 7.5, weight: 'bold' } as const;
export const SMALL = { size: 6.5, colour: '#444444' } as const;

/** ISO date, UTC. */
export function isoDate(date: Date): string {
  return date.toISOString().slice(0, 10);
}

/** Where a layer's depth comes from, in words: its own entry, the run sheet's depth for all layers, or the drawing. */
export function depthFrom({ depthOrigin }: Pick<ChipLayer, 'depthOrigin'>): string {
  return depthOrigin === 'default' ? 'run sheet, for all layers' : depthOrigin;
}
