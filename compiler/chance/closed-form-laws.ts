/**
 * The laws whose tails are elementary: laplace, logistic, exponential, weibull and uniform in standard form. In, places
 * as double-doubles; out, doubles of relative error about two last places from 1e-300 upward, between two places too: the
 * difference is one expm1 of a difference of places, never a difference of tails.
 */
import * as dd from "./double-double.ts";
import { medianAtZero, type StandardLaw, type Tails } from "./law.ts";

type DoubleDouble = dd.DoubleDouble;

/** 1 − e^(−x), x ≥ 0. */
function lessThanOne(x: DoubleDouble): number {
  return -Math.expm1(-x.high) + Math.exp(-x.high) * x.low;
}

/** e^(−x). */
function decay(x: DoubleDouble): number {
  return dd.expToNumber(dd.negate(x));
}

/** A tail for the negative half by the mirror image of the positive one. */
function mirrored(at: DoubleDouble, upper: (x: DoubleDouble) => number): Tails {
  if (at.high >= 0) {
    const above = upper(at);
    return { at, below: 1 - above, above };
  }
  const below = upper(dd.negate(at));
  return { at, below, above: 1 - below };
}

/** Density e^(−|x|)/2. */
export const STANDARD_LAPLACE: StandardLaw = {
  support: "line",
  exactQuantile: medianAtZero,
  tails: (at) => mirrored(at, (x) => 0.5 * decay(x)),
  density: (at) => 0.5 * decay(at.high < 0 ? dd.negate(at) : at),
  between: (a, b) => {
    if (a.at.high < 0 && b.at.high > 0) return 0.5 * (lessThanOne(dd.negate(a.at)) + lessThanOne(b.at));
    const nearest = a.at.high >= 0 ? a.at : dd.negate(b.at);
    return 0.5 * decay(nearest) * lessThanOne(dd.subtract(b.at, a.at));
  },
};

/** P(X > x) = 1/(1 + e^x); standard deviation π/√3. */
export const STANDARD_LOGISTIC: StandardLaw = {
  support: "line",
  exactQuantile: medianAtZero,
  tails: (at) =>
    mirrored(at, (x) => {
      const e = decay(x);
      return e / (1 + e);
    }),
  density: (at) => {
    const e = decay(at.high < 0 ? dd.negate(at) : at);
    return e / ((1 + e) * (1 + e));
  },
  between: (a, b) => {
    const width = lessThanOne(dd.subtract(b.at, a.at));
    if (a.at.high > 0) {
      const e = decay(a.at);
      return ((e / (1 + e)) * width) / (1 + decay(b.at));
    }
    if (b.at.high < 0) {
      const e = decay(dd.negate(b.at));
      return ((e / (1 + e)) * width) / (1 + decay(dd.negate(a.at)));
    }
    return width / ((1 + decay(dd.negate(a.at))) * (1 + decay(b.at)));
  },
};

/** Mean 1. */
export const STANDARD_EXPONENTIAL: StandardLaw = {
  support: "positive",
  tails: (at) =>
    at.high > 0 ? { at, below: lessThanOne(at), above: decay(at) } : { at, below: 0, above: 1 },
  density: (at) => (at.high < 0 ? 0 : decay(at)),
  between: (a, b) => {
    if (!(b.at.high > 0)) return 0;
    return a.at.high > 0 ? a.above * lessThanOne(dd.subtract(b.at, a.at)) : b.below;
  },
};

/** P(X > x) = exp(−x^shape); scale 1. */
export function standardWeibull(shape: DoubleDouble): StandardLaw {
  /** x^shape, the place of the exponential law that x stands for. */
  const power = (x: DoubleDouble) => dd.exp(dd.multiply(shape, dd.log(x)));
  const { tails, between } = STANDARD_EXPONENTIAL;
  const asExponential = (at: DoubleDouble) => tails(at.high > 0 ? power(at) : dd.pair(0));
  return {
    support: "positive",
    tails: (at) => ({ ...asExponential(at), at }),
    density: (at) => {
      if (!(at.high > 0)) return 0;
      const t = power(at);
      return ((shape.high * t.high) / at.high) * decay(t);
    },
    between: (a, b) => between!(asExponential(a.at), asExponential(b.at)),
  };
}

/** From 0 to 1. */
export const STANDARD_UNIFORM: StandardLaw = {
  support: "positive",
  exactQuantile: (above) => above.neg().add(1n),
  tails: (at) => {
    const inside = clamped(at);
    return { at, below: dd.toNumber(inside), above: dd.toNumber(dd.subtract(dd.pair(1), inside)) };
  },
  density: (at) => (at.high >= 0 && at.high <= 1 ? 1 : 0),
  between: (a, b) => dd.toNumber(dd.subtract(clamped(b.at), clamped(a.at))),
};

function clamped(at: DoubleDouble): DoubleDouble {
  if (at.high > 1 || (at.high === 1 && at.low >= 0)) return dd.pair(1);
  return at.high < 0 ? dd.pair(0) : at;
}
