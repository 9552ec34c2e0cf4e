/**
 * Numbers in messages: short, decimal, and never two different values that read alike.
 * In: quantities. Out: text.
 */
import type Fraction from "fraction.js";
import { doubleOf } from "../chance/quantity.ts";
import type { Quantity } from "../policy.ts";

/** Longest exact decimal that is shown in full. */
const LONGEST_EXACT = 15;

/** A number as people write it: exact where that is short, else to 12 digits. */
export function showNumber(quantity: Quantity, digits = 12): string {
  const { value, radius } = quantity;
  if (radius === 0) {
    const decimal = exactDecimal(value);
    if (decimal !== null) return decimal;
  }
  const double = doubleOf(value);
  return Number.isFinite(double) ? `${Number(double.toPrecision(digits))}` : `${double}`;
}

/** Two numbers that differ, with as many digits as it takes to see it. */
export function showApart(a: Quantity, b: Quantity): readonly [string, string] {
  for (const digits of [6, 12, 17]) {
    const shown = [showNumber(a, digits), showNumber(b, digits)] as const;
    if (shown[0] !== shown[1]) return shown;
  }
  return [showLong(a.value), showLong(b.value)];
}

/** The decimal that is exactly the value, when it ends soon enough. */
function exactDecimal(value: Fraction, longest = LONGEST_EXACT): string | null {
  const text = `${value.n}`;
  if (value.d === 1n) return text.length <= longest ? `${value.s < 0n ? "-" : ""}${text}` : null;
  if (value.d > 10n ** BigInt(longest)) return null;
  let places = 0;
  let scale = 1n;
  while (scale % value.d !== 0n) {
    if (places++ > longest) return null;
    scale *= 10n;
  }
  const digits = `${value.n * (scale / value.d)}`.padStart(places + 1, "0");
  if (digits.length > longest) return null;
  return `${value.s < 0n ? "-" : ""}${digits.slice(0, -places)}.${digits.slice(-places)}`;
}

function showLong(value: Fraction): string {
  const fraction = value.toFraction();
  return exactDecimal(value, 60) ?? (fraction.length <= 60 ? fraction : `${doubleOf(value)}`);
}

/** `1 operand`, `2 operands`. */
export function countOf(n: number, noun: string): string {
  return n === 1 ? `1 ${noun}` : `${n} ${noun}s`;
}

/** `"a"`, `"a" and "b"`, `"a", "b" and "c"`; of many only the first few. */
export function listNames(names: readonly string[], most = 6): string {
  const quoted = names.slice(0, most).map((name) => `"${name}"`);
  const more = names.length - quoted.length;
  if (more > 0) return `${quoted.join(", ")} and ${more} more`;
  return quoted.length < 2 ? quoted.join("") : `${quoted.slice(0, -1).join(", ")} and ${quoted.at(-1)}`;
}
