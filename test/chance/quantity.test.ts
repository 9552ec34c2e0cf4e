/** Exact conversions and radii of `compiler/chance/quantity.ts`. */
import fc from "fast-check";
import Fraction from "fraction.js";
import { describe, expect, test } from "vitest";
import {
  add,
  compareQuantities,
  divide,
  doubleDoubleOf,
  doubleDoubleOfRatio,
  doubleOf,
  exact,
  fractionOfDouble,
  fromDouble,
  multiply,
  negate,
  power,
  subtract,
  toDouble,
} from "../../compiler/chance/quantity.ts";
import type { Quantity } from "../../compiler/policy.ts";
import { given, rational } from "./given.ts";

const finite = fc.double({ noNaN: true, noDefaultInfinity: true });
const moderate = fc.double({ noNaN: true, min: -1e6, max: 1e6 });
const radius = fc.double({ noNaN: true, min: 0, max: 1 });

describe("doubles and fractions", () => {
  test("every double has an exact fraction, which gives it back", () => {
    fc.assert(
      fc.property(finite, (x) => {
        expect(doubleOf(fractionOfDouble(x))).toBe(x === 0 ? 0 : x);
      }),
      { numRuns: 2000 },
    );
    expect(fractionOfDouble(0.1).toFraction()).toBe("3602879701896397/36028797018963968");
    expect(fractionOfDouble(-5e-324).d).toBe(2n ** 1074n);
    expect(() => fractionOfDouble(Number.NaN)).toThrow(RangeError);
    expect(() => exact(Number.POSITIVE_INFINITY)).toThrow(RangeError);
  });

  // The engine's own reading of a decimal is correctly rounded (ECMA-262, StringToNumber).
  test("rounding is that of the engine's decimals, at every size", () => {
    const decimal = fc.tuple(fc.bigInt({ min: 1n, max: 10n ** 40n }), fc.integer({ min: -370, max: 300 }));
    fc.assert(
      fc.property(decimal, ([digits, exponent]) => {
        expect(doubleOf(rational(`${digits}e${exponent}`))).toBe(Number(`${digits}e${exponent}`));
      }),
      { numRuns: 3000 },
    );
  });

  test.each([
    "1.7976931348623157e308",
    "1.7976931348623158e308",
    "1.7976931348623159e308",
    "1e400",
    "5e-324",
    "2.4703282292062328e-324",
    "2.4703282292062327e-324",
    "1e-400",
    "2.2250738585072014e-308",
    "2.2250738585072011e-308",
    "9007199254740993",
    "9007199254740995",
    "9007199254740992.99999999999999999",
  ])("%s, at an edge of the doubles, rounds as the engine has it", (text) => {
    expect(doubleOf(rational(text))).toBe(Number(text));
    expect(doubleOf(rational(text).neg())).toBe(-Number(text));
  });

  test("halves of the last place go to the even neighbour", () => {
    const half = new Fraction(1n, 2n ** 53n);
    expect(doubleOf(half.add(1n))).toBe(1);
    expect(doubleOf(half.mul(3n).add(1n))).toBe(1 + 2 ** -51);
    expect(doubleOf(new Fraction(1n, 2n ** 1075n))).toBe(0);
    expect(doubleOf(new Fraction(3n, 2n ** 1075n))).toBe(2 ** -1073);
  });

  test("a double-double leaves less than 2^-105 of the fraction over", () => {
    const natural = fc.bigInt({ min: 1n, max: 2n ** 300n });
    fc.assert(
      fc.property(natural, natural, (n, d) => {
        const f = new Fraction(n, d);
        const { high, low } = doubleDoubleOfRatio(-n, d);
        expect(high).toBe(-doubleOf(f));
        const rest = f.add(fractionOfDouble(high)).add(fractionOfDouble(low)).div(f);
        expect(Math.abs(doubleOf(rest))).toBeLessThan(2 ** -105);
      }),
      { numRuns: 2000 },
    );
    expect(doubleDoubleOf(rational("1e-310"))).toEqual({ high: 1e-310, low: 0 });
    expect(doubleDoubleOf(rational("1e310"))).toEqual({ high: Number.POSITIVE_INFINITY, low: 0 });
    expect(doubleDoubleOf(rational("0"))).toEqual({ high: 0, low: 0 });
  });
});

