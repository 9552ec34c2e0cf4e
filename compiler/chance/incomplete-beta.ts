/**
 * The two tails of the beta law, each with its own relative accuracy: in, the two parameters and a place x with its
 * complement y = 1 − x, all double-doubles (so that neither end of the interval loses digits); out, P(X ≤ x) = I_x(a, b)
 * and P(X > x) = I_y(b, a). Serves Student, binomial and negative binomial laws.
 *
 * Method: the factor x^a y^b / B(a, b) as the exponential of a double-double, times the continued fraction of Didonato &
 * Morris (1992), "Algorithm 708: significant digit computation of the incomplete beta function ratios", ACM TOMS 18:360,
 * formula (9) (the even contraction of A&S 26.5.8), which takes x near the mean only as a·y − b·x. It is summed from the
 * far end inward. The fraction converges on the whole interval: the smaller tail is computed, and the other one too where
 * its complement would lose digits. Steps: about √(a + b) near the mean, and at most about 10/√y.
 */
import * as dd from "./double-double.ts";
import { logBeta } from "./log-gamma.ts";

type DoubleDouble = dd.DoubleDouble;

export type BetaTails = { readonly lower: number; readonly upper: number };

const NEGLIGIBLE = 2 ** -55;
/** A step this small is within the roundings of one step; an eighth more of them takes the rest below one rounding. */
const SETTLED = 2 ** -51;
const MOST_STEPS = 50_000_000;
/** Below this a complement is computed afresh: one minus the other tail would lose a digit. */
const COMPUTE_BELOW = 0.1;

/** The parameters of one fraction: tilt is a·y − b·x. */
type Fraction = { readonly a: number; readonly b: number; readonly x: number; readonly tilt: number };

/** The n-th partial numerator, n ≥ 1. */
function numerator({ a, b, x }: Fraction, n: number): number {
  const scale = a + 2 * n - 1;
  return ((((a + n - 1) / scale) * (a + b + n - 1)) / scale) * n * (b - n) * x * x;
}

/** The n-th partial denominator, n ≥ 0. */
function denominator({ a, b, x, tilt }: Fraction, n: number): number {
  const second = n === 0 ? 0 : (n * (b - n) * x) / (a + 2 * n - 1);
  return n + second + ((a + n) * (tilt + 1 + n * (2 - x))) / (a + 2 * n + 1);
}

/** How many steps of the fraction count, by Lentz's method, and some more. */
function stepsOf(fraction: Fraction): number {
  let c = Number.POSITIVE_INFINITY;
  let d = 1 / denominator(fraction, 0);
  for (let n = 1; n < MOST_STEPS; n++) {
    const top = numerator(fraction, n);
    const bottom = denominator(fraction, n);
    d = 1 / (bottom + top * d);
    c = bottom + top / c;
    if (Math.abs(c * d - 1) < SETTLED) return n + Math.ceil(n / 8) + 2;
  }
  return MOST_STEPS;
}

/** I_x(a, b) divided by x^a (1−x)^b / B(a, b); tilt = a·(1−x) − b·x to full accuracy. */
function betaFraction(a: number, b: number, x: number, tilt: number): number {
  const fraction = { a, b, x, tilt };
  let value = 0;
  for (let n = stepsOf(fraction); n >= 1; n--)
    value = numerator(fraction, n) / (denominator(fraction, n) + value);
  return 1 / (denominator(fraction, 0) + value);
}

/** Whether I_x(a, b) comes near 1 while the series of `complementNearZero` still converges without cancelling. */
function isNearOne(a: number, b: number, x: number): boolean {
  return a < 1 && Math.max(1, b) * x <= 0.7;
}

/**
 * 1 − I_x(a, b) where x and b·x are at most 0.7 and I_x is near 1, that is where a is small: with
 * I_x = (x^a / (a B(a, b)))·(1 + a·Σ (1−b)_n x^n / (n! (a + n))), A&S 26.5.4, one minus the factor by expm1.
 */
function complementNearZero(
  a: DoubleDouble,
  b: DoubleDouble,
  x: DoubleDouble,
  logFactor: DoubleDouble,
): number {
  const power = dd.subtract(dd.multiply(a, dd.log(x)), dd.add(logFactor, dd.log(a)));
  const factor = dd.expToNumber(power);
  let coefficient = 1;
  let sum = 0;
  for (let n = 1; Math.abs(coefficient) > NEGLIGIBLE * Math.abs(sum); n++) {
    coefficient *= ((n - b.high) / n) * x.high;
    sum += coefficient / (a.high + n);
  }
  return -(Math.expm1(power.high) + factor * power.low) - factor * a.high * sum;
}

/** The tails of the beta law with parameters a, b > 0, as a function of the place x and y = 1 − x; B(a, b) is taken once. */
export function betaTailsOf(
  a: DoubleDouble,
  b: DoubleDouble,
): (x: DoubleDouble, y: DoubleDouble) => BetaTails {
  const logFactor = logBeta(a, b);
  return (x, y) => {
    if (!(x.high > 0)) return { lower: 0, upper: 1 };
    if (!(y.high > 0)) return { lower: 1, upper: 0 };
    const logs = dd.add(dd.multiply(a, dd.log(x)), dd.multiply(b, dd.log(y)));
    const factor = dd.expToNumber(dd.subtract(logs, logFactor));
    const tilt = dd.toNumber(dd.subtract(dd.multiply(a, y), dd.multiply(b, x)));
    const lowerTail = () =>
      isNearOne(b.high, a.high, y.high)
        ? complementNearZero(b, a, y, logFactor)
        : factor * betaFraction(a.high, b.high, x.high, tilt);
    const upperTail = () =>
      isNearOne(a.high, b.high, x.high)
        ? complementNearZero(a, b, x, logFactor)
        : factor * betaFraction(b.high, a.high, y.high, -tilt);
    if (tilt >= 0) {
      const lower = lowerTail();
      return { lower, upper: 1 - lower < COMPUTE_BELOW ? upperTail() : 1 - lower };
    }
    const upper = upperTail();
    return { lower: 1 - upper < COMPUTE_BELOW ? lowerTail() : 1 - upper, upper };
  };
}
