/** Random chips for tests of the whole chain: a grid of channels, each edge a stroke of its own, ports on its outer corners and sides. */

export interface GridEdge {
  readonly name: string;
  readonly from: string;
  readonly to: string;
}

export interface Grid {
  readonly svg: string;
  readonly edges: readonly GridEdge[];
  readonly ports: readonly string[];
}

const PITCH_MM = 6;

/** A grid of columns × rows of nodes. `widthMm` and `depthUm` are asked for each edge in turn; ports stand at the ends of the first and last row. */
export function gridDrawing(
  columns: number,
  rows: number,
  widthMm: (edge: number) => number,
  depthUm: (edge: number) => number,
): Grid {
  const at = (column: number, row: number): readonly [number, number] => [
    5 + column * PITCH_MM,
    5 + row * PITCH_MM,
  ];
  const edges: GridEdge[] = [];
  const strokes: string[] = [];
  const join = (a: readonly [number, number], b: readonly [number, number]): void => {
    const [[x1, y1], [x2, y2]] = [at(...a), at(...b)];
    const k = edges.length;
    edges.push({ name: `e${k}`, from: `n${a.join('-')}`, to: `n${b.join('-')}` });
    strokes.push(
      `<path data-name="e${k}" data-depth="${depthUm(k)} um" d="M${x1} ${y1}L${x2} ${y2}" stroke-width="${widthMm(k)}"/>`,
    );
  };
  for (let row = 0; row < rows; row++) {
    for (let column = 0; column < columns; column++) {
      if (column + 1 < columns) join([column, row], [column + 1, row]);
      if (row + 1 < rows) join([column, row], [column, row + 1]);
    }
  }
  const corners: readonly (readonly [number, number])[] = [
    [0, 0],
    [columns - 1, 0],
    [0, rows - 1],
    [columns - 1, rows - 1],
  ];
  const holes = corners.map((corner, i) => {
    const [x, y] = at(...corner);
    return `<circle data-name="p${i}" cx="${x}" cy="${y}" r="0.5"/>`;
  });
  const width = 10 + (columns - 1) * PITCH_MM;
  const height = 10 + (rows - 1) * PITCH_MM;
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="${width}mm" height="${height}mm" viewBox="0 0 ${width} ${height}"><g fill="none" stroke="#000">${strokes.join('')}</g><g>${holes.join('')}</g></svg>`;
  return { svg, edges, ports: corners.map((_, i) => `p${i}`) };
}
