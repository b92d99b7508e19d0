import { readSvg } from '../../src/svg/read.ts';
import type { Shape } from '../../src/svg/types.ts';

export const XMLNS = 'xmlns="http://www.w3.org/2000/svg" xmlns:xlink="http://www.w3.org/1999/xlink"';

/** A 100 × 50 mm drawing with one unit to the millimetre. */
export function drawing(content: string): string {
  return `<svg ${XMLNS} width="100mm" height="50mm" viewBox="0 0 100 50">${content}</svg>`;
}

export function shapesOf(content: string): readonly Shape[] {
  return readSvg(drawing(content), 'chip.svg').shapes;
}

/** The only shape of the content. */
export function one(content: string): Shape {
  const shapes = shapesOf(content);
  if (shapes.length !== 1) throw new Error(`${shapes.length} shapes`);
  return shapes[0];
}
