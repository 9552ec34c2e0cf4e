/**
 * Numbers as written, and the size beyond which exact arithmetic is refused.
 * In: the digits of a literal. Out: the fraction they mean, or what is wrong with its size. The size is judged before the
 * number is made, so that `1e999999999` costs nothing.
 */
import Fraction from "fraction.js";
import { doubleOf, exact } from "../chance/quantity.ts";
import type { Quantity } from "../policy.ts";

/** Decimal digits kept of a numerator or denominator. */
export const MOST_DIGITS = 1000;
/** Bits of a number of MOST_DIGITS digits. */
const MOST_BITS = 3322;

export type Size = "fits" | "long" | "large" | "small";

/** Whether an exact number may be kept: its digits, and the range of doubles. */
export function sizeOf(value: Fraction): Size {
  const double = doubleOf(value);
  if (!Number.isFinite(double)) return "large";
  if (double === 0 && value.n !== 0n) return "small";
  const bits = Math.max(bitsOf(value.n), bitsOf(value.d));
  return bits > MOST_BITS ? "long" : "fits";
}

/** Bits of a positive whole number, to within 3. */
export function bitsOf(n: bigint): number {
  return n < 9007199254740992n ? Math.ceil(Math.log2(Number(n) + 1)) : n.toString(16).length * 4;
}

/** The value of a number as written, or why it cannot be kept. */
export function readNumber(text: string, percent: boolean): Quantity | Exclude<Size, "fits"> {
  const match = /^(\d+)(?:\.(\d+))?(?:[eE]([+-]?)0*(\d+))?$/.exec(text);
  if (match === null) return "long";
  const [, whole = "", decimals = "", sign = "", exponentDigits = ""] = match;
  const digits = (whole + decimals).replace(/^0+/, "");
  if (digits === "") return exact(0n);
  if (digits.length > MOST_DIGITS) return "long";
  if (exponentDigits.length > 5) return sign === "-" ? "small" : "large";
  const exponent = Number(`${sign}${exponentDigits || "0"}`) - decimals.length - (percent ? 2 : 0);
  if (digits.length + exponent > 400) return "large";
  if (digits.length + exponent < -400) return "small";
  const mantissa = BigInt(digits);
  const scale = 10n ** BigInt(Math.abs(exponent));
  const value = exponent >= 0 ? new Fraction(mantissa * scale, 1n) : new Fraction(mantissa, scale);
  const size = sizeOf(value);
  return size === "fits" ? exact(value) : size;
}

/** What to say of a number that cannot be kept. */
export function sizeText(size: Exclude<Size, "fits">): string {
  switch (size) {
    case "long":
      return `has more than ${MOST_DIGITS.toLocaleString("en-US")} digits`;
    case "large":
      return "is larger than the largest double, 1.8e308";
    case "small":
      return "is not zero, but smaller than the smallest double, 5e-324";
  }
}
