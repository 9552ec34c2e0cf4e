/**
 * Quantiles: against printed tables and decimals computed with mpmath at 40 digits, against the tails themselves, and for
 * counts against their definition in exact arithmetic.
 */
import stdlibErfcinv from "@stdlib/math-base-special-erfcinv";
import Fraction from "fraction.js";
import { describe, expect, test } from "vitest";
import { FAMILIES } from "../../compiler/chance/families.ts";
import { lowerQuantile, upperQuantile } from "../../compiler/chance/quantile.ts";
import { doubleOf, exact, fractionOfDouble, fromDouble, toDouble } from "../../compiler/chance/quantity.ts";
import type { Quantity } from "../../compiler/policy.ts";
import { given, rational, relativeError } from "./given.ts";

type Ask = typeof upperQuantile;

function ask(
  of: Ask,
  name: string,
  parameters: readonly (string | Quantity)[],
  p: string | Quantity,
): Quantity {
  const asked = (x: string | Quantity) => (typeof x === "string" ? given(x) : x);
  const found = of(FAMILIES.get(name)!, parameters.map(asked), asked(p));
  if ("refused" in found) throw new Error(found.refused);
  return found;
}

function refusal(
  of: Ask,
  name: string,
  parameters: readonly (string | Quantity)[],
  p: string | Quantity,
): string {
  try {
    return `not refused: ${toDouble(ask(of, name, parameters, p))}`;
  } catch (error) {
    return (error as Error).message;
  }
}

