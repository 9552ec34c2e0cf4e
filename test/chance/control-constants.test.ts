/** c4, d2 and d3 against `control-constants.json` (mpmath at 28 digits, other integrals: see `make-fixtures.py`). */
import { describe, expect, test } from "vitest";
import { c4, d2, d3, LARGEST_SAMPLE } from "../../compiler/chance/control-constants.ts";
import { doubleOf, toDouble } from "../../compiler/chance/quantity.ts";
import fixtures from "./control-constants.json" with { type: "json" };
import { rational, relativeError } from "./given.ts";

const FUNCTIONS = { c4, d2, d3 } as const;

test.each(Object.entries(fixtures))("n = %s: to 5e-16, the error within the radius", (n, row) => {
  for (const [name, due] of Object.entries(row)) {
    const found = FUNCTIONS[name as keyof typeof FUNCTIONS](Number(n));
    expect(relativeError(toDouble(found), Number(due)), name).toBeLessThan(5e-16);
    expect(Math.abs(doubleOf(found.value.sub(rational(due)))), name).toBeLessThanOrEqual(found.radius);
    expect(found.radius, name).toBeLessThan(5e-15 * Number(due));
  }
});

// c4(2) = √(2/π), c4(3) = √π/2; d2(2) = 2/√π, d2(3) = 3/√π; d3(2) = √(2 − 4/π): elementary integrals.
test("closed forms for the smallest samples", () => {
  expect(relativeError(toDouble(c4(2)), Math.sqrt(2 / Math.PI))).toBeLessThan(4e-16);
  expect(relativeError(toDouble(c4(3)), Math.sqrt(Math.PI) / 2)).toBeLessThan(4e-16);
  expect(relativeError(toDouble(d2(2)), 2 / Math.sqrt(Math.PI))).toBeLessThan(4e-16);
  expect(relativeError(toDouble(d2(3)), 3 / Math.sqrt(Math.PI))).toBeLessThan(4e-16);
  expect(relativeError(toDouble(d3(2)), Math.sqrt(2 - 4 / Math.PI))).toBeLessThan(1e-15);
});

test("c4 and d2 grow with n, d3 falls from 3 on", () => {
  for (let n = 2; n < 40; n++) {
    expect(toDouble(c4(n + 1))).toBeGreaterThan(toDouble(c4(n)));
    expect(toDouble(d2(n + 1))).toBeGreaterThan(toDouble(d2(n)));
  }
  expect(toDouble(d3(4))).toBeLessThan(toDouble(d3(3)));
  expect(toDouble(d3(40))).toBeLessThan(toDouble(d3(20)));
});

describe("sizes that are none", () => {
  test.each([1, 0, -3, 2.5, Number.NaN, LARGEST_SAMPLE + 1])("%d", (n) => {
    for (const of of Object.values(FUNCTIONS)) expect(() => of(n)).toThrow(RangeError);
  });
});
