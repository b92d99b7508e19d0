/**
 * What a browser draws for an SVG file: every rendered shape with its length, points along it, screen matrix and paint.
 * Copies that `use` makes live in a closed shadow tree, so the tree is walked through the debugging protocol.
 */
import { pathToFileURL } from 'node:url';
import type { CDPSession, Page } from 'playwright-core';

export interface BrowserShape {
  readonly tag: string;
  readonly id: string | null;
  /** In the shape's own units. */
  readonly length: number;
  /** Own units → CSS pixels on the screen. */
  readonly toScreen: readonly [number, number, number, number, number, number];
  readonly stroked: boolean;
  readonly filled: boolean;
  /** Computed, in own units; found by probing the painted stroke where the computed value is no length in px. */
  readonly strokeWidth: number;
  readonly nonScaling: boolean;
  /** Hands in shares of the length, gets points in own units. */
  readonly pointsAt: (shares: readonly number[]) => Promise<readonly (readonly [number, number])[]>;
}

/** Shapes with a length that are rendered, in document order, copies included. */
export async function measureFile(page: Page, session: CDPSession, file: string): Promise<BrowserShape[]> {
  await page.goto(pathToFileURL(file).href);
  const { root } = await session.send('DOM.getDocument', { depth: -1, pierce: true });
  const shapes: BrowserShape[] = [];
  // DOM.getDocument types its nodes with many more fields than are used here.
  for (const { nodeId, isCopy } of drawnNodes(root as Node)) {
    const { object } = await session.send('DOM.resolveNode', { nodeId });
    if (object.objectId === undefined) throw new Error(`node ${nodeId} is no object`);
    const { objectId } = object;
    const call = async (body: string, ...args: readonly unknown[]): Promise<unknown> => {
      const { result, exceptionDetails } = await session.send('Runtime.callFunctionOn', {
        objectId,
        functionDeclaration: body,
        arguments: args.map((value) => ({ value })),
        returnByValue: true,
      });
      if (exceptionDetails !== undefined)
        throw new Error(exceptionDetails.exception?.description ?? exceptionDetails.text);
      return result.value;
    };
    const measured = (await call(MEASURE)) as Omit<BrowserShape, 'pointsAt'> | null; // what MEASURE returns
    if (measured === null) continue;
    shapes.push({
      ...measured,
      toScreen: isCopy ? await screenMatrixOfCopy(session, nodeId, call) : measured.toScreen,
      // POINTS returns pairs.
      pointsAt: async (shares) => (await call(POINTS, shares)) as [number, number][],
    });
  }
  return shapes;
}

/**
 * getScreenCTM leaves out the x, y and viewBox of the `use` round a copy. The quadrilateral that the copy's box becomes on
 * the screen does not. For that every path is made a square for a moment, because the box of a straight line has no area,
 * and strokes are taken away, because the browser counts them into the quadrilateral.
 */
async function screenMatrixOfCopy(
  session: CDPSession,
  nodeId: number,
  call: (body: string) => Promise<unknown>,
): Promise<BrowserShape['toScreen']> {
  const box = (await call(BOX_OF_SQUARE)) as { x: number; y: number; width: number; height: number }; // what it returns
  const { quads } = await session.send('DOM.getContentQuads', { nodeId });
  await call('function () { document.adoptedStyleSheets = []; }');
  const [x0, y0, x1, y1, , , x3, y3] = quads[0];
  const [a, b] = [(x1 - x0) / box.width, (y1 - y0) / box.width];
  const [c, d] = [(x3 - x0) / box.height, (y3 - y0) / box.height];
  return [a, b, c, d, x0 - a * box.x - c * box.y, y0 - b * box.x - d * box.y];
}

const BOX_OF_SQUARE = `function () {
  const sheet = new CSSStyleSheet();
  sheet.replaceSync('* { stroke: none !important } path { d: path("M0 0H100V100H0z") !important }');
  document.adoptedStyleSheets = [sheet];
  const { x, y, width, height } = this.getBBox();
  return { x, y, width, height };
}`;

/** The part of the protocol's DOM.Node that is used. */
interface Node {
  readonly nodeId: number;
  readonly localName: string;
  readonly children?: readonly Node[];
  readonly shadowRoots?: readonly Node[];
}

const SHAPES: ReadonlySet<string> = new Set('path line polyline polygon rect circle ellipse'.split(' '));

const NEVER_DRAWN: ReadonlySet<string> = new Set(
  'defs symbol clipPath mask pattern marker linearGradient radialGradient filter title desc metadata style'.split(
    ' ',
  ),
);

