/** Big layouts for scale checks: text of the SVG and of the run sheet beside it. */
export interface BigLayout {
  readonly name: string;
  readonly segments: number;
  readonly svg: string;
  readonly sheet: string;
}

const SHEET = `fluid: { viscosity: 1 mPa s, density: 1000 kg/m^3 }
joints: centreline
depth: 50 um
limits: { min_width: 40 um, min_wall: 60 um, max_width_to_depth: 12, max_depth_to_width: 2, edge_margin: 0.2 mm, port_gap: 1 mm, max_pressure: 100 kPa, max_reynolds: 500, min_corner_angle: 30 deg }
ports:
  in: { pressure: 10 kPa }
  out: { pressure: 0 Pa }
`;

/** n × n channels that cross: n² junctions, 2 n (n − 1) segments between them. */
export function lattice(n: number): BigLayout {
  const lines = [head(n, n), group(0.1)];
  for (let i = 0; i < n; i++) {
    lines.push(
      `<path id="h${i}" d="M0.5 ${i + 0.5} H${n - 0.5}"/>`,
      `<path id="v${i}" d="M${i + 0.5} 0.5 V${n - 0.5}"/>`,
    );
  }
  lines.push('</g>', hole('in', 0.5, 0.5), hole('out', n - 0.5, n - 0.5), '</svg>');
  return { name: `lattice ${n}`, segments: 2 * n * (n - 1), svg: lines.join('\n'), sheet: SHEET };
}

/** k zigzag lanes of m legs each between two manifolds. */
export function lanes(k: number, m: number): BigLayout {
  const right = number(1 + m * 0.4);
  const bottom = 1 + 2 * (k - 1);
  const lines = [
    head(number(m * 0.4 + 2), 2 * k + 2),
    group(0.1),
    `<path id="feed" stroke-width="0.2" d="M1 1 V${bottom}"/><path id="drain" stroke-width="0.2" d="M${right} 1 V${bottom}"/>`,
  ];
  for (let i = 0; i < k; i++) {
    const y = 1 + 2 * i;
    let d = `M1 ${y}`;
    for (let j = 1; j < m; j++) d += ` L${number(1 + j * 0.4)} ${y + (j % 2 === 1 ? 0.5 : 0)}`;
    lines.push(`<path id="lane${i}" d="${d} L${right} ${y}"/>`);
  }
  lines.push('</g>', hole('in', 1, 1), hole('out', right, bottom), '</svg>');
  return { name: `lanes ${k} × ${m}`, segments: k * m + 2 * k, svg: lines.join('\n'), sheet: SHEET };
}

/** A binary tree of straight strokes, every branch a channel of its own, gathered again by a bar. */
export function tree(levels: number): BigLayout {
  const leaves = 2 ** levels;
  const pitch = 0.5;
  const height = leaves * pitch;
  const lines = [head(number(2 * levels + 6), number(height + 2)), group(0.1)];
  let segments = 0;
  let y = [height / 2 + 1];
  lines.push(`<path id="stem" d="M2 ${y[0]}H3"/>`);
  for (let level = 0; level < levels; level++) {
    const step = height / 2 ** (level + 2);
    const x = 3 + 2 * level;
    const next: number[] = [];
    for (const at of y) {
      lines.push(
        `<path id="b${segments}" d="M${x} ${number(at)}V${number(at - step)}H${x + 2}"/>`,
        `<path id="b${segments + 1}" d="M${x} ${number(at)}V${number(at + step)}H${x + 2}"/>`,
      );
      segments += 2;
      next.push(at - step, at + step);
    }
    y = next;
  }
  const x = 3 + 2 * levels;
  lines.push(
    `<path id="bar" stroke-width="0.3" d="M${x} ${number(y[0])}V${number(y[y.length - 1])}"/>`,
    '</g>',
  );
  lines.push(hole('in', 2, height / 2 + 1), hole('out', x, number(y[y.length - 1])), '</svg>');
  return { name: `tree ${levels}`, segments: 2 * segments + leaves, svg: lines.join('\n'), sheet: SHEET };
}

function head(width: number, height: number): string {
  return `<svg xmlns="http://www.w3.org/2000/svg" width="${width}mm" height="${height}mm" viewBox="0 0 ${width} ${height}">`;
}

function group(width: number): string {
  return `<g id="channels" fill="none" stroke="black" stroke-width="${width}">`;
}

function hole(name: string, x: number, y: number): string {
  return `<circle id="${name}" cx="${x}" cy="${y}" r="0.2"/>`;
}

function number(value: number): number {
  return Number(value.toFixed(6));
}
