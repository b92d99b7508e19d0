import type { Point } from './points.ts';

/** A similarity as SVG writes it: x′ = a x + c y + e, y′ = b x + d y + f. */
export interface Similarity {
  readonly a: number;
  readonly b: number;
  readonly c: number;
  readonly d: number;
  readonly e: number;
  readonly f: number;
}

export const IDENTITY: Similarity = { a: 1, b: 0, c: 0, d: 1, e: 0, f: 0 };

/** First `inner`, then `outer`. */
export function after(outer: Similarity, inner: Similarity): Similarity {
  return {
    a: outer.a * inner.a + outer.c * inner.b,
    b: outer.b * inner.a + outer.d * inner.b,
    c: outer.a * inner.c + outer.c * inner.d,
    d: outer.b * inner.c + outer.d * inner.d,
    e: outer.a * inner.e + outer.c * inner.f + outer.e,
    f: outer.b * inner.e + outer.d * inner.f + outer.f,
  };
}

export function inverse({ a, b, c, d, e, f }: Similarity): Similarity {
  const area = a * d - b * c;
  return {
    a: d / area,
    b: -b / area,
    c: -c / area,
    d: a / area,
    e: (c * f - d * e) / area,
    f: (b * e - a * f) / area,
  };
}

export const mapped = ({ a, b, c, d, e, f }: Similarity, { x, y }: Point): Point => ({
  x: a * x + c * y + e,
  y: b * x + d * y + f,
});

export const scaleOf = ({ a, b }: Similarity): number => Math.hypot(a, b);

export const isMirrored = ({ a, b, c, d }: Similarity): boolean => a * d - b * c < 0;
