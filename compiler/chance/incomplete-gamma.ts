/**
 * The two tails of the gamma law of scale 1, each with its own relative accuracy: in, the shape and a place as
 * double-doubles; out, P(X ≤ x), P(X > x) and the density. Serves gamma, chi-square and Poisson laws.
 *
 * Method: the common factor x^a e^(−x) / Γ(a) is the exponential of a double-double, so that its relative error is one
 * last place at any size. Below the median the ascending series, above it the continued fraction (Abramowitz & Stegun
 * 6.5.29, and 6.5.31 in its even contraction, which takes x only as x − a), both summed from the far end inward, where
 * rounding errors shrink. Shapes below 1 near 0: the upper tail by its own series (A&S 6.5.29 less its first term).
 * Relative error of either tail, measured against 25 digits: below 1e-15 (test/chance/special-functions.test.ts). Terms: about
 * 10√a near the mean, fewer elsewhere.
 */
import * as dd from "./double-double.ts";
import { logGamma } from "./log-gamma.ts";

type DoubleDouble = dd.DoubleDouble;

/** Both tails at a place, and the density there (per unit of the variable). */
export type GammaTails = { readonly lower: number; readonly upper: number; readonly density: number };

const NEGLIGIBLE = 2 ** -56;
/** A step this small is within the roundings of one step; an eighth more of them takes the rest below one rounding. */
const SETTLED = 2 ** -51;
const MOST_TERMS = 50_000_000;

/** 1 + x/(a+1)·(1 + x/(a+2)·(1 + …)), for x below a + 1 or so: the lower tail divided by its first term. */
export function lowerSeries(a: number, x: number): number {
  let terms = 1;
  let term = x / (a + 1);
  let total = 1 + term;
  while (term > NEGLIGIBLE * total && terms < MOST_TERMS) {
    terms++;
    term *= x / (a + terms);
    total += term;
  }
  let result = 1;
  for (let n = terms; n >= 1; n--) result = 1 + (x / (a + n)) * result;
  return result;
}

/** How many steps of the fraction of `upperFraction` count, by Lentz's method (Thompson & Barnett 1986), and some more. */
function stepsOfFraction(a: number, excess: number): number {
  let c = Number.POSITIVE_INFINITY;
  let d = 1 / (excess + 1);
  for (let n = 1; n < MOST_TERMS; n++) {
    const numerator = n * (a - n);
    const constant = excess + 2 * n + 1;
    d = 1 / (constant + numerator * d);
    c = constant + numerator / c;
    if (Math.abs(c * d - 1) < SETTLED) return n + Math.ceil(n / 8) + 2;
  }
  return MOST_TERMS;
}

/** The upper tail divided by x^a e^(−x) / Γ(a), for x ≥ 1 and x ≥ a − 1/3, where excess = x − a. */
export function upperFraction(a: number, excess: number): number {
  let value = 0;
  for (let n = stepsOfFraction(a, excess); n >= 1; n--) {
    value = (n * (a - n)) / (excess + 2 * n + 1 + value);
  }
  return 1 / (excess + 1 + value);
}

/** The upper tail for a < 1 and x < 1: 1 − x^a/Γ(a+1)·(1 + aΣ), where power = a ln x − ln Γ(a+1), no digit lost. */
function upperNearZero(a: number, x: number, power: DoubleDouble): number {
  let sum = 0;
  for (let n = 20; n >= 1; n--) sum = (-x / n) * (1 / (a + n) + sum);
  const factor = dd.expToNumber(power);
  return -(Math.expm1(power.high) + factor * power.low) - factor * a * sum;
}

/** The tails of a gamma law of scale 1 and this shape > 0 as a function of the place; ln Γ(shape) is taken once. */
export function gammaTailsOf(shape: DoubleDouble): (x: DoubleDouble) => GammaTails {
  const a = shape.high;
  const logFactor = logGamma(shape);
  return (x) => {
    if (!(x.high > 0)) return { lower: 0, upper: 1, density: 0 };
    if (x.high === Number.POSITIVE_INFINITY) return { lower: 1, upper: 0, density: 0 };
    const exponent = dd.subtract(dd.subtract(dd.multiply(shape, dd.log(x)), x), logFactor);
    const factor = dd.expToNumber(exponent);
    const density = factor / x.high;
    if (x.high >= Math.max(1, a - 1 / 3)) {
      const upper = factor * upperFraction(a, dd.toNumber(dd.subtract(x, shape)));
      return { lower: 1 - upper, upper, density };
    }
    const series = lowerSeries(a, x.high);
    // The series at x.high, moved to x by its own derivative a/S − a + x (in ln x).
    const moved = series * (1 + (x.low / x.high) * (a / series - a + x.high));
    const lower = (factor / a) * moved;
    const near = a < 1 && lower > 0.5;
    const upper = near
      ? upperNearZero(a, x.high, dd.subtract(exponent, dd.subtract(dd.log(shape), x)))
      : 1 - lower;
    return { lower, upper, density };
  };
}