describe("radii", () => {
  /** The ends of the interval a quantity stands for. */
  const ends = ({ value, radius }: Quantity) =>
    [value.sub(fractionOfDouble(radius)), value.add(fractionOfDouble(radius))] as const;

  /** Fails unless the result holds what the operation makes of every pair of ends. */
  function expectInside(
    result: Quantity,
    a: Quantity,
    b: Quantity,
    of: (x: Fraction, y: Fraction) => Fraction,
  ) {
    if (!Number.isFinite(result.radius)) return;
    const [low, high] = ends(result);
    for (const x of ends(a)) {
      for (const y of ends(b)) {
        expect(of(x, y).compare(low)).toBeGreaterThanOrEqual(0);
        expect(of(x, y).compare(high)).toBeLessThanOrEqual(0);
      }
    }
  }

  test("cover every value of the operands", () => {
    fc.assert(
      fc.property(moderate, radius, moderate, radius, (x, rx, y, ry) => {
        const [a, b] = [fromDouble(x, rx), fromDouble(y, ry)];
        expectInside(add(a, b), a, b, (p, q) => p.add(q));
        expectInside(subtract(a, b), a, b, (p, q) => p.sub(q));
        expectInside(multiply(a, b), a, b, (p, q) => p.mul(q));
        if (Math.abs(y) > ry * 1.0001) expectInside(divide(a, b), a, b, (p, q) => p.div(q));
      }),
      { numRuns: 100 },
    );
  });

  test("are 0 for exact operands, whatever their size", () => {
    const huge = given("1e400");
    expect(multiply(huge, huge)).toEqual({ value: rational("1e800"), radius: 0 });
    expect(divide(given("1"), given("3")).value.toFraction()).toBe("1/3");
    expect(multiply(fromDouble(1, 0.5), exact(0n))).toEqual(exact(0n));
    expect(multiply(fromDouble(1e-30, 1e-40), huge).radius).toBeGreaterThanOrEqual(0);
    expect(negate(fromDouble(2, 0.25))).toEqual(fromDouble(-2, 0.25));
  });

  test("a divisor that may be 0 leaves everything open", () => {
    const open = divide(given("1"), fromDouble(1e-20, 1e-19));
    expect(open.radius).toBe(Number.POSITIVE_INFINITY);
    expect(compareQuantities(open, given("5"))).toBe("open");
    expect(() => divide(given("1"), exact(0n))).toThrow(RangeError);
  });

  test("long chains of inexact products stay short and true", () => {
    let x = fromDouble(0.5, 1e-16);
    for (let i = 0; i < 300; i++) x = multiply(add(x, exact(1n)), fromDouble(0.25, 1e-18));
    expect(toDouble(x)).toBeCloseTo(1 / 3, 15);
    expect(x.value.d.toString(2).length).toBeLessThan(1100);
    expect(x.radius).toBeLessThan(1e-17);
  });

  test("powers: exact ones exactly, inexact ones with what they lose", () => {
    expect(power(given("2/3"), -3).value.toFraction()).toBe("27/8");
    expect(power(given("7"), 0)).toEqual(exact(1n));
    const grown = power(fromDouble(1.0000001, 1e-30), 5000);
    expect(toDouble(grown)).toBeCloseTo(1.0005001249961156, 14);
    expect(grown.radius).toBeGreaterThan(4.9e-27);
    expect(grown.radius).toBeLessThan(1e-26);
    expect(() => power(given("2"), 0.5)).toThrow(RangeError);
  });
});

describe("comparison", () => {
  test("of exact numbers is exact", () => {
    expect(compareQuantities(given("1/3"), given("0.3333333333333333333333333"))).toBe("greater");
    expect(compareQuantities(exact(0.5), given("1/2"))).toBe("equal");
  });

  test("of inexact numbers is open when their radii meet, also at the same value", () => {
    const half = fromDouble(0.5, 2 ** -20);
    expect(compareQuantities(half, exact(0.5))).toBe("open");
    expect(compareQuantities(half, exact(0.5 + 2 ** -20))).toBe("open");
    expect(compareQuantities(half, exact(0.5 + 2 ** -19))).toBe("less");
    expect(compareQuantities(half, exact(0.25))).toBe("greater");
  });
});
