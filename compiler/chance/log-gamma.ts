/**
 * The logarithm of the gamma function, to about 30 digits: in, a positive number as a double-double; out, the same. The
 * exponents of gamma, beta, Poisson and binomial laws are differences of such values, large where their parameters are,
 * and must be right absolutely.
 *
 * Method: the argument is moved to 32 or more by Γ(z+1) = zΓ(z), one product and one logarithm; there Stirling's series
 * (Abramowitz & Stegun 6.1.41) with 12 terms is off by less than its first omitted term, 4e-33. About 3 µs.
 */
import * as dd from "./double-double.ts";

type DoubleDouble = dd.DoubleDouble;

const HALF_LN_TWO_PI: DoubleDouble = { high: 0.9189385332046728, low: -3.8782941580672414e-17 };
const SHIFTED_TO = 32;

/** B(2k) / (2k(2k − 1)) for k = 1 … 12: B the Bernoulli numbers. */
const STIRLING: readonly DoubleDouble[] = [
  [1, 12],
  [-1, 360],
  [1, 1260],
  [-1, 1680],
  [1, 1188],
  [-691, 360360],
  [1, 156],
  [-3617, 122400],
  [43867, 244188],
  [-174611, 125400],
  [77683, 5796],
  [-236364091, 1506960],
].map(([n = 0, d = 1]) => dd.divide(dd.pair(n), dd.pair(d)));

/** The sum of Stirling's correction terms at z ≥ 32. */
function stirlingCorrection(z: DoubleDouble): DoubleDouble {
  const inverse = dd.divide(dd.pair(1), z);
  const square = dd.multiply(inverse, inverse);
  let sum = dd.pair(0);
  for (const term of STIRLING.toReversed()) sum = dd.add(dd.multiply(sum, square), term);
  return dd.multiply(sum, inverse);
}

/** ln Γ(z) for z > 0 (normal doubles, up to 1e15); absolute error about 1e-30 times max(1, |ln Γ(z)|). */
export function logGamma(z: DoubleDouble): DoubleDouble {
  let shifted = z;
  let factor: DoubleDouble | null = null;
  while (shifted.high < SHIFTED_TO) {
    factor = factor === null ? shifted : dd.multiply(factor, shifted);
    shifted = dd.add(shifted, dd.pair(1));
  }
  const leading = dd.multiply(dd.subtract(shifted, dd.pair(0.5)), dd.log(shifted));
  const series = dd.add(dd.add(HALF_LN_TWO_PI, dd.subtract(leading, shifted)), stirlingCorrection(shifted));
  return factor === null ? series : dd.subtract(series, dd.log(factor));
}

/** ln B(a, b) = ln Γ(a) + ln Γ(b) − ln Γ(a + b) for a, b > 0; absolute error as `logGamma` of the largest part. */
export function logBeta(a: DoubleDouble, b: DoubleDouble): DoubleDouble {
  return dd.subtract(dd.add(logGamma(a), logGamma(b)), logGamma(dd.add(a, b)));
}
