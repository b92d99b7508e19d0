/** Chips as CAD programs export them: the etched areas as shapes, never a centreline. Seeded; the answer is always "outlines". */

export type Look = 'fills' | 'fills and strokes' | 'hairlines';

export interface CadExport {
  readonly svg: string;
  readonly sheet: string;
  readonly look: Look;
}

/** A tree of channels with a port at each end, its areas drawn as the seed says. */
export function cadExport(random: () => number): CadExport {
  const pick = <T>(...of: readonly T[]): T => of[Math.floor(random() * of.length)];
  const look = pick<Look>('fills', 'fills and strokes', 'hairlines');
  const branches = 1 + Math.floor(random() * 4);
  const width = 0.1 + 0.5 * random();
  const [x0, y0] = [4 + random(), 10 + random()];
  const trunk = 8 + 6 * random();
  const ports: [string, number, number][] = [['in', x0, y0]];
  const areas: number[][] = [band(x0, y0, x0 + trunk, y0, width)];
  for (let b = 0; b < branches; b++) {
    const angle = ((b - (branches - 1) / 2) * 0.9 * Math.PI) / Math.max(branches, 2);
    const length = 5 + 5 * random();
    const [x, y] = [x0 + trunk + length * Math.cos(angle), y0 + length * Math.sin(angle)];
    areas.push(band(x0 + trunk - width / 2, y0, x, y, width));
    ports.push([`out-${b}`, x, y]);
  }
  if (random() < 0.3) areas.push(band(x0, y0 + 14, x0 + 3, y0 + 14, width));
  const paint = {
    fills: 'fill="#06c"',
    'fills and strokes': 'fill="#06c" stroke="#000" stroke-width="0.05"',
    hairlines: `fill="none" stroke="#000" stroke-width="${pick('0.01', '0.1', '0.25')}"`,
  }[look];
  const close = look === 'fills' ? pick('z', '', 'L') : 'z';
  const data = (area: readonly number[]): string =>
    `M${area.slice(0, 2).join(' ')}L${area.slice(2).join(' ')}${close === 'L' ? `L${area.slice(0, 2).join(' ')}` : close}`;
  const shapes =
    random() < 0.3
      ? [`<path d="${areas.map(data).join('')}" ${paint}/>`]
      : areas.map((area) => `<path d="${data(area)}" ${paint}/>`);
  const framePaint = look === 'fills' ? 'fill="#f4f4f4"' : paint;
  const frame = pick('none', 'frame', 'edge');
  if (frame !== 'none') {
    shapes.unshift(
      `<rect${frame === 'edge' ? ' id="chip-edge"' : ''} x="-5" y="-5" width="50" height="45" ${framePaint}/>`,
    );
  }
  const holes = ports.map(
    ([name, x, y]) =>
      `<circle id="${name}" cx="${x}" cy="${y}" r="0.8" ${pick('fill="#c00"', 'fill="none" stroke="#000" stroke-width="0.05"')}/>`,
  );
  const turn = `rotate(${360 * random()} 20 15)${random() < 0.5 ? ' scale(-1 1)' : ''}`;
  return {
    look,
    svg: `<svg xmlns="http://www.w3.org/2000/svg" width="150mm" height="150mm" viewBox="-75 -75 150 150"><g transform="${turn}">${shapes.join('')}${holes.join('')}</g></svg>`,
    sheet: `depth: 50 um\nports: { ${ports.map(([name], i) => `${name}: ${i === 0 ? '{ pressure: 1 kPa }' : 'open'}`).join(', ')} }\n`,
  };
}

/** Corners of a band `width` wide from 1 to 2. */
function band(x1: number, y1: number, x2: number, y2: number, width: number): number[] {
  const length = Math.hypot(x2 - x1, y2 - y1);
  const [nx, ny] = [(-(y2 - y1) / length) * (width / 2), ((x2 - x1) / length) * (width / 2)];
  return [x1 + nx, y1 + ny, x2 + nx, y2 + ny, x2 - nx, y2 - ny, x1 - nx, y1 - ny];
}

export interface PillarChip {
  readonly svg: string;
  readonly sheet: string;
  /** Pillars that stand in each channel, those without left out. */
  readonly pillars: Readonly<Record<string, number>>;
}

/** Wide channels from port to port, some with pillars, some of them straight, laid down at any angle and scale. */
export function pillarChip(random: () => number): PillarChip {
  const lanes = 1 + Math.floor(random() * 3);
  const parts: string[] = [];
  const pillars: Record<string, number> = {};
  const conditions: string[] = [];
  const bySize = random() < 0.4;
  for (let lane = 0; lane < lanes; lane++) {
    const y = 12 * lane;
    const width = 2 + 3 * random();
    const bend = random() < 0.5 ? 0 : 3;
    parts.push(
      `<path id="lane-${lane}" d="M0 ${y}L15 ${y + bend}L30 ${y}" fill="none" stroke="#06c" stroke-width="${width}"/>`,
      `<g id="holes"><circle id="a${lane}" cx="0" cy="${y}" r="${width / 2 + 0.2}"/><circle id="b${lane}" cx="30" cy="${y}" r="${width / 2 + 0.2}"/></g>`,
    );
    conditions.push(`a${lane}: { pressure: 1 kPa }`, `b${lane}: open`);
    const count = Math.floor(random() * 30);
    if (count > 0) pillars[`lane-${lane}`] = count;
    for (let k = 0; k < count; k++) {
      const radius = bySize ? 0.02 + 0.07 * random() : 0.1 + 0.1 * random();
      const x = 5 + 20 * random();
      const middle = y + bend * (1 - Math.abs(x - 15) / 15);
      const across = (width / 2 - radius - 0.1) * (2 * random() - 1);
      parts.push(pillar(x, middle + across, radius, bySize ? random() : 0));
    }
  }
  const scale = 0.5 + 3 * random();
  return {
    svg: `<svg xmlns="http://www.w3.org/2000/svg" width="${200 / scale}mm" height="${200 / scale}mm" viewBox="${-100 / scale} ${-100 / scale} ${200 / scale} ${200 / scale}"><g transform="rotate(${360 * random()})">${parts.join('')}</g></svg>`,
    sheet: `depth: 500 um\n${bySize ? '' : 'ports_layer: holes\n'}ports: { ${conditions.join(', ')} }\n`,
    pillars,
  };
}

function pillar(x: number, y: number, r: number, kind: number): string {
  if (kind < 0.5) return `<circle cx="${x}" cy="${y}" r="${r}"/>`;
  const s = r / Math.SQRT2;
  return `<rect x="${x - s}" y="${y - s}" width="${2 * s}" height="${2 * s}"/>`;
}
