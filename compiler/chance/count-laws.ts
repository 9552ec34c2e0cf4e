/**
 * Laws of counts: poisson, binomial, negative binomial and geometric. In, parameters as double-doubles; out, laws whose
 * places are whole numbers k: below is P(X ≤ k), above P(X > k). Relative error about 1e-15 from 1e-300 upward, up to
 * 1e-13 where a zone of many counts is both far from the mean and narrow for its place.
 *
 * Method: tails by the incomplete gamma and beta functions (A&S 26.4.21, 26.5.24, 26.5.26); the chance between two places
 * by the smaller tails, and where their difference would lose digits by adding the mass function, outward from its
 * largest term, each term from its neighbour by the ratio of the law.
 */
import type Fraction from "fraction.js";
import * as dd from "./double-double.ts";
import { betaTailsOf } from "./incomplete-beta.ts";
import { gammaTailsOf } from "./incomplete-gamma.ts";
import { type CountLaw, differenceOfTails, type Tails } from "./law.ts";
import { logBeta, logGamma } from "./log-gamma.ts";

type DoubleDouble = dd.DoubleDouble;

/** Both tails at a whole k ≥ 0, the mass there, and mass(k + 1)/mass(k). */
type Counting = {
  readonly largest: number;
  readonly tails: (k: number) => { readonly below: number; readonly above: number };
  readonly mass: (k: number) => number;
  readonly ratio: (k: number) => number;
};

const NEGLIGIBLE = 2 ** -60;
/** More counts than this between two places are not added one by one. */
const MOST_ADDED = 1_000_000;

/** The largest whole number below the boundary: the cut itself when the lower letter owns it. */
function wholeBelow(cut: Fraction, owner: "below" | "above"): number {
  const signed = cut.s * cut.n;
  const quotient = signed / cut.d;
  const whole = cut.d === 1n;
  const floor = whole || signed >= 0n ? quotient : quotient - 1n;
  const k = Number(owner === "above" && whole ? floor - 1n : floor);
  return k < 0 ? -1 : k > Number.MAX_SAFE_INTEGER ? Number.POSITIVE_INFINITY : k;
}

/** The mass from `from` to `to`, both included, outward from the largest term. */
function sumOfMass(law: Counting, from: number, to: number): number {
  let top = from;
  let reach = to;
  while (top < reach) {
    const middle = Math.floor((top + reach) / 2);
    if (law.ratio(middle) >= 1) top = middle + 1;
    else reach = middle;
  }
  let sum = 1;
  for (let k = top, term = 1; k < to && term > NEGLIGIBLE * sum; k++) {
    term *= law.ratio(k);
    sum += term;
  }
  for (let k = top, term = 1; k > from && term > NEGLIGIBLE * sum; k--) {
    term /= law.ratio(k - 1);
    sum += term;
  }
  return law.mass(top) * sum;
}

function countLaw(law: Counting): CountLaw {
  return {
    kind: "count",
    largest: law.largest,
    place: (cut, owner) => dd.pair(wholeBelow(cut, owner)),
    tails: (at) => {
      if (at.high < 0) return { at, below: 0, above: 1 };
      return at.high >= law.largest ? { at, below: 1, above: 0 } : { at, ...law.tails(at.high) };
    },
    between: (a, b) => betweenCounts(law, a, b),
  };
}

function betweenCounts(law: Counting, a: Tails, b: Tails): number {
  const [from, to] = [Math.max(a.at.high, -1) + 1, Math.min(b.at.high, law.largest)];
  if (from > to) return 0;
  const difference = differenceOfTails(a, b);
  if (difference !== null) return difference;
  if (to - from > MOST_ADDED) return b.below <= 0.5 ? b.below - a.below : a.above - b.above;
  return sumOfMass(law, from, to);
}

/** ln(1 − p) for 0 < p < 1 with relative accuracy, given q = 1 − p. */
function logComplement(p: DoubleDouble, q: DoubleDouble): DoubleDouble {
  if (p.high > 1e-6) return dd.log(q);
  let series = dd.pair(0);
  for (let n = 6; n >= 1; n--) series = dd.multiply(p, dd.add(dd.divide(dd.pair(1), dd.pair(n)), series));
  return dd.negate(series);
}

