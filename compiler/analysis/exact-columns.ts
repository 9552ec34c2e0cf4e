/**
 * Column probabilities as exact fractions, where every letter's is one. In: the letters' fractions by alphabet, the
 * column of each symbol. Out: a fraction for each column. They decide ties that no interval can (exact-law.ts); cost:
 * some microseconds a symbol.
 */
import Fraction from "fraction.js";
import type { LetterModel } from "../policy.ts";

/** More symbols than this are not worth the fractions. */
const MOST_SYMBOLS = 4096;

/** The letters' probabilities where the model states them exactly; null for a distribution, or inexact numbers. */
export function exactLetters(model: LetterModel): readonly Fraction[] | null {
  if (model.kind !== "mass") return null;
  return model.probabilities.every(({ radius }) => radius === 0)
    ? model.probabilities.map(({ value }) => value)
    : null;
}

/**
 * The sum over the symbols of each column; the first alphabet varies slowest. Null where a law is not exact or there
 * are very many symbols.
 */
export function exactColumns(
  laws: readonly (readonly Fraction[] | null)[],
  columnOf: Int32Array,
  columns: number,
): readonly Fraction[] | null {
  if (columnOf.length > MOST_SYMBOLS) return null;
  let symbols = [new Fraction(1n, 1n)];
  for (const law of laws) {
    if (!law) return null;
    symbols = symbols.flatMap((chance) => law.map((letter) => chance.mul(letter)));
  }
  const sums = Array.from({ length: columns }, () => new Fraction(0n, 1n));
  symbols.forEach((chance, symbol) => {
    const column = columnOf[symbol]!;
    sums[column] = sums[column]!.add(chance);
  });
  return sums;
}
