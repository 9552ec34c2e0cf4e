/**
 * Laws on the positive numbers that are neither elementary nor noncentral: gamma (and with it chi-square) in standard
 * form, and lognormal. In, parameters; out, laws whose tails have relative error about 1e-15 from 1e-300 upward.
 */
import type { Quantity } from "../policy.ts";
import * as dd from "./double-double.ts";
import { gammaTailsOf } from "./incomplete-gamma.ts";
import { betweenByDensity, type ContinuousLaw, type StandardLaw } from "./law.ts";
import { STANDARD_NORMAL } from "./normal.ts";
import { add, doubleDoubleOf, exact, fromDouble, multiply, toDouble } from "./quantity.ts";

type DoubleDouble = dd.DoubleDouble;

/** Density x^(shape−1) e^(−x) / Γ(shape). */
export function standardGamma(shape: DoubleDouble): StandardLaw {
  const tailsOf = gammaTailsOf(shape);
  return {
    support: "positive",
    tails: (at) => {
      const { lower, upper } = tailsOf(at);
      return { at, below: lower, above: upper };
    },
    density: (at) => tailsOf(at).density,
  };
}

/** e^q; the radius covers that of q and the rounding of the exponential. */
function exponential(q: Quantity): Quantity {
  if (q.radius === 0 && q.value.n === 0n) return exact(1n);
  const exponent = toDouble(q);
  const value = Math.exp(exponent);
  return fromDouble(value, value * (Math.expm1(q.radius) + (2 + Math.abs(exponent)) * 2 ** -52));
}

/** The law of a value whose logarithm is normal with this mean and standard deviation. */
export function lognormalLaw(logMean: Quantity, logSd: Quantity): ContinuousLaw {
  const mean = doubleDoubleOf(logMean.value);
  const sd = doubleDoubleOf(logSd.value);
  return {
    kind: "continuous",
    standard: STANDARD_NORMAL,
    place: (cut) => {
      const x = doubleDoubleOf(cut);
      if (!(x.high > 0)) return dd.pair(Number.NEGATIVE_INFINITY);
      if (x.high === Number.POSITIVE_INFINITY) return dd.pair(x.high);
      return dd.divide(dd.subtract(dd.log(x), mean), sd);
    },
    tails: (at) => (Number.isFinite(at.high) ? STANDARD_NORMAL.tails(at) : endTails(at)),
    between: (a, b) => {
      if (!Number.isFinite(a.at.high)) return a.at.high < 0 ? b.below : 0;
      return Number.isFinite(b.at.high) ? betweenByDensity(STANDARD_NORMAL, a, b) : a.above;
    },
    original: (z) => exponential(add(logMean, multiply(logSd, z))),
  };
}

function endTails(at: DoubleDouble) {
  return at.high < 0 ? { at, below: 0, above: 1 } : { at, below: 1, above: 0 };
}
