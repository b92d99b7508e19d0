/**
 * The duct series in 60-digit whole-number arithmetic, summed as printed in the literature: Σ tanh directly, without the
 * closed limits that src uses, 2000 terms and an Euler–Maclaurin (Boole for the alternating sum) tail. Good to 20 digits.
 */
const DIGITS = 60;
const ONE = 10n ** BigInt(DIGITS);
const TERMS = 2000;

export interface ExactDuct {
  /** F of R = 12 µL/(l s³ F). */
  readonly flow: number;
  /** u_max/u_mean. */
  readonly peakOverMean: number;
  /** Shear over G s. */
  readonly longMean: number;
  readonly longPeak: number;
  readonly shortMean: number;
  readonly shortPeak: number;
}

/** Exact factors of a duct with l/s = aspect ≥ 1, each rounded once. */
export function exactDuct(aspect: number): ExactDuct {
  const pi = machinPi();
  const r = fromDouble(aspect);
  const x1 = mul(pi, r) / 2n;
  const q1 = expMinus(x1); // e^(−πr/2)
  const q1Squared = mul(q1, q1);
  let power = q1; // q1ⁿ
  let tanh5 = 0n;
  let tanh3 = 0n;
  let tanh2 = 0n;
  let sech3 = 0n;
  let sech2 = 0n;
  for (let i = 0; i < TERMS; i++) {
    const n = BigInt(2 * i + 1);
    const sign = i % 2 === 0 ? 1n : -1n;
    const square = mul(power, power);
    const tanh = div(ONE - square, ONE + square);
    const sech = div(2n * power, ONE + square);
    tanh5 += tanh / n ** 5n;
    tanh3 += tanh / n ** 3n;
    tanh2 += (sign * tanh) / n ** 2n;
    sech3 += (sign * sech) / n ** 3n;
    sech2 += sech / n ** 2n;
    power = mul(power, q1Squared);
  }
  // Beyond N = 4000 every tanh is 1 to 60 digits. Σ f(n) = ½(∫f + f′/6 − 7 f‴/360 …), alternating: ½(f − f″/2 …).
  const N = BigInt(2 * TERMS);
  tanh5 += (ONE / (4n * N ** 4n) - (5n * ONE) / (6n * N ** 6n)) / 2n;
  tanh3 += (ONE / (2n * N ** 2n) - (3n * ONE) / (6n * N ** 4n) + (7n * 60n * ONE) / (360n * N ** 6n)) / 2n;
  const tailSign = TERMS % 2 === 0 ? 1n : -1n;
  tanh2 += (tailSign * (ONE / N ** 2n - (3n * ONE) / N ** 4n)) / 2n;

  const pi2 = mul(pi, pi);
  const pi3 = mul(pi2, pi);
  const pi5 = mul(pi3, pi2);
  const flow = ONE - div(div(192n * tanh5, pi5), r);
  const velocity = ONE - div(32n * sech3, pi3);
  return {
    flow: toDouble(flow),
    peakOverMean: toDouble(div((3n * velocity) / 2n, flow)),
    longMean: toDouble((ONE - div(div(16n * tanh3, pi3), r)) / 2n),
    longPeak: toDouble((ONE - div(8n * sech2, pi2)) / 2n),
    shortMean: toDouble(div(8n * tanh3, pi3)),
    shortPeak: toDouble(div(4n * tanh2, pi2)),
  };
}

/**
 * Shear over G s at a fraction of the way from the corner to the middle of the long wall (60 digits, but a plain sum of
 * `terms` terms: the error is about 1/(4 terms²) at most and falls exponentially away from the corner).
 */
export function exactLongWallShear(aspect: number, fraction: number, terms: number): number {
  const pi = machinPi();
  const t = mul(mul(pi, fromDouble(aspect)), fromDouble(fraction)) / 2n;
  const period = mul(pi, fromDouble(aspect));
  const near = expMinus(t);
  const far = expMinus(period - t);
  const whole = expMinus(period);
  let nearN = near;
  let farN = far;
  let wholeN = whole;
  const step = (value: bigint, by: bigint) => mul(value, mul(by, by));
  let sum = 0n; // Σ cosh ratio/n²
  for (let i = 0; i < terms; i++) {
    const n = BigInt(2 * i + 1);
    sum += div(nearN + farN, ONE + wholeN) / n ** 2n;
    nearN = step(nearN, near);
    farN = step(farN, far);
    wholeN = step(wholeN, whole);
  }
  const pi2 = mul(pi, pi);
  return toDouble(div(4n * (pi2 / 8n - sum), pi2));
}

const mul = (a: bigint, b: bigint) => (a * b) / ONE;
const div = (a: bigint, b: bigint) => (a * ONE) / b;

function fromDouble(value: number): bigint {
  // Exact: a double is a whole number times a power of two.
  let scaled = value;
  let shift = 0n;
  while (!Number.isInteger(scaled)) {
    scaled *= 2;
    shift++;
  }
  return (BigInt(scaled) * ONE) >> shift;
}

function toDouble(value: bigint): number {
  const negative = value < 0n;
  const digits = (negative ? -value : value).toString().padStart(DIGITS + 1, '0');
  const text = `${digits.slice(0, -DIGITS)}.${digits.slice(-DIGITS)}`;
  return negative ? -Number(text) : Number(text);
}

/** π = 16 arctan(1/5) − 4 arctan(1/239). */
function machinPi(): bigint {
  return 16n * arctanInverse(5n) - 4n * arctanInverse(239n);
}

function arctanInverse(m: bigint): bigint {
  let sum = 0n;
  let power = ONE / m;
  for (let k = 0n; power !== 0n; k++) {
    sum += (k % 2n === 0n ? power : -power) / (2n * k + 1n);
    power /= m * m;
  }
  return sum;
}

function expMinus(x: bigint): bigint {
  if (x > 150n * ONE) return 0n; // below 1e-65
  const halvings = 10n;
  const small = x >> halvings;
  let sum = ONE;
  let term = ONE;
  for (let k = 1n; term !== 0n; k++) {
    term = -mul(term, small) / k;
    sum += term;
  }
  for (let i = 0n; i < halvings; i++) sum = mul(sum, sum);
  return sum;
}
