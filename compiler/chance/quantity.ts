/**
 * Numbers of a policy: a rational and how far the true value may lie from it, and the exact roads between rationals and
 * doubles. In: fractions, doubles, quantities. Out: the same.
 *
 * Invariants: a radius is never too small (every double of its computation is rounded outward); two exact operands give
 * an exact result; a value of radius above 0 is kept to at most `INEXACT_BITS` bits, the rest moved into the radius, so
 * that chains of inexact products stay short. Exact values grow as they must.
 * Source: interval arithmetic in midpoint-radius form (Rump 1999, "Fast and parallel interval arithmetic", BIT 39:534);
 * rounding to nearest, ties to even, as IEEE 754 defines it.
 */
import Fraction from "fraction.js";
import type { Quantity } from "../policy.ts";

/** Bits kept of the numerator or denominator of an inexact value; far beyond what its radius leaves known. */
const INEXACT_BITS = 512;
/** More than any chain of a few rounded operations can lose, as a factor. */
const OUTWARD = 1 + 2 ** -48;
const SMALLEST = 5e-324;
const ZERO = new Fraction(0n, 1n);

/** The number of bits of |n|; 0 for 0. */
function bitLength(n: bigint): number {
  const digits = (n < 0n ? -n : n).toString(16);
  return digits === "0" ? 0 : 4 * digits.length - Math.clz32(Number.parseInt(digits.charAt(0), 16)) + 28;
}

/** x·2^k without a rounding of its own while the result is a normal double. */
function scaled(x: number, k: number): number {
  const half = Math.trunc(k / 2);
  return x * 2 ** half * 2 ** (k - half);
}

/** The exact value of a finite double, as a fraction. Throws RangeError for NaN and the infinities. */
export function fractionOfDouble(x: number): Fraction {
  if (!Number.isFinite(x)) throw new RangeError(`${x} has no exact fraction`);
  if (Number.isInteger(x)) return new Fraction(BigInt(x), 1n);
  const bits = new DataView(new ArrayBuffer(8));
  bits.setFloat64(0, x);
  const word = bits.getBigUint64(0);
  const stored = Number((word >> 52n) & 0x7ffn);
  const mantissa = (word & 0xfffffffffffffn) | (stored === 0 ? 0n : 1n << 52n);
  // A double that is no integer lies below 2^53 in size, so the exponent of its last bit is negative.
  const places = BigInt(1075 - Math.max(stored, 1));
  return new Fraction(x < 0 ? -mantissa : mantissa, 1n << places);
}

/** The double nearest to n/d, both positive: correctly rounded, subnormal and overflowing results included. */
function nearestDouble(n: bigint, d: bigint): number {
  if (n <= 9007199254740991n && d <= 9007199254740991n) return Number(n) / Number(d);
  const magnitude = bitLength(n) - bitLength(d);
  if (magnitude > 1026) return Number.POSITIVE_INFINITY;
  if (magnitude < -1021) {
    if (magnitude < -1080) return 0;
    // Multiples of 2^-1074, ties to even: below 2^53 of them, so that the count is exact.
    const shifted = n << 1074n;
    const count = shifted / d;
    const twice = 2n * (shifted - count * d);
    const up = twice > d || (twice === d && (count & 1n) === 1n);
    return Number(up ? count + 1n : count) * 2 ** -1074;
  }
  // At least 64 bits of quotient, the last of them set when anything is left over: Number() then rounds rightly.
  const shift = 66 - magnitude;
  const top = shift >= 0 ? n << BigInt(shift) : n;
  const bottom = shift >= 0 ? d : d << BigInt(-shift);
  const quotient = top / bottom;
  const sticky = quotient * bottom === top ? quotient : quotient | 1n;
  return scaled(Number(sticky), -shift);
}

/** The double nearest to a fraction (ties to even), ±Infinity beyond the largest, subnormals rounded once. */
export function doubleOf(f: Fraction): number {
  if (f.n === 0n) return 0;
  const size = nearestDouble(f.n, f.d);
  return f.s < 0n ? -size : size;
}

/**
 * n/d (d > 0, not necessarily in lowest terms) as high + low, both doubles: relative error at most 2^-105 for sizes from
 * 1e-270 to 1e300, and high alone correctly rounded outside. One long division, so that no gcd is ever taken.
 */
export function doubleDoubleOfRatio(n: bigint, d: bigint): { readonly high: number; readonly low: number } {
  const size = n < 0n ? -n : n;
  if (size === 0n) return { high: 0, low: 0 };
  const magnitude = Math.log2(Number(size)) - Math.log2(Number(d));
  if (!(Math.abs(magnitude) < 900)) return doubleDoubleOfExtreme(n, d);
  const shift = 122 - Math.floor(magnitude);
  const quotient = shift >= 0 ? (n << BigInt(shift)) / d : n / (d << BigInt(-shift));
  const high = Number(quotient);
  const unit = 2 ** -shift;
  return { high: high * unit, low: Number(quotient - BigInt(high)) * unit };
}

function doubleDoubleOfExtreme(n: bigint, d: bigint): { readonly high: number; readonly low: number } {
  const f = new Fraction(n, d);
  const high = doubleOf(f);
  return { high, low: Number.isFinite(high) ? doubleOf(f.sub(fractionOfDouble(high))) : 0 };
}

