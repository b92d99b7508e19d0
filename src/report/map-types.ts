import type { Box, Line } from './map-geometry.ts';
import type { MapQuantity } from './reach-values.ts';

/** A polyline to be stroked; paper mm, x0 y0 x1 y1 … */
export interface MapStroke {
  readonly points: readonly number[];
  readonly widthMm: number;
  readonly colour: string;
  readonly cap: 'butt' | 'round' | 'square';
}

export interface MapReach {
  /** Index into the network's reaches. */
  readonly reach: number;
  readonly strokes: readonly MapStroke[];
}

export interface MapHole {
  readonly name: string;
  readonly x: number;
  readonly y: number;
  readonly radiusMm: number;
}

export interface MapUnread {
  /** Lines, cut off at the figure. */
  readonly under: readonly (readonly number[])[];
  /** Rings of what stands in a channel. */
  readonly over: readonly (readonly number[])[];
}

/** Of the numbers and marks of findings. */
export const FINDING_COLOUR = '#b00020';

/** Looks of what was not read. */
export const PALE_LINE = '#c4c4c4';
export const PALE_FILL = '#e9e9e9';

export interface MapLabel {
  readonly kind: 'port' | 'reach' | 'finding';
  readonly text: string;
  readonly box: Box;
  readonly sizeMm: number;
  readonly leader: Line | null;
}

export interface MapLegend {
  /** The bar; the low end on the left. */
  readonly bar: Box;
  readonly colours: readonly string[];
  readonly ticks: readonly { readonly x: number; readonly text: string }[];
  /** "mean floor shear, Pa (logarithmic); grey: no value or no flow" */
  readonly title: string;
  readonly titleAt: readonly [number, number];
  readonly sizeMm: number;
}

export interface ScaleBar {
  readonly x: number;
  readonly y: number;
  readonly lengthMm: number;
  readonly text: string;
  readonly sizeMm: number;
}

/** What a map and a close-up are drawn with. */
export interface PictureOptions {
  /** The picture is at most so large. */
  readonly widthMm: number;
  readonly heightMm: number;
  readonly labelSizeMm: number;
  /** Width of a text in mm. */
  readonly measure: (text: string, sizeMm: number) => number;
  /** A name as the picture can show it: harmless, and with a code for what the font lacks. */
  readonly readable: (name: string) => string;
}

/** A picture of the chip or of a part of it as data: everything in paper millimetres, y down, from its upper left corner. */
export interface Picture {
  readonly widthMm: number;
  /** Chip edge rings. */
  readonly edge: readonly (readonly number[])[];
  readonly holes: readonly MapHole[];
  readonly labels: readonly MapLabel[];
  readonly scaleBar: ScaleBar;
}

export interface MapOptions extends PictureOptions {
  readonly quantity: MapQuantity;
  /** Numbers of findings at their places. */
  readonly findingNumbers: boolean;
  readonly reachLabels: boolean;
}

/** A map as data: everything in paper millimetres, y down, from the figure's upper left corner. */
export interface MapDrawing extends Picture {
  readonly heightMm: number;
  /** Paper mm per drawing mm. */
  readonly scale: number;
  /** The channels as drawn, under the colours: a dark rim, and what is part of no reach. */
  readonly ground: readonly MapStroke[];
  readonly reaches: readonly MapReach[];
  /** What is drawn and was not read, pale: under the channels, and (obstacles) on them. */
  readonly unread: MapUnread;
  /** Exact places of findings, numbered from 1 as in the list; the number itself is a label. */
  readonly markers: readonly { readonly number: number; readonly x: number; readonly y: number }[];
  /** How many reaches that have a label of their own found no room or were beyond the bound. */
  readonly unlabelled: number;
  /** How many ports found no room for their name. */
  readonly unnamedPorts: number;
  readonly legend: MapLegend | null;
  /** Stated below: view, scale, least painted width. */
  readonly caption: string;
}
