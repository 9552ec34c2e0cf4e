/**
 * Whole numbers from the law: quantiles decided by the first means that can. In: a law, the question. Out: the
 * smallest n with P(T <= n) >= q, as an interval of whole numbers that are one number when it is decided.
 *
 * In turn: the proven interval of the law; for small chains powers in double-double; for exact probabilities,
 * whole-number arithmetic, which alone decides a tie such as P(T <= 15) = 1/2. What none of them decides stays an
 * interval.
 */
import Fraction from "fraction.js";
import { doubleDoubleOf, doubleOf } from "../chance/quantity.ts";
import { exactQuantile } from "./exact-law.ts";
import { exitedWithin, type Law, quantileInterval } from "./law.ts";
import { beginPowers, exitedByPowers, MOST_PLACES, type Powers, quantileByPowers } from "./powers.ts";
import type { Estimate, StartLaw } from "./state-law.ts";

/** The smallest n with P(T <= n) >= q lies from low to high, which are equal when it is decided. */
export type Quantile = { readonly low: number; readonly high: number };

export type Distribution = {
  /** P(T <= n) for a whole n >= 0. */
  readonly within: (n: number) => Estimate;
  readonly quantile: (q: Fraction) => Quantile;
};

/** An interval wider than this, relative to its value, is worth the powers of the matrix. */
const WIDE = 1e-11;
/** The largest n whose neighbours are whole numbers of a double. */
const MOST_TRIALS = 2 ** 52;

/**
 * The distribution of a law; `exact` are the column probabilities as fractions and `single` the one starting place,
 * or null.
 */
export function distributionOf(
  law: Law,
  start: StartLaw,
  exact: readonly Fraction[] | null,
  single: number | null,
): Distribution {
  let powers: Powers | null | undefined;
  const small = law.chain.shape.size <= MOST_PLACES;
  const powersOf = (): Powers => {
    powers ??= beginPowers(law.chain, start);
    return powers;
  };
  const within = (n: number): Estimate => {
    const estimate = exitedWithin(law, n);
    const wide = estimate.high - estimate.low > WIDE * estimate.high;
    return wide && small && n <= MOST_TRIALS ? exitedByPowers(powersOf(), n) : estimate;
  };
  const quantile = (q: Fraction): Quantile => {
    const { low, high } = quantileInterval(law, doubleOf(q), doubleOf(new Fraction(1n, 1n).sub(q)));
    if (low === high) return { low, high };
    if (exact && single !== null) {
      const found = exactQuantile(law.chain.shape, exact, single, q, low, high);
      if (found !== null) return { low: found, high: found };
    }
    const found = small && low <= MOST_TRIALS ? quantileByPowers(powersOf(), doubleDoubleOf(q)) : null;
    return found === null ? { low, high } : { low: found, high: found };
  };
  return { within, quantile };
}