/** A fraction as high + low, both doubles, high the nearest to 1 part in 2^105: see `doubleDoubleOfRatio`. */
export function doubleDoubleOf(f: Fraction): { readonly high: number; readonly low: number } {
  return doubleDoubleOfRatio(f.s * f.n, f.d);
}

/** A number known exactly: a fraction, a whole number, or the exact value of a finite double. */
export function exact(value: Fraction | bigint | number): Quantity {
  if (typeof value === "number") return { value: fractionOfDouble(value), radius: 0 };
  return { value: typeof value === "bigint" ? new Fraction(value, 1n) : value, radius: 0 };
}

/** A finite double that lies at most `radius` (≥ 0) from the true value. */
export function fromDouble(value: number, radius: number): Quantity {
  return { value: fractionOfDouble(value), radius };
}

/** The double nearest to the value; the radius is left out. */
export function toDouble(q: Quantity): number {
  return doubleOf(q.value);
}

/** A double at least |f|. */
function sizeAbove(f: Fraction): number {
  return f.n === 0n ? 0 : nearestDouble(f.n, f.d) * OUTWARD + SMALLEST;
}

/** At least size·radius; nothing where an exact factor leaves no error, whatever the size of the other. */
function spread(size: number, radius: number): number {
  return radius === 0 ? 0 : size * radius + SMALLEST;
}

/** A quantity with its radius rounded outward and, when inexact, its value shortened. */
function outward(value: Fraction, radius: number): Quantity {
  const wide = radius * OUTWARD + SMALLEST;
  const excess = Math.min(bitLength(value.n), bitLength(value.d)) - INEXACT_BITS;
  const long = excess > 0 || bitLength(value.n) + bitLength(value.d) > 8 * INEXACT_BITS;
  if (!long || value.n === 0n) return { value, radius: wide };
  const places = BigInt(INEXACT_BITS + Math.max(0, bitLength(value.d) - bitLength(value.n)));
  const short = new Fraction(((value.s * value.n) << places) / value.d, 1n << places);
  return { value: short, radius: (wide + sizeAbove(value.sub(short))) * OUTWARD };
}

/** a + b; |error| ≤ the radius of the result. */
export function add(a: Quantity, b: Quantity): Quantity {
  const value = a.value.add(b.value);
  return a.radius === 0 && b.radius === 0 ? { value, radius: 0 } : outward(value, a.radius + b.radius);
}

/** −a. */
export function negate(a: Quantity): Quantity {
  return { value: a.value.neg(), radius: a.radius };
}

/** a − b; |error| ≤ the radius of the result. */
export function subtract(a: Quantity, b: Quantity): Quantity {
  return add(a, negate(b));
}

/** a·b; the radius covers |a|·rb + |b|·ra + ra·rb. */
export function multiply(a: Quantity, b: Quantity): Quantity {
  const value = a.value.mul(b.value);
  if (a.radius === 0 && b.radius === 0) return { value, radius: 0 };
  if ((a.radius === 0 && a.value.n === 0n) || (b.radius === 0 && b.value.n === 0n)) return exact(ZERO);
  return outward(
    value,
    spread(sizeAbove(a.value), b.radius) + spread(sizeAbove(b.value) + b.radius, a.radius),
  );
}

/**
 * a/b. The value of b must not be 0 (the caller says so to the user; RangeError here). When b may be 0 within its radius
 * the result has radius Infinity, and every comparison with it is open.
 */
export function divide(a: Quantity, b: Quantity): Quantity {
  if (b.value.n === 0n) throw new RangeError("division by zero");
  const value = a.value.div(b.value);
  if (a.radius === 0 && b.radius === 0) return { value, radius: 0 };
  if (a.radius === 0 && a.value.n === 0n) return exact(ZERO);
  const room = nearestDouble(b.value.n, b.value.d) / OUTWARD - b.radius - 2 * SMALLEST;
  if (!(room > 0)) return { value, radius: Number.POSITIVE_INFINITY };
  return outward(value, ((a.radius + spread(sizeAbove(value), b.radius)) * OUTWARD) / (room / OUTWARD));
}

/** a to a whole power n; a^0 is 1; for n < 0 the value of a must not be 0 (RangeError). By repeated squaring. */
export function power(a: Quantity, n: number): Quantity {
  if (!Number.isInteger(n)) throw new RangeError(`power ${n} is not whole`);
  if (n < 0) return divide(exact(1n), power(a, -n));
  let result = exact(1n);
  let square = a;
  for (let rest = n; rest > 0; rest = Math.floor(rest / 2)) {
    if (rest % 2 === 1) result = multiply(result, square);
    if (rest > 1) square = multiply(square, square);
  }
  return result;
}

/**
 * How a stands to b, when the radii leave no doubt. "equal" only for two exact equal numbers; "open" when the radii
 * overlap. Decided in exact arithmetic.
 */
export function compareQuantities(a: Quantity, b: Quantity): "less" | "equal" | "greater" | "open" {
  const order = a.value.compare(b.value);
  if (a.radius === 0 && b.radius === 0) return order < 0 ? "less" : order > 0 ? "greater" : "equal";
  if (order === 0 || !Number.isFinite(a.radius) || !Number.isFinite(b.radius)) return "open";
  const reach = fractionOfDouble(a.radius).add(fractionOfDouble(b.radius));
  if (a.value.sub(b.value).abs().compare(reach) <= 0) return "open";
  return order < 0 ? "less" : "greater";
}
