/**
 * What a parameter of a distribution must be, and the words for one that is not. In: the parameters of a row and exact
 * values; out: the first message, or null. A value whose accuracy leaves the demand open breaks it.
 */
import Fraction from "fraction.js";
import type { Quantity } from "../policy.ts";
import { compareQuantities, exact, negate, toDouble } from "./quantity.ts";

/** The range in which tails are computed (and tested) with the accuracy that is stated. */
const SMALLEST = exact(new Fraction(1n, 1_000_000n));
const LARGEST = exact(1_000_000_000n);
const BILLIONTH = exact(new Fraction(1n, 1_000_000_000n));
const MILLION = exact(1_000_000n);
const ZERO = exact(0n);
const ONE = exact(1n);

export type Demand =
  | "any"
  | "positive"
  /** From -1e6 to 1e6. */
  | "exponent"
  /** From 1e-6 to 1e9. */
  | "moderate"
  /** From 0 to 1e6. */
  | "upToMillion"
  /** A whole number from 1 to 1e9. */
  | "whole"
  /** From 0 to 1. */
  | "chance"
  /** Above 0, up to 1. */
  | "positiveChance"
  /** From 1e-9 to 1. */
  | "sizeableChance";

export type Parameter = {
  /** As the reference of the language calls it. */
  readonly name: string;
  /** As a message says it: "the mean". */
  readonly words: string;
  readonly demand: Demand;
  readonly fallback: Quantity | null;
};

function isBetween(low: Quantity, q: Quantity, high: Quantity): boolean {
  const [below, above] = [compareQuantities(low, q), compareQuantities(q, high)];
  return (below === "less" || below === "equal") && (above === "less" || above === "equal");
}

/** What the demand asks for when it is not met, after "must be"; null when it is. */
function unmet(demand: Demand, q: Quantity): string | null {
  const positive = compareQuantities(q, ZERO) === "greater";
  switch (demand) {
    case "any":
      return null;
    case "positive":
      return positive ? null : "above 0";
    case "exponent":
      return isBetween(negate(MILLION), q, MILLION) ? null : "from -1e6 to 1e6";
    case "moderate":
      if (!positive) return "above 0";
      return isBetween(SMALLEST, q, LARGEST) ? null : "from 1e-6 to 1e9";
    case "upToMillion":
      if (!positive && compareQuantities(q, ZERO) !== "equal") return "0 or above";
      return isBetween(ZERO, q, MILLION) ? null : "at most 1e6";
    case "whole":
      if (q.radius !== 0 || q.value.d !== 1n || !positive) return "a whole number, 1 or above";
      return isBetween(ONE, q, LARGEST) ? null : "at most 1e9";
    case "chance":
      return isBetween(ZERO, q, ONE) ? null : "from 0 to 1";
    case "positiveChance":
      return positive && isBetween(ZERO, q, ONE) ? null : "above 0 and at most 1";
    case "sizeableChance":
      if (!positive || !isBetween(ZERO, q, ONE)) return "above 0 and at most 1";
      return isBetween(BILLIONTH, q, ONE) ? null : "at least 1e-9";
    default:
      return demand satisfies never;
  }
}

/** The first parameter that is not what it must be, in words: "the standard deviation must be above 0, and is -1". */
export function demanded(parameters: readonly Parameter[], given: readonly Quantity[]): string | null {
  for (const [i, { words, demand }] of parameters.entries()) {
    const value = given[i];
    if (value === undefined) return `${words} is missing`;
    const asked = unmet(demand, value);
    if (asked !== null) return `${words} must be ${asked}, and is ${toDouble(value)}`;
  }
  return null;
}
