import { describe, expect, it } from 'vitest';
import { NEAR_VACUUM_PA } from '../../src/asked/near-vacuum.ts';
import { minWallM, resolveLeastWall, resolveLimits } from '../../src/chip/limits.ts';
import { CURVED_FLOW_DEAN } from '../../src/physics/dean.ts';
import { meanRoofRise } from '../../src/physics/roof.ts';
import { isotropicSection } from '../../src/physics/section.ts';
import { parseRunSheet } from '../../src/runsheet/parse.ts';

describe('roof rise', () => {
  // Computed: the roof of a shallow slit in a thick body is one face of a pressurised crack. Its opening δ solves
  // p = (E′/4π) ⨍ δ′(t)/(x − t) dt, E′ = E/(1 − ν²) (I. N. Sneddon, Proc. R. Soc. A 187 (1946) 229, from memory), here by
  // Gauss–Chebyshev collocation (F. Erdogan & G. D. Gupta, Q. Appl. Math. 29 (1972) 525, from memory).
  it('is the mean opening of one face of a pressurised slit in an incompressible body, to 2 %', () => {
    const solved = meanCrackFaceRise(10e3, 1e-3, 1.5e6);
    expect(meanRoofRise(10e3, 1e-3, 1.5e6) / solved).toBeGreaterThan(1);
    expect(meanRoofRise(10e3, 1e-3, 1.5e6) / solved).toBeLessThan(1.02);
  });

  it('agrees in its constant with 3π/16 of the closed form, of which 0.6 is the round figure', () => {
    // Griffith's ellipse: one face 2(1 − ν²)(p/E)√(w²/4 − x²), ν = ½; mean π/4 of the middle.
    expect(meanCrackFaceRise(1, 1, 1)).toBeCloseTo((3 * Math.PI) / 16, 10);
  });
});

describe('usual limits that have a source', () => {
  it('lets soft elastomer stand up to twice as high as wide', () => {
    // E. Delamarche et al., Adv. Mater. 9 (1997) 741: usable for height/width from 0.2 to 2 (figures seen, sense from memory).
    expect(limitsOf('cast elastomer').maxDepthToWidth?.value).toBe(2);
  });

  it('holds etched glass to the aspect ratio that an isotropic etch cannot pass', () => {
    // Computed: the etch undercuts by its depth on both sides, so depth/top width tends to ½ as the mask closes.
    const depthM = 50e-6;
    expect(depthM / isotropicSection(1e-12, depthM).stripWidthM).toBeCloseTo(0.5, 6);
    expect(limitsOf('etched glass').maxDepthToWidth?.value).toBe(0.5);
  });

  it('leaves 50 µm of glass between two masks after both have been undercut', () => {
    // Common practice, no source: width at the top = mask width + 2 × depth.
    const depthM = 30e-6;
    const mask = isotropicSection(100e-6, depthM);
    const undercutM = mask.stripWidthM - 100e-6;
    const leastWall = resolveLeastWall(sheetOf('etched glass'));
    expect((minWallM({ leastWall }, depthM)?.value ?? 0) - undercutM).toBeCloseTo(50e-6, 12);
  });

  it('says of every usual limit that it has no source', () => {
    expect(limitsOf('cast elastomer').minWidthM?.origin).toBe('typical value, not from your maker');
    expect(limitsOf('cast elastomer').maxPressurePa).toEqual({
      value: 100e3,
      origin: 'typical value, not from your maker',
    });
  });
});

describe('limits of the flow itself', () => {
  it('calls flow curved from the Dean number at which friction in a coil begins to rise', () => {
    // C. M. White, Proc. R. Soc. A 123 (1929) 645 (constants seen): friction over that of a straight tube.
    const friction = (dean: number): number =>
      1 / (1 - (1 - (CURVED_FLOW_DEAN / dean) ** 0.45) ** (1 / 0.45));
    expect(CURVED_FLOW_DEAN).toBe(11.6);
    expect(friction(CURVED_FLOW_DEAN)).toBe(1);
    expect(friction(15)).toBeCloseTo(1.007348042, 8);
    expect(friction(50)).toBeCloseTo(1.245935755, 8);
  });

  it('calls a pressure near vacuum where water at body temperature boils', () => {
    // W. Wagner & A. Pruß, J. Phys. Chem. Ref. Data 22 (1993) 783, saturation pressure (from memory; 25 °C agrees with the
    // tabulated 3.1697 kPa).
    expect(vapourPressurePa(298.15)).toBeCloseTo(3169.7, 0);
    expect(NEAR_VACUUM_PA).toBeCloseTo(vapourPressurePa(310.15) - 101_325, -2);
  });
});

function limitsOf(process: string) {
  return resolveLimits(sheetOf(process));
}

function sheetOf(process: string) {
  return parseRunSheet(`process: ${process}\n`, 'limits.run.yaml');
}

function vapourPressurePa(temperatureK: number): number {
  const t = 1 - temperatureK / 647.096;
  const sum =
    -7.85951783 * t +
    1.84408259 * t ** 1.5 -
    11.7866497 * t ** 3 +
    22.6807411 * t ** 3.5 -
    15.9618719 * t ** 4 +
    1.80122502 * t ** 7.5;
  return 22.064e6 * Math.exp((647.096 / temperatureK) * sum);
}

/** Half the mean of the opening δ over the slit |x| < a, for ν = ½. With δ′ = φ/√(a² − t²): mean δ = −(1/2a) ∫ t δ′ dt. */
function meanCrackFaceRise(pressurePa: number, widthM: number, stiffnessPa: number): number {
  const n = 24;
  const a = widthM / 2;
  const right = (4 * pressurePa * (1 - 0.25)) / stiffnessPa;
  const t = Array.from({ length: n }, (_, i) => Math.cos((Math.PI * (2 * i + 1)) / (2 * n)));
  const rows = Array.from({ length: n - 1 }, (_, k) => {
    const x = Math.cos((Math.PI * (k + 1)) / n);
    return [...t.map((ti) => 1 / (n * (x - ti))), right];
  });
  rows.push([...t.map(() => 1), 0]);
  const phi = solved(rows);
  const momentIntegral = (Math.PI / n) * phi.reduce((sum, value, i) => sum + value * t[i], 0);
  return (-momentIntegral * a) / 2 / 2;
}

/** Gaussian elimination with row exchange on an augmented matrix. */
function solved(rows: number[][]): number[] {
  const n = rows.length;
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(rows[i][k]) > Math.abs(rows[pivot][k])) pivot = i;
    [rows[k], rows[pivot]] = [rows[pivot], rows[k]];
    for (let i = k + 1; i < n; i++) {
      const factor = rows[i][k] / rows[k][k];
      for (let j = k; j <= n; j++) rows[i][j] -= factor * rows[k][j];
    }
  }
  const x = new Array<number>(n).fill(0);
  for (let i = n - 1; i >= 0; i--) {
    let rest = rows[i][n];
    for (let j = i + 1; j < n; j++) rest -= rows[i][j] * x[j];
    x[i] = rest / rows[i][i];
  }
  return x;
}