/** `place`: a copy is in the shadow tree of a `use`; its root may be a symbol. */
function* drawnNodes(
  node: Node,
  place: 'drawn' | 'root of a copy' | 'copy' = 'drawn',
): Generator<{ readonly nodeId: number; readonly isCopy: boolean }> {
  if (SHAPES.has(node.localName)) yield { nodeId: node.nodeId, isCopy: place !== 'drawn' };
  for (const shadow of node.shadowRoots ?? []) {
    for (const child of shadow.children ?? []) yield* drawnNodes(child, 'root of a copy');
  }
  if (NEVER_DRAWN.has(node.localName) && !(place === 'root of a copy' && node.localName === 'symbol')) return;
  for (const child of node.children ?? []) yield* drawnNodes(child, place === 'drawn' ? 'drawn' : 'copy');
}

/**
 * The browser measures circles, ellipses and round corners as a few chords when they are only some units large, so those
 * are measured on a copy enlarged to 10⁵ units.
 */
const ENLARGED = `
  const enlarged = (el) => {
    const round = el.localName === 'circle' || el.localName === 'ellipse';
    if (!round && el.localName !== 'rect') return { shape: el, k: 1 };
    const box = el.getBBox();
    const style = getComputedStyle(el);
    const k = 1e5 / Math.max(box.width, box.height);
    const copy = document.createElementNS('http://www.w3.org/2000/svg', round ? 'ellipse' : 'rect');
    const set = (values) => Object.entries(values).forEach(([name, value]) => copy.setAttribute(name, value * k));
    if (round) set({ cx: box.x + box.width / 2, cy: box.y + box.height / 2, rx: box.width / 2, ry: box.height / 2 });
    else {
      set({ x: box.x, y: box.y, width: box.width, height: box.height });
      for (const name of ['rx', 'ry']) {
        const value = style[name];
        if (value !== 'auto') set({ [name]: value.endsWith('px') ? parseFloat(value) : el[name].baseVal.value });
      }
    }
    document.documentElement.append(copy);
    return { shape: copy, k, remove: () => copy.remove() };
  };`;

const MEASURE = `function () {
  ${ENLARGED}
  if (!this.checkVisibility({ visibilityProperty: true })) return null;
  for (let up = this; up instanceof Element; up = up.parentNode instanceof ShadowRoot ? up.parentNode.host : up.parentNode)
    if (getComputedStyle(up).display === 'none') return null;
  const style = getComputedStyle(this);
  const m = this.getScreenCTM();
  if (m === null || m.a * m.d - m.b * m.c === 0) return null;
  for (let up = this.viewportElement; up; up = up.viewportElement) {
    if (up.localName !== 'svg') continue;
    const box = up.viewBox.animVal;
    const isEmpty = up.hasAttribute('viewBox') && (box === null || box.width === 0 || box.height === 0);
    if (isEmpty || up.width.animVal.value === 0 || up.height.animVal.value === 0) return null;
  }
  if (!(this.getTotalLength() > 0)) return null;
  const own = this.getBBox();
  const isBox = ['circle', 'ellipse', 'rect'].includes(this.localName);
  if (isBox && (own.width === 0 || own.height === 0)) return null;
  const { shape, k, remove } = enlarged(this);
  const length = shape.getTotalLength() / k;
  remove?.();
  const inked = (paint) => {
    const color = style[paint];
    if (color === 'none' || Number(style[paint + 'Opacity']) === 0) return false;
    return !/^rgba\\(.*, 0\\)$/.test(color);
  };
  const nonScaling = style.vectorEffect === 'non-scaling-stroke';
  const probed = () => {
    const at = (share) => this.getPointAtLength(share * this.getTotalLength());
    const p = at(0.25), q = at(0.2501);
    const d = Math.hypot(q.x - p.x, q.y - p.y);
    const [nx, ny] = [-(q.y - p.y) / d, (q.x - p.x) / d];
    const isInked = (half) => this.isPointInStroke(new DOMPoint(p.x + nx * half, p.y + ny * half));
    let outside = 1e-3;
    while (isInked(outside)) outside *= 1.1;
    let inside = 0;
    for (let i = 0; i < 40; i++) {
      const half = (inside + outside) / 2;
      if (isInked(half)) inside = half;
      else outside = half;
    }
    return 2 * inside;
  };
  const computed = style.strokeWidth;
  const strokeWidth = computed.endsWith('px') && !nonScaling ? parseFloat(computed) : inked('stroke') ? probed() : 0;
  return {
    tag: this.localName,
    id: this.getAttribute('id'),
    length,
    toScreen: [m.a, m.b, m.c, m.d, m.e, m.f],
    stroked: inked('stroke') && strokeWidth > 0,
    filled: inked('fill'),
    strokeWidth,
    nonScaling,
  };
}`;

const POINTS = `function (shares) {
  ${ENLARGED}
  const { shape, k, remove } = enlarged(this);
  const length = shape.getTotalLength();
  const points = shares.map((share) => {
    const { x, y } = shape.getPointAtLength(share * length);
    return [x / k, y / k];
  });
  remove?.();
  return points;
}`;
