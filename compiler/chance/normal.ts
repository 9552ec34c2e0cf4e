/**
 * The standard normal law: both tails and the density at a place. In, z as a double-double; out, doubles of relative error
 * below 1e-15 from 1e-300 upward.
 *
 * Method: Q(z) = erfc(z/√2)/2 with the complementary error function of @stdlib (after FreeBSD's s_erf.c, error below one
 * last place). What rounding z/√2 to a double leaves over is put back by the first term of Taylor's series.
 */
import erfc from "@stdlib/math-base-special-erfc";
import * as dd from "./double-double.ts";
import { medianAtZero, type StandardLaw, type Tails } from "./law.ts";

type DoubleDouble = dd.DoubleDouble;

const ROOT_HALF: DoubleDouble = { high: Math.SQRT1_2, low: -4.833646656726457e-17 };
const TWO_OVER_ROOT_PI = 2 / Math.sqrt(Math.PI);
const ROOT_TWO_PI_INVERSE = 1 / Math.sqrt(2 * Math.PI);

/** Beyond, tail and density are below the smallest double. */
const FAR = 40;

/** P(Z > z) for z ≥ 0. */
function upperTail(z: DoubleDouble): number {
  if (z.high > FAR) return 0;
  const y = dd.multiply(z, ROOT_HALF);
  const tail = 0.5 * erfc(y.high);
  // −d ln erfc(y)/dy: 2y from the asymptotic series where e^(−y²) nears the end of the doubles.
  const hazard = y.high > 20 ? 2 * y.high : (TWO_OVER_ROOT_PI * Math.exp(-y.high * y.high)) / (2 * tail);
  return tail * (1 - hazard * y.low);
}

/** The chances below and above z. */
function tails(at: DoubleDouble): Tails {
  if (at.high >= 0) {
    const above = upperTail(at);
    return { at, below: 1 - above, above };
  }
  const below = upperTail(dd.negate(at));
  return { at, below, above: 1 - below };
}

/** The normal density at z, the square of z taken to 32 digits. */
function density(at: DoubleDouble): number {
  if (Math.abs(at.high) > FAR) return 0;
  const square = dd.product(at.high, at.high);
  const rest = 0.5 * square.low + at.high * at.low;
  const top = ROOT_TWO_PI_INVERSE * Math.exp(-0.5 * square.high);
  return top - top * rest;
}

/** Mean 0, standard deviation 1. */
export const STANDARD_NORMAL: StandardLaw = { support: "line", exactQuantile: medianAtZero, tails, density };
