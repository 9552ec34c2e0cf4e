/**
 * Numbers of twice double precision, many at a time: unevaluated sums high + low with |low| at most half an ulp of
 * high, in two Float64Arrays; a running sum is an `Accumulator`, two numbers in an array. (Single ones:
 * ../chance/double-double.ts.)
 *
 * Accuracy: each operation is right to 2^-102 of the sizes of what it adds, so long as no product falls below 1e-290.
 * Source: Dekker (1971), "A floating-point technique for extending the available precision", Numer. Math. 18:224;
 * Knuth, *The Art of Computer Programming* vol. 2, 4.2.2, for the exact sum; Joldes, Muller & Popescu (2017), ACM
 * TOMS 44:15, for the bounds.
 */

/** A running double-double sum: [high, low]. */
export type Accumulator = Float64Array;

/** Many double-doubles: by index, the two parts. */
export type DoubleDoubles = { readonly high: Float64Array; readonly low: Float64Array };

/** Half an ulp of 1: the relative error of one rounding of a double. */
export const UNIT = 2 ** -53;

/** What one step of double-double arithmetic may lose, relative to the sizes added; generous by a factor of 8. */
export const DOUBLE_DOUBLE_UNIT = 2 ** -101;

/** 2^27 + 1, which splits a double into two halves of 26 bits. */
const SPLITTER = 134217729;

/** `count` double-doubles, all 0. */
export function zeros(count: number): DoubleDoubles {
  return { high: new Float64Array(count), low: new Float64Array(count) };
}

/** Adds high + low to the sum. */
export function add(sum: Accumulator, high: number, low: number): void {
  const a = sum[0]!;
  const s = a + high;
  const b = s - a;
  const error = a - (s - b) + (high - b);
  const t = sum[1]! + low;
  const bt = t - sum[1]!;
  const errorLow = sum[1]! - (t - bt) + (low - bt);
  const c = error + t;
  const v = s + c;
  const w = errorLow + (c - (v - s));
  const total = v + w;
  sum[0] = total;
  sum[1] = w - (total - v);
}

/** Adds the product of two double-doubles to the sum. */
export function addProduct(sum: Accumulator, aHigh: number, aLow: number, bHigh: number, bLow: number): void {
  const product = aHigh * bHigh;
  let c = SPLITTER * aHigh;
  const a1 = c - (c - aHigh);
  const a2 = aHigh - a1;
  c = SPLITTER * bHigh;
  const b1 = c - (c - bHigh);
  const b2 = bHigh - b1;
  const error = a1 * b1 - product + a1 * b2 + a2 * b1 + a2 * b2;
  add(sum, product, error + (aHigh * bLow + aLow * bHigh));
}
