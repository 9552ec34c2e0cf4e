/**
 * Quantiles of counts. In: a law, its exact parameters, a chance; out: a whole number, or why it cannot be told. `above`
 * asks for the smallest whole x with P(X > x) ≤ p, `below` for the largest whole x with P(X < x) ≤ p.
 *
 * Method: doubling and halving on the tails. Where a tail comes within `MARGIN` of the chance, a binomial, geometric or
 * (with whole r) negative binomial tail is compared in exact rational arithmetic: all three are binomial sums. A Poisson
 * tail is never rational, so that it never ties.
 */
import Fraction from "fraction.js";
import type { Quantity } from "../policy.ts";
import * as dd from "./double-double.ts";
import type { CountLaw } from "./law.ts";
import { doubleOf, exact, toDouble } from "./quantity.ts";

/** Why there is no quantile, in words for the user. */
export type Refused = { readonly refused: string };

export type Side = "above" | "below";

/** Relative; well above the error of any tail. */
const MARGIN = 1e-12;
/** Bits of a number times additions in an exact sum: about a second. */
const MOST_WORK = 1e10;

/** The quantile of a count law for exact parameters and 0 < p < 1; the name says which exact sums there are. */
export function countQuantile(
  name: string,
  law: CountLaw,
  parameters: readonly Quantity[],
  p: Quantity,
  side: Side,
): Quantity | Refused {
  const aim = side === "above" ? p.value : p.value.neg().add(1n);
  let open: number | null = null;
  /** Whether the tail above k has come down to the chance: to it or below for `above`, below it for `below`. */
  const isDown = (k: number): boolean => {
    const order = compareTail(name, law, parameters, k, aim, p.radius);
    if (order === null) open = k;
    return order !== null && (side === "above" ? order <= 0 : order < 0);
  };
  let high = 0;
  while (!isDown(high) && open === null && high < Number.MAX_SAFE_INTEGER) high = 2 * high + 1;
  let low = Math.floor((high - 1) / 2);
  while (high - low > 1 && open === null) {
    const middle = Math.floor((low + high) / 2);
    if (isDown(middle)) high = middle;
    else low = middle;
  }
  if (high >= Number.MAX_SAFE_INTEGER) return { refused: "the quantile is too large to be found" };
  if (open !== null) return { refused: `P(X > ${open}) comes too close to ${doubleOf(aim)} to tell` };
  return exact(BigInt(high));
}

/** The sign of P(X > k) − aim, or null when it cannot be told. */
function compareTail(
  name: string,
  law: CountLaw,
  parameters: readonly Quantity[],
  k: number,
  aim: Fraction,
  radius: number,
): number | null {
  const { above, below } = law.tails(dd.pair(k));
  const small = aim.compare(new Fraction(1n, 2n)) <= 0;
  const target = doubleOf(small ? aim : aim.neg().add(1n));
  const excess = small ? above - target : target - below;
  if (Math.abs(excess) > MARGIN * target + 1.001 * radius) return Math.sign(excess);
  if (radius !== 0) return null;
  return exactTail(name, parameters, k)?.compare(aim) ?? null;
}

/** P(X > k) as a fraction where that is a binomial sum of bearable size. */
function exactTail(name: string, parameters: readonly Quantity[], k: number): Fraction | null {
  const [first, second] = parameters;
  const p = (second ?? first)!.value;
  switch (name) {
    case "binomial":
      return binomialAtMost(toDouble(first!) - k - 1, toDouble(first!), p.neg().add(1n));
    case "geometric":
      return binomialAtMost(0, k + 1, p);
    case "negative_binomial":
      return first!.value.d === 1n ? binomialAtMost(toDouble(first!) - 1, k + toDouble(first!), p) : null;
    default:
      return null;
  }
}

/** P(at most k successes among n), the shorter of the two sums; null when it takes too long. */
function binomialAtMost(k: number, n: number, p: Fraction): Fraction | null {
  if (k < 0) return new Fraction(0n, 1n);
  if (k >= n) return new Fraction(1n, 1n);
  if (2 * k > n) {
    return (
      binomialAtMost(n - k - 1, n, p.neg().add(1n))
        ?.neg()
        .add(1n) ?? null
    );
  }
  const bits = n * p.d.toString(2).length;
  if (bits * (k + 1) > MOST_WORK || bits > 1e7) return null;
  const failure = p.d - p.n;
  if (failure === 0n) return new Fraction(0n, 1n);
  let term = failure ** BigInt(n);
  let sum = term;
  for (let j = 0; j < k; j++) {
    term = (term * (BigInt(n - j) * p.n)) / (BigInt(j + 1) * failure);
    sum += term;
  }
  return new Fraction(sum, p.d ** BigInt(n));
}
