/**
 * Arithmetic with about 32 digits: an unevaluated sum of two doubles, |low| at most half a last place of high. In and out:
 * such pairs, and doubles. Used where an exponent must be right absolutely (a tail of 1e-300 is exp(−690): one rounding of
 * the exponent alone costs 1e-13 of the tail) and where probabilities are multiplied and summed without loss.
 *
 * Stated for results between 1e-270 and 1e290 in size; below, the low part fades to plain double accuracy.
 * Source: Dekker (1971), "A floating-point technique for extending the available precision", Numer. Math. 18:224;
 * Knuth, *The Art of Computer Programming* 2, 4.2.2 (two-sum); Joldes, Muller & Popescu (2017), "Tight and rigorous error
 * bounds for basic building blocks of double-word arithmetic", ACM TOMS 44:15.
 */

/** The number high + low. */
export type DoubleDouble = { readonly high: number; readonly low: number };

/** ln 2 to 32 digits, from a multiple-precision computation. */
const LN2: DoubleDouble = { high: Math.LN2, low: 2.3190468138462996e-17 };
/** 2^27 + 1: splits a double into two halves of 26 bits. */
const SPLITTER = 134217729;
/** Halvings before, and doublings after, the series of the exponential. */
const HALVINGS = 8;

/** A double as a pair. */
export function pair(x: number): DoubleDouble {
  return { high: x, low: 0 };
}

/** a + b exactly (barring overflow). */
export function sum(a: number, b: number): DoubleDouble {
  const high = a + b;
  const part = high - a;
  return { high, low: a - (high - part) + (b - part) };
}

/** a·b exactly, for |a|, |b| below 1e290 and a product above 1e-290. */
export function product(a: number, b: number): DoubleDouble {
  const high = a * b;
  const aWide = SPLITTER * a;
  const aTop = aWide - (aWide - a);
  const aRest = a - aTop;
  const bWide = SPLITTER * b;
  const bTop = bWide - (bWide - b);
  const bRest = b - bTop;
  return { high, low: aRest * bRest - (high - aTop * bTop - aRest * bTop - aTop * bRest) };
}

/** a + b where |a| ≥ |b| or a = 0: exact. */
function renormal(a: number, b: number): DoubleDouble {
  const high = a + b;
  return { high, low: b - (high - a) };
}

/** a + b; relative error at most 2^-104 for equal signs, of the larger operand for opposite signs. */
export function add(a: DoubleDouble, b: DoubleDouble): DoubleDouble {
  const top = sum(a.high, b.high);
  const rest = sum(a.low, b.low);
  const middle = renormal(top.high, top.low + rest.high);
  return renormal(middle.high, middle.low + rest.low);
}

/** −a. */
export function negate(a: DoubleDouble): DoubleDouble {
  return { high: -a.high, low: -a.low };
}

/** a − b, as `add`. */
export function subtract(a: DoubleDouble, b: DoubleDouble): DoubleDouble {
  return add(a, negate(b));
}

/** a·b; relative error at most 2^-102. */
export function multiply(a: DoubleDouble, b: DoubleDouble): DoubleDouble {
  const top = product(a.high, b.high);
  return renormal(top.high, top.low + (a.high * b.low + a.low * b.high));
}

/** a·x for a double x; relative error at most 2^-103. */
export function scale(a: DoubleDouble, x: number): DoubleDouble {
  const top = product(a.high, x);
  return renormal(top.high, top.low + a.low * x);
}

/** a/b, b not 0; relative error at most 2^-100. */
export function divide(a: DoubleDouble, b: DoubleDouble): DoubleDouble {
  const first = a.high / b.high;
  const rest = subtract(a, scale(b, first));
  const second = rest.high / b.high;
  const third = subtract(rest, scale(b, second)).high / b.high;
  const head = renormal(first, second);
  return add(head, pair(third));
}

/** √a for a ≥ 0; relative error at most 2^-100. */
export function squareRoot(a: DoubleDouble): DoubleDouble {
  if (a.high === 0) return pair(0);
  const root = Math.sqrt(a.high);
  const rest = subtract(a, product(root, root));
  return renormal(root, rest.high / (2 * root));
}

/** The nearest double. */
export function toNumber(a: DoubleDouble): number {
  return a.high + a.low;
}

/** 1/n! for n = 11 … 1: the coefficients of the exponential's series, highest first. */
const TAYLOR: readonly DoubleDouble[] = [39916800, 3628800, 362880, 40320, 5040, 720, 120, 24, 6, 2, 1].map(
  (factorial) => divide(pair(1), pair(factorial)),
);

/** e^a − 1 for |a| ≤ 0.36; relative error about 1e-31. Taylor series on a/256, then s ← 2s + s² eight times. */
function exponentialLessOne(a: DoubleDouble): DoubleDouble {
  const small = scale(a, 2 ** -HALVINGS);
  let series = pair(0);
  for (const term of TAYLOR) series = add(multiply(series, small), term);
  let result = multiply(series, small);
  for (let i = 0; i < HALVINGS; i++) result = add(scale(result, 2), multiply(result, result));
  return result;
}

/** e^a; relative error about 1e-31 times max(1, |a|); 0 below −745, Infinity above 709. */
export function exp(a: DoubleDouble): DoubleDouble {
  const doublings = Math.round(a.high / LN2.high);
  if (!(doublings > -1022 && doublings < 1023)) return pair(Math.exp(a.high));
  const whole = add(pair(1), exponentialLessOne(subtract(a, scale(LN2, doublings))));
  const factor = 2 ** doublings;
  return { high: whole.high * factor, low: whole.low * factor };
}

/** ln a for a finite a > 0; absolute error about 1e-31 times max(1, |ln a|). One Newton step on the double's logarithm. */
export function log(a: DoubleDouble): DoubleDouble {
  // Far from 1 in steps of 2^400: the splitting of a product must not overflow, nor its error underflow.
  if (a.high > 1e250) return add(log({ high: a.high * 2 ** -400, low: a.low * 2 ** -400 }), scale(LN2, 400));
  if (a.high < 1e-250) return add(log({ high: a.high * 2 ** 400, low: a.low * 2 ** 400 }), scale(LN2, -400));
  const start = Math.log(a.high);
  const excess = add(multiply(a, exp(pair(-start))), pair(-1));
  return add(pair(start), add(excess, pair(-0.5 * excess.high * excess.high)));
}

/** e^a rounded to a double: error about one last place whatever the size of a, while the result is normal. */
export function expToNumber(a: DoubleDouble): number {
  const top = Math.exp(a.high);
  return top + top * a.low;
}
