/** Ways to lay the same drawing down: the whole content in a transform group, the page grown so that nothing is cut off. */
export interface Turn {
  readonly name: string;
  /** x' = a x + c y, y' = b x + d y about the drawing's origin. */
  readonly matrix: readonly [number, number, number, number];
}

const ANGLE = (37 * Math.PI) / 180;

export const TURNS: readonly Turn[] = [
  { name: 'turned by 37°', matrix: [Math.cos(ANGLE), Math.sin(ANGLE), -Math.sin(ANGLE), Math.cos(ANGLE)] },
  { name: 'mirrored', matrix: [-1, 0, 0, 1] },
];

/** Where a point of the plain drawing (mm) lies in the turned one. */
export function turnedPoint({ matrix: [a, b, c, d] }: Turn, x: number, y: number): [number, number] {
  return [a * x + c * y, b * x + d * y];
}

/** The same SVG with its content turned; width and height grow with the viewBox, so the scale stays. */
export function turnedSvg(svg: string, turn: Turn): string {
  const root = /<svg\b[^>]*>/.exec(svg);
  if (root === null) throw new Error('the fixture has no svg element');
  const box = /\bviewBox="([^"]*)"/.exec(root[0]);
  if (box === null) throw new Error('a fixture needs a viewBox, so that it can be turned');
  const [x, y, width, height] = box[1]
    .trim()
    .split(/[\s,]+/)
    .map(Number);
  const corners = [
    [x, y],
    [x + width, y],
    [x, y + height],
    [x + width, y + height],
  ].map(([px, py]) => turnedPoint(turn, px, py));
  const left = Math.min(...corners.map(([px]) => px));
  const top = Math.min(...corners.map(([, py]) => py));
  const newWidth = Math.max(...corners.map(([px]) => px)) - left;
  const newHeight = Math.max(...corners.map(([, py]) => py)) - top;
  const tag = root[0]
    .replace(box[0], `viewBox="${left} ${top} ${newWidth} ${newHeight}"`)
    .replace(/\bwidth="([\d.]+)([^"]*)"/, (_, size, unit) => `width="${(size * newWidth) / width}${unit}"`)
    .replace(
      /\bheight="([\d.]+)([^"]*)"/,
      (_, size, unit) => `height="${(size * newHeight) / height}${unit}"`,
    );
  const start = root.index + root[0].length;
  const end = svg.lastIndexOf('</svg>');
  const [a, b, c, d] = turn.matrix;
  return `${svg.slice(0, root.index)}${tag}<g transform="matrix(${a} ${b} ${c} ${d} 0 0)">${svg.slice(start, end)}</g>${svg.slice(end)}`;
}