/** A count that is always `value`. */
export function certainCount(value: number): CountLaw {
  return {
    kind: "count",
    largest: value,
    place: (cut, owner) => dd.pair(wholeBelow(cut, owner)),
    tails: (at) => ({ at, below: at.high >= value ? 1 : 0, above: at.high >= value ? 0 : 1 }),
    between: (a, b) => (a.at.high < value && b.at.high >= value ? 1 : 0),
  };
}

/** Mean above 0. */
export function poissonLaw(mean: DoubleDouble): CountLaw {
  const logMean = dd.log(mean);
  return countLaw({
    largest: Number.POSITIVE_INFINITY,
    tails: (k) => {
      const { lower, upper } = gammaTailsOf(dd.pair(k + 1))(mean);
      return { below: upper, above: lower };
    },
    mass: (k) => {
      const power = dd.subtract(dd.scale(logMean, k), mean);
      return dd.expToNumber(dd.subtract(power, logGamma(dd.pair(k + 1))));
    },
    ratio: (k) => mean.high / (k + 1),
  });
}

/** n ≥ 1 trials of chance p, 0 < p < 1, q = 1 − p. */
export function binomialLaw(n: number, p: DoubleDouble, q: DoubleDouble): CountLaw {
  const [logP, logQ] = [dd.log(p), logComplement(p, q)];
  const odds = dd.toNumber(dd.divide(p, q));
  return countLaw({
    largest: n,
    tails: (k) => {
      const { lower, upper } = betaTailsOf(dd.pair(k + 1), dd.pair(n - k))(p, q);
      return { below: upper, above: lower };
    },
    mass: (k) => {
      const power = dd.add(dd.scale(logP, k), dd.scale(logQ, n - k));
      // C(n, k) = 1/((n + 1) B(k + 1, n − k + 1)).
      return dd.expToNumber(dd.subtract(power, logBeta(dd.pair(k + 1), dd.pair(n - k + 1)))) / (n + 1);
    },
    ratio: (k) => ((n - k) / (k + 1)) * odds,
  });
}

/** Failures before the r-th success (r real, above 0), 0 < p < 1 the chance of a success, q = 1 − p. */
export function negativeBinomialLaw(r: DoubleDouble, p: DoubleDouble, q: DoubleDouble): CountLaw {
  const [logP, logQ] = [dd.log(p), logComplement(p, q)];
  return countLaw({
    largest: Number.POSITIVE_INFINITY,
    tails: (k) => {
      const { lower, upper } = betaTailsOf(r, dd.pair(k + 1))(p, q);
      return { below: lower, above: upper };
    },
    mass: (k) => {
      const power = dd.add(dd.multiply(logP, r), dd.scale(logQ, k));
      // Γ(k + r)/(k! Γ(r)) = r/((k + r)·r B(r, k + 1)).
      return dd.expToNumber(dd.subtract(power, logBeta(r, dd.pair(k + 1)))) / (k + r.high);
    },
    ratio: (k) => ((k + r.high) / (k + 1)) * q.high,
  });
}

/** Failures before the first success, 0 < p < 1, q = 1 − p: P(X > k) = q^(k+1), every difference in closed form. */
export function geometricLaw(p: DoubleDouble, q: DoubleDouble): CountLaw {
  const logQ = logComplement(p, q);
  /** q^n and 1 − q^n. */
  const power = (n: number) => dd.expToNumber(dd.scale(logQ, n));
  const complement = (n: number) => {
    const exponent = dd.scale(logQ, n);
    return -(Math.expm1(exponent.high) + Math.exp(exponent.high) * exponent.low);
  };
  const law = countLaw({
    largest: Number.POSITIVE_INFINITY,
    tails: (k) => ({ below: complement(k + 1), above: power(k + 1) }),
    mass: (k) => power(k) * dd.toNumber(p),
    ratio: () => q.high,
  });
  return {
    ...law,
    between: (a, b) => {
      const counts = b.at.high - Math.max(a.at.high, -1);
      if (!(counts > 0)) return 0;
      return counts === Number.POSITIVE_INFINITY ? a.above : a.above * complement(counts);
    },
  };
}
