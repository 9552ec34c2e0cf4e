/**
 * Student's law with any real number of degrees of freedom, location 0 and scale 1: both tails and the density. In, the
 * degrees of freedom and a place as double-doubles; out, doubles of relative error about 1e-15.
 *
 * Method: P(|T| > t) = I_x(ν/2, 1/2) with x = ν/(ν + t²) (A&S 26.7.1), x and 1 − x both formed in double-double; beyond
 * t = 1e100 its leading term alone, taken by logarithms, since t² would overflow.
 */
import * as dd from "./double-double.ts";
import { betaTailsOf } from "./incomplete-beta.ts";
import { medianAtZero, type StandardLaw, type Tails } from "./law.ts";
import { logBeta } from "./log-gamma.ts";

type DoubleDouble = dd.DoubleDouble;

const FAR = 1e100;

/** The standard law with these degrees of freedom, above 0. */
export function standardStudent(degrees: DoubleDouble): StandardLaw {
  const half = dd.pair(0.5);
  const a = dd.scale(degrees, 0.5);
  const logB = logBeta(a, half);
  const twoSided = betaTailsOf(half, a);

  /** ln ν − 2 ln t: the logarithm of x where 1 is lost beside t²/ν. */
  const farLog = (t: DoubleDouble) => dd.subtract(dd.log(degrees), dd.scale(dd.log(t), 2));

  /** P(T > t) and P(0 < T < t) for t ≥ 0. */
  function halves(t: DoubleDouble): { readonly outside: number; readonly inside: number } {
    if (t.high === Number.POSITIVE_INFINITY) return { outside: 0, inside: 0.5 };
    if (t.high > FAR) {
      const outside = dd.expToNumber(dd.subtract(dd.multiply(a, farLog(t)), logB)) / degrees.high;
      return { outside, inside: 0.5 - outside };
    }
    const ratio = dd.divide(dd.multiply(t, t), degrees);
    const whole = dd.add(dd.pair(1), ratio);
    const { lower, upper } = twoSided(dd.divide(ratio, whole), dd.divide(dd.pair(1), whole));
    return { outside: 0.5 * upper, inside: 0.5 * lower };
  }

  function tails(at: DoubleDouble): Tails {
    const { outside, inside } = halves(at.high < 0 ? dd.negate(at) : at);
    return at.high < 0
      ? { at, below: outside, above: 0.5 + inside }
      : { at, below: 0.5 + inside, above: outside };
  }

  function density(at: DoubleDouble): number {
    const far = Math.abs(at.high) > FAR;
    const logWhole = far
      ? dd.negate(farLog(at.high < 0 ? dd.negate(at) : at))
      : dd.log(dd.add(dd.pair(1), dd.divide(dd.multiply(at, at), degrees)));
    const exponent = dd.multiply(dd.add(a, half), logWhole);
    return dd.expToNumber(dd.negate(dd.add(exponent, logB))) / Math.sqrt(degrees.high);
  }

  // (1 + t²/ν) vanishes at t = ±i√ν: few degrees of freedom make a sharp middle.
  const core = Math.min(1, Math.sqrt(degrees.high));
  return { support: "line", exactQuantile: medianAtZero, core, tails, density };
}
