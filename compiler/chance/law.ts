/**
 * What a family of distributions provides once its parameters are known: where a cut stands, how much lies on either side
 * of it, and how much lies between two cuts. In: exact cuts; out: probabilities as doubles, each with its own relative
 * accuracy, never one minus a number near 1.
 *
 * A *place* is a cut in the law's own standard variable: (cut − mean)/sd, cut/scale, or for a count the largest whole
 * number below the boundary. It is formed exactly in rationals and rounded once, to 32 digits, because at z = 37 one
 * rounding of z to a double already moves the tail by 1e-13.
 */
import type Fraction from "fraction.js";
import type { Quantity } from "../policy.ts";
import * as dd from "./double-double.ts";
import { integrate } from "./quadrature.ts";
import { add, doubleDoubleOfRatio, multiply } from "./quantity.ts";

type DoubleDouble = dd.DoubleDouble;

/** A place and the chances below it and above it; a cut of a count belongs to the side below its place. */
export type Tails = { readonly at: DoubleDouble; readonly below: number; readonly above: number };

type Measured = {
  /** Where a cut stands; which side owns it matters to counts alone. */
  readonly place: (cut: Fraction, owner: "below" | "above") => DoubleDouble;
  readonly tails: (at: DoubleDouble) => Tails;
  /** The chance between two places, a at most b. */
  readonly between: (a: Tails, b: Tails) => number;
};

export type ContinuousLaw = Measured & {
  readonly kind: "continuous";
  readonly standard: StandardLaw;
  /** The value of the statistic at a value of the standard variable. */
  readonly original: (standard: Quantity) => Quantity;
};

export type CountLaw = Measured & {
  readonly kind: "count";
  /** The largest value it takes; Infinity where there is none. */
  readonly largest: number;
};

export type Law = ContinuousLaw | CountLaw;

/** A continuous law with location 0 and scale 1. */
export type StandardLaw = {
  /** `line`: all reals; `positive`: above 0, where the lower tail at 0 is exactly 0. */
  readonly support: "line" | "positive";
  /** The value exceeded with this chance where it is rational for certain, else null. */
  readonly exactQuantile?: (above: Fraction) => Fraction | null;
  readonly tails: (at: DoubleDouble) => Tails;
  /** On the line: over what width the density bends in its middle, where that is not about 1. */
  readonly core?: number;
  /** Per unit of the standard variable. */
  readonly density: (at: DoubleDouble) => number;
  /** The chance between two places in closed form; else from the tails and the density. */
  readonly between?: (a: Tails, b: Tails) => number;
};

/** The `exactQuantile` of a law symmetric about 0. */
export function medianAtZero(above: Fraction): Fraction | null {
  return above.n === 1n && above.d === 2n ? above.sub(above) : null;
}

/** Places are kept where double-double arithmetic does not overflow. */
const FARTHEST = 1e280;

/** The share of a tail that a difference must keep to be taken as it is; below, two bits would be lost. */
const KEPT = 0.25;

/** The chance between two places by the smaller tails, or null where the difference would lose digits. */
export function differenceOfTails(a: Tails, b: Tails): number | null {
  if (b.below <= 0.5) return keep(b.below - a.below, b.below);
  if (a.above <= 0.5) return keep(a.above - b.above, a.above);
  return keep(1 - (a.below + b.above), 1);
}

function keep(difference: number, of: number): number | null {
  return of === 0 ? 0 : difference >= KEPT * of ? difference : null;
}

/**
 * The chance between two places: the difference of the smaller tails, and where that would lose digits (a zone narrow for
 * where it lies) the integral of the density, in asinh(x/core) on the line and in ln x on the positive side, so that zones
 * wide in x but narrow in chance stay smooth. Relative error about 1e-15.
 */
export function betweenByDensity(law: StandardLaw, a: Tails, b: Tails): number {
  const width = dd.toNumber(dd.subtract(b.at, a.at));
  if (width === 0) return 0;
  const difference = differenceOfTails(a, b);
  if (difference !== null) return difference;
  const x = a.at.high;
  if (law.support === "positive") {
    const node = (s: number) => law.density(dd.add(a.at, dd.pair(x * Math.expm1(s)))) * x * Math.exp(s);
    return integrate(node, Math.log1p(width / x), 1);
  }
  if (x >= 0) return outward(law, a.at, width, 1);
  if (b.at.high <= 0) return outward(law, b.at, width, -1);
  return outward(law, dd.pair(0), -dd.toNumber(a.at), -1) + outward(law, dd.pair(0), dd.toNumber(b.at), 1);
}

/** ∫ of the density over `width` from a place on the line away from 0, to the right (1) or to the left (−1). */
function outward(law: StandardLaw, from: DoubleDouble, width: number, direction: 1 | -1): number {
  const core = law.core ?? 1;
  const near = Math.abs(from.high) / core;
  const far = near + width / core;
  const root = Math.hypot(1, near);
  // asinh far − asinh near, and sinh(asinh near + s) − near, every term positive.
  const range = Math.asinh(((width / core) * (near + far)) / (far * root + near * Math.hypot(1, far)));
  const node = (s: number) => {
    const step = 2 * near * Math.sinh(s / 2) ** 2 + root * Math.sinh(s);
    return law.density(dd.add(from, dd.pair(direction * core * step))) * Math.hypot(1, near + step);
  };
  return core * integrate(node, range, 1);
}

/** (cut − location)/scale, exactly, then rounded to 32 digits; at most `FARTHEST` from 0. */
function standardised(cut: Fraction, location: Fraction, scale: Fraction): DoubleDouble {
  const top = cut.s * cut.n * location.d - location.s * location.n * cut.d;
  const place = doubleDoubleOfRatio(top * scale.d, cut.d * location.d * scale.n);
  return Math.abs(place.high) <= FARTHEST ? place : dd.pair(Math.sign(place.high) * FARTHEST);
}

/** A standard law moved and stretched: the statistic is location + scale·standard, scale above 0. */
export function locatedLaw(standard: StandardLaw, location: Quantity, scale: Quantity): ContinuousLaw {
  return {
    kind: "continuous",
    standard,
    place: (cut) => standardised(cut, location.value, scale.value),
    tails: standard.tails,
    between: standard.between ?? ((a, b) => betweenByDensity(standard, a, b)),
    original: (z) => add(location, multiply(scale, z)),
  };
}