describe("continuous families", () => {
  // mpmath 1.3 at 40 digits: findroot on the logarithm of the tail.
  test.each([
    ["normal", ["0", "1"], "0.025", "1.959963984540054235524594430520551527956"],
    ["normal", ["0", "1"], "0.00135", "2.999976992703393127558426354887211249369"],
    ["normal", ["0", "1"], "1e-9", "5.997807015007686871562310204911537419595"],
    ["normal", ["0", "1"], "1e-20", "9.262340089798407573717356977875325117536"],
    ["normal", ["0", "1"], "1e-300", "37.04709629936119923722296250786043684435"],
    ["normal", ["10", "0.5"], "1e-9", "12.9989035075038434357811551024557687098"],
    ["exponential", ["3"], "1e-300", "2072.326583694641115616192309215927786841"],
    ["weibull", ["2", "1"], "1e-100", "15.17427129385146350862972393549878457394"],
    ["logistic", ["0", "1"], "0.001", "6.906754778648553518553831381799024277843"],
    ["laplace", ["0", "1"], "0.001", "6.214608098422191742636742242594916054728"],
  ] as const)("upper(%s(%j), %s)", (name, parameters, p, due) => {
    const found = ask(upperQuantile, name, parameters, p);
    expect(relativeError(toDouble(found), Number(due))).toBeLessThan(1e-15);
    expect(Math.abs(doubleOf(found.value.sub(rational(due))))).toBeLessThanOrEqual(found.radius);
    expect(found.radius).toBeLessThan(1e-14 * Math.abs(Number(due)));
  });

  // Tables of percentage points in every textbook, for instance Montgomery, Introduction to Statistical Quality Control,
  // appendix tables II to IV; from memory.
  test.each([
    ["student", ["10", "0", "1"], "0.025", 2.228, 3],
    ["student", ["1", "0", "1"], "0.05", 6.314, 3],
    ["student", ["30", "0", "1"], "0.005", 2.75, 2],
    ["chi_square", ["10", "0"], "0.05", 18.307, 3],
    ["chi_square", ["1", "0"], "0.05", 3.841, 3],
    ["chi_square", ["20", "0"], "0.99", 8.26, 2],
  ] as const)("printed: upper(%s(%j), %s) = %d", (name, parameters, p, due, places) => {
    expect(toDouble(ask(upperQuantile, name, parameters, p))).toBeCloseTo(due, places);
  });

  const families: [string, string[]][] = [
    ["normal", ["331.2", "0.63"]],
    ["student", ["4.5", "0", "1"]],
    ["student", ["0.5", "0", "1"]],
    ["laplace", ["1", "2"]],
    ["logistic", ["1", "2"]],
    ["lognormal", ["0.5", "0.25"]],
    ["exponential", ["3"]],
    ["gamma", ["2.5", "1.5"]],
    ["gamma", ["0.4", "1"]],
    ["gamma", ["5000", "1"]],
    ["weibull", ["0.5", "2"]],
    ["chi_square", ["3", "0"]],
    ["chi_square", ["3", "4"]],
    ["uniform", ["2", "5"]],
  ];

  /** The chance on that side of a value. */
  function tailAt(name: string, parameters: readonly string[], x: Quantity, side: "above" | "below"): number {
    const law = FAMILIES.get(name)!.law!(parameters.map(given));
    return law.tails(law.place(x.value, "below"))[side];
  }

  test.each(families)("%s(%j): the tail at the quantile is the chance", (name, parameters) => {
    for (const p of ["1e-100", "1e-12", "0.00135", "0.3", "0.5", "0.75", "0.999999"]) {
      for (const [of, side] of [
        [upperQuantile, "above"],
        [lowerQuantile, "below"],
      ] as const) {
        const x = ask(of, name, parameters, p);
        // The radius of the quantile in terms of the tail: the density there, by a difference.
        const moved = { value: x.value.add(fractionOfDouble(Math.max(x.radius, 1e-300))), radius: 0 };
        const tail = tailAt(name, parameters, x, side);
        const slack = Math.abs(tailAt(name, parameters, moved, side) - tail) + 4e-15 * Number(p);
        expect(Math.abs(tail - Number(p)), `${side} ${p}`).toBeLessThanOrEqual(1.1 * slack);
      }
    }
  });

  test("@stdlib agrees on the normal quantile to its own accuracy, 1e-14", () => {
    for (const p of ["0.4", "0.01", "1e-6", "1e-50"]) {
      const due = Math.SQRT2 * stdlibErfcinv(2 * Number(p));
      expect(relativeError(toDouble(ask(upperQuantile, "normal", ["0", "1"], p)), due)).toBeLessThan(1e-14);
    }
  });

  test("medians of symmetric laws and uniform quantiles are exact", () => {
    for (const name of ["normal", "laplace", "logistic"]) {
      expect(ask(upperQuantile, name, ["331.2", "1"], "0.5")).toEqual(given("331.2"));
    }
    expect(ask(lowerQuantile, "student", ["7", "0.1", "2"], "0.5")).toEqual(given("0.1"));
    expect(ask(upperQuantile, "uniform", ["2", "5"], "1/3")).toEqual(given("4"));
    expect(ask(lowerQuantile, "uniform", ["2", "5"], "1e-250").radius).toBe(0);
    expect(ask(lowerQuantile, "lognormal", ["0", "1"], "0.5")).toEqual(exact(1n));
  });

  test("the radius covers inexact parameters and chances", () => {
    const plain = toDouble(ask(upperQuantile, "gamma", ["2.5", "2"], "0.001"));
    const shaped = ask(upperQuantile, "gamma", [fromDouble(2.5, 1e-6), "2"], "0.001");
    const moved = toDouble(ask(upperQuantile, "gamma", [exact(2.5 + 1e-6), "2"], "0.001"));
    expect(shaped.radius).toBeGreaterThanOrEqual(Math.abs(moved - plain));
    expect(shaped.radius).toBeLessThan(1.1 * Math.abs(moved - plain));
    const centred = ask(upperQuantile, "normal", [fromDouble(3, 0.25), "1"], "0.5");
    expect(centred.radius).toBeGreaterThanOrEqual(0.25);
    expect(centred.radius).toBeLessThan(0.2501);
    const asked = ask(upperQuantile, "normal", ["0", "1"], fromDouble(0.5, 1e-6));
    expect(asked.radius).toBeCloseTo(1e-6 * Math.sqrt(2 * Math.PI), 12);
  });
});

