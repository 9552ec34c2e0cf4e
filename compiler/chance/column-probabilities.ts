/**
 * From the chances of letters, one law for each alphabet, to the chances of the columns of a machine, which are classes of
 * symbols that no state tells apart. In: the alphabets, the column of each symbol, the laws. Out: a double-double for each
 * column.
 *
 * The alphabets are independent: a symbol's chance is the product over them. The first alphabet varies slowest, so the
 * products grow by one alphabet at a time, each partial product used for a whole stretch of symbols. Products and sums in
 * double-double arithmetic (`double-double.ts`, written out here on arrays), relative error below 2^-97 for chances above
 * 1e-270: nothing of the letters' accuracy is lost. Cost: about 40 ns a symbol.
 */
import type { Alphabet } from "../policy.ts";
import type { Chances } from "./letter-probabilities.ts";

/** 2^27 + 1: splits a double into two halves of 26 bits. */
const SPLITTER = 134217729;

/**
 * The chance of each column, for `columnOf` by symbol and `laws` by alphabet. RangeError when the sizes disagree: a
 * mistake of ours.
 */
export function columnProbabilities(
  alphabets: readonly Alphabet[],
  columnOf: Int32Array,
  columns: number,
  laws: readonly Chances[],
): Chances {
  if (laws.length !== alphabets.length) throw new RangeError("one law for each alphabet");
  let symbols: Chances = { high: Float64Array.of(1), low: Float64Array.of(0) };
  for (const [i, law] of laws.entries()) {
    if (law.high.length !== alphabets[i]!.letters.length) throw new RangeError("one chance for each letter");
    symbols = products(symbols, law);
  }
  if (symbols.high.length !== columnOf.length) throw new RangeError("one column for each symbol");
  return sums(symbols, columnOf, columns);
}

/** Every first·second, the first varying slowest. */
function products(first: Chances, second: Chances): Chances {
  const [n, m] = [first.high.length, second.high.length];
  const high = new Float64Array(n * m);
  const low = new Float64Array(n * m);
  for (let i = 0, k = 0; i < n; i++) {
    const a = first.high[i]!;
    const aWide = SPLITTER * a;
    const aTop = aWide - (aWide - a);
    const aRest = a - aTop;
    for (let j = 0; j < m; j++, k++) {
      const b = second.high[j]!;
      const bWide = SPLITTER * b;
      const bTop = bWide - (bWide - b);
      const bRest = b - bTop;
      const product = a * b;
      const error = aRest * bRest - (product - aTop * bTop - aRest * bTop - aTop * bRest);
      const rest = error + (a * second.low[j]! + first.low[i]! * b);
      high[k] = product + rest;
      low[k] = rest - (high[k]! - product);
    }
  }
  return { high, low };
}

/** The sum over the symbols of each column. */
function sums(symbols: Chances, columnOf: Int32Array, columns: number): Chances {
  const high = new Float64Array(columns);
  const low = new Float64Array(columns);
  for (let k = 0; k < columnOf.length; k++) {
    const column = columnOf[k]!;
    const a = high[column]!;
    const b = symbols.high[k]!;
    const sum = a + b;
    const part = sum - a;
    const rest = a - (sum - part) + (b - part) + (low[column]! + symbols.low[k]!);
    high[column] = sum + rest;
    low[column] = rest - (high[column]! - sum);
  }
  return { high, low };
}
