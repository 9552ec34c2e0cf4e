/**
 * The functions under the laws, against `special-functions.json` (mpmath at 60 digits, see `make-fixtures.py`), and against
 * the functions of @stdlib as a second witness.
 */
import stdlibBeta from "@stdlib/math-base-special-betainc";
import stdlibGamma from "@stdlib/math-base-special-gammainc";
import stdlibLogGamma from "@stdlib/math-base-special-gammaln";
import { describe, expect, test } from "vitest";
import * as dd from "../../compiler/chance/double-double.ts";
import { betaTailsOf } from "../../compiler/chance/incomplete-beta.ts";
import { gammaTailsOf } from "../../compiler/chance/incomplete-gamma.ts";
import { logGamma } from "../../compiler/chance/log-gamma.ts";
import { gaussLegendre, integrate } from "../../compiler/chance/quadrature.ts";
import { doubleDoubleOf, doubleOf, fractionOfDouble } from "../../compiler/chance/quantity.ts";
import { rational, relativeError } from "./given.ts";
import fixtures from "./special-functions.json" with { type: "json" };

function pairOf(text: string): dd.DoubleDouble {
  return doubleDoubleOf(rational(text));
}

/** How far a double-double is from a decimal of 40 digits. */
function distance(found: dd.DoubleDouble, due: string): number {
  const exact = fractionOfDouble(found.high).add(fractionOfDouble(found.low));
  return Math.abs(doubleOf(exact.sub(rational(due))));
}

describe("double-double arithmetic", () => {
  // Digits of the constants: OEIS A001113 (e), A002162 (ln 2), A002193 (√2).
  test("e, ln 2, √2 and 1/3 to 31 digits", () => {
    expect(distance(dd.exp(dd.pair(1)), "2.718281828459045235360287471352662497757")).toBeLessThan(1e-30);
    expect(distance(dd.log(dd.pair(2)), "0.6931471805599453094172321214581765680755")).toBeLessThan(1e-31);
    expect(distance(dd.squareRoot(dd.pair(2)), "1.414213562373095048801688724209698078570")).toBeLessThan(
      2e-31,
    );
    const third = dd.divide(dd.pair(1), dd.pair(3));
    expect(distance(third, "0.3333333333333333333333333333333333333333")).toBeLessThan(1e-32);
  });

  test("logarithms at the ends of the doubles, where products would over- or underflow", () => {
    // 300·ln 10, OEIS A002392. Near 1e-300 the low part itself is subnormal and has 8 digits left.
    const due = "690.7755278982137052053974364053092622803";
    expect(distance(dd.log(pairOf("1e300")), due)).toBeLessThan(1e-28);
    expect(distance(dd.log(pairOf("1e-300")), `-${due}`)).toBeLessThan(1e-23);
    expect(dd.exp(dd.pair(800)).high).toBe(Number.POSITIVE_INFINITY);
    expect(dd.exp(dd.pair(-800)).high).toBe(0);
  });
});

test.each(fixtures.logGamma as [string, string][])("ln Γ(%s) to 30 digits", (z, due) => {
  expect(distance(logGamma(pairOf(z)), due)).toBeLessThan(2e-30 * Math.max(1, Math.abs(Number(due))));
  expect(relativeError(stdlibLogGamma(Number(rational(z).valueOf())), Number(due))).toBeLessThan(1e-11);
});

test("gamma tails: relative error below 1e-15 for either tail and the density", () => {
  for (const [shape, x, lower, upper, density] of fixtures.gamma as [
    string,
    string,
    string,
    string,
    string,
  ][]) {
    const found = gammaTailsOf(pairOf(shape))(pairOf(x));
    const where = `shape ${shape}, x ${x}`;
    expect(relativeError(found.lower, Number(lower)), where).toBeLessThan(1e-15);
    expect(relativeError(found.upper, Number(upper)), where).toBeLessThan(1e-15);
    expect(relativeError(found.density, Number(density)), where).toBeLessThan(1e-15);
  }
});

test("beta tails: relative error below 2e-15 for either tail", () => {
  for (const [a, b, x, lower, upper] of fixtures.beta as [string, string, string, string, string][]) {
    const found = betaTailsOf(pairOf(a), pairOf(b))(pairOf(x), doubleDoubleOf(rational(x).neg().add(1n)));
    const where = `a ${a}, b ${b}, x ${x}`;
    expect(relativeError(found.lower, Number(lower)), where).toBeLessThan(2e-15);
    expect(relativeError(found.upper, Number(upper)), where).toBeLessThan(2e-15);
  }
});

test("@stdlib agrees to its own accuracy, 1e-13", () => {
  for (const a of [0.7, 3, 41.5]) {
    for (const x of [0.2, 2, 17, 60]) {
      const { lower, upper } = gammaTailsOf(dd.pair(a))(dd.pair(x));
      expect(relativeError(stdlibGamma(x, a, true, false), lower)).toBeLessThan(1e-13);
      expect(relativeError(stdlibGamma(x, a, true, true), upper)).toBeLessThan(1e-13);
      const place = x / (x + 30);
      const beta = betaTailsOf(dd.pair(a), dd.pair(x))(dd.pair(place), dd.sum(1, -place));
      expect(relativeError(stdlibBeta(place, a, x, true, false), beta.lower)).toBeLessThan(1e-13);
      expect(relativeError(stdlibBeta(place, a, x, true, true), beta.upper)).toBeLessThan(1e-13);
    }
  }
});

test("the ends of the variable", () => {
  expect(gammaTailsOf(dd.pair(2))(dd.pair(0))).toEqual({ lower: 0, upper: 1, density: 0 });
  expect(gammaTailsOf(dd.pair(2))(dd.pair(Number.POSITIVE_INFINITY))).toEqual({
    lower: 1,
    upper: 0,
    density: 0,
  });
  expect(gammaTailsOf(dd.pair(2))(dd.pair(1e300))).toEqual({ lower: 1, upper: 0, density: 0 });
  expect(betaTailsOf(dd.pair(2), dd.pair(3))(dd.pair(0), dd.pair(1))).toEqual({ lower: 0, upper: 1 });
  expect(betaTailsOf(dd.pair(2), dd.pair(3))(dd.pair(1), dd.pair(0))).toEqual({ lower: 1, upper: 0 });
});

describe("Gauss-Legendre quadrature", () => {
  // Abramowitz & Stegun, Table 25.4, n = 16: nodes of the interval (−1, 1), mapped to (0, 1); weights halved.
  test("has the nodes and weights of the tables", () => {
    const { nodes, weights } = gaussLegendre(16);
    expect(2 * nodes[15]! - 1).toBeCloseTo(0.989400934991649, 14);
    expect(2 * weights[15]!).toBeCloseTo(0.027152459411754, 14);
    expect(2 * nodes[8]! - 1).toBeCloseTo(0.09501250983763744, 14);
    expect(2 * weights[8]!).toBeCloseTo(0.1894506104550685, 14);
  });

  test("integrates polynomials of degree 31 exactly, and panels as one", () => {
    expect(
      relativeError(
        integrate((x) => x ** 31, 1, 1),
        1 / 32,
      ),
    ).toBeLessThan(1e-14);
    expect(relativeError(integrate(Math.exp, 5, 1), Math.expm1(5))).toBeLessThan(1e-14);
  });
});