describe("counts", () => {
  /** P(X > k) of the binomial, exactly. */
  function aboveBinomial(n: number, p: Fraction, k: number): Fraction {
    const q = p.neg().add(1n);
    let sum = new Fraction(0n);
    for (let j = k + 1, c = choose(n, k + 1); j <= n; c = (c * BigInt(n - j)) / BigInt(j + 1), j++) {
      sum = sum.add(
        p
          .pow(j)!
          .mul(q.pow(n - j)!)
          .mul(c),
      );
    }
    return sum;
  }

  function choose(n: number, k: number): bigint {
    let c = 1n;
    for (let i = 0; i < k; i++) c = (c * BigInt(n - i)) / BigInt(i + 1);
    return c;
  }

  test("upper: the smallest whole x with P(X > x) ≤ p; lower: the largest with P(X < x) ≤ p, in exact arithmetic", () => {
    for (const text of ["0.3", "1/2"]) {
      const tails = Array.from({ length: 13 }, (_, k) => aboveBinomial(12, rational(text), k));
      // Chances between the tails, and exactly on each of them.
      const chances = [...tails.slice(0, 12), ...["0.001", "0.1", "0.4", "0.9"].map(rational)];
      for (const p of chances) {
        const upper = tails.findIndex((tail) => tail.compare(p) <= 0);
        expect(ask(upperQuantile, "binomial", ["12", text], exact(p))).toEqual(exact(BigInt(upper)));
        // P(X < x) = 1 − P(X > x − 1).
        const notBelow = tails.filter((tail) => tail.neg().add(1n).compare(p) <= 0).length;
        expect(ask(lowerQuantile, "binomial", ["12", text], exact(p))).toEqual(exact(BigInt(notBelow)));
      }
    }
  });

  test("ties of the geometric and the negative binomial are decided exactly", () => {
    expect(ask(upperQuantile, "geometric", ["0.5"], "0.125")).toEqual(exact(2n));
    expect(ask(lowerQuantile, "geometric", ["0.5"], "0.875")).toEqual(exact(3n));
    expect(ask(upperQuantile, "geometric", ["0.1"], exact(rational("0.9").pow(40)!))).toEqual(exact(39n));
    // P(X ≤ 1) for two successes at 1/2: 1/4 + 2/8.
    expect(ask(upperQuantile, "negative_binomial", ["2", "0.5"], "0.5")).toEqual(exact(1n));
    expect(ask(lowerQuantile, "negative_binomial", ["2", "0.5"], "0.5")).toEqual(exact(2n));
  });

  // P(X ≤ 9) = 0.99187, P(X ≤ 10) = 0.99716 for mean 4: standard tables, as in test/published.
  test("of the Poisson, from standard tables", () => {
    expect(ask(upperQuantile, "poisson", ["4"], "0.0082")).toEqual(exact(9n));
    expect(ask(upperQuantile, "poisson", ["4"], "0.0081")).toEqual(exact(10n));
    expect(ask(lowerQuantile, "poisson", ["4"], "0.9918")).toEqual(exact(9n));
    expect(ask(lowerQuantile, "poisson", ["4"], "0.9919")).toEqual(exact(10n));
    expect(ask(lowerQuantile, "poisson", ["4"], "1e-20")).toEqual(exact(0n));
    const far = toDouble(ask(upperQuantile, "poisson", ["100000000"], "1e-9"));
    expect(Math.abs(far - 1e8 - 5.9978 * 1e4)).toBeLessThan(20);
  });

  test("are refused where the parameters leave them open", () => {
    expect(ask(upperQuantile, "poisson", [fromDouble(4, 1e-12)], "0.0082")).toEqual(exact(9n));
    expect(refusal(upperQuantile, "poisson", [fromDouble(4, 1)], "0.0082")).toBe(
      "the mean of poisson is not known well enough",
    );
    expect(refusal(upperQuantile, "geometric", ["0.5"], fromDouble(0.125, 1e-17))).toBe(
      "P(X > 2) comes too close to 0.125 to tell",
    );
  });
});

describe("refusals", () => {
  test.each([
    ["normal", ["0", "1"], "0", "the chance must be above 0 and below 1"],
    ["normal", ["0", "1"], "1", "the chance must be above 0 and below 1"],
    ["normal", ["0", "1"], "1e-301", "the chance must not be nearer than 1e-300 to 0 or 1"],
    ["student", ["0.5", "0", "1"], "1e-290", "the quantile lies too far out to be found"],
    ["geometric", ["1e-20"], "1e-9", "the quantile is too large to be found"],
    ["signed_rank", ["10"], "0.1", "quantiles of signed_rank are not built in this version"],
  ] as const)("%s(%j) at %s", (name, parameters, p, message) => {
    expect(refusal(upperQuantile, name, parameters, p)).toBe(message);
  });
});
