/**
 * Chances and factors that others printed. A printed value is met to one unit of its last digit. "From memory" marks a
 * source that was recalled and then confirmed by an independent exact computation.
 */
import { describe, expect, test } from "vitest";
import { c4, d2, d3 } from "../../compiler/chance/control-constants.ts";
import { letterProbabilities } from "../../compiler/chance/letter-probabilities.ts";
import { toDouble } from "../../compiler/chance/quantity.ts";
import { distribution, zones } from "../chance/given.ts";

/** The chance above a cut that the lower letter owns. */
function above(family: string, parameters: readonly string[], cut: string): number {
  const found = letterProbabilities(zones([[cut, "below"]]), distribution(family, parameters));
  return "unbuilt" in found ? Number.NaN : found.high[1]!;
}

function expectPrinted(value: number, printed: string): void {
  const significand = printed.replace(/^0\.0*|e.*$/g, "").replace(".", "");
  const unit = Number(printed) / Number(significand);
  expect(Math.abs(value - Number(printed)), `${value} against ${printed}`).toBeLessThanOrEqual(
    1.000001 * unit,
  );
}

// Abramowitz & Stegun (1964), Handbook of Mathematical Functions, Table 26.1, extended (from memory).
test.each([
  ["1", "0.158655253931457"],
  ["2", "0.0227501319481792"],
  ["3", "0.00134989803163009"],
  ["3.09", "0.00100078247661401"],
])("the upper normal tail at %s is %s", (z, printed) => {
  expectPrinted(above("normal", ["0", "1"], z), printed);
});

// The mean run length of one point beyond 3 standard deviations, either side; Abramowitz & Stegun as above.
test("1/(2Q(3)) = 370.398347345", () => {
  expectPrinted(1 / (2 * above("normal", ["0", "1"], "3")), "370.398347345");
});

// Standard tables of the Poisson distribution, mean 4.
test.each([
  ["9", "0.99187"],
  ["10", "0.99716"],
])("P(X ≤ %s) = %s for a Poisson count of mean 4", (k, printed) => {
  expectPrinted(1 - above("poisson", ["4"], k), printed);
});

// Student's t and chi-square: the 5 % points that every table has, for instance Fisher & Yates (1938), Statistical Tables
// (from memory).
test.each([
  ["student", ["10", "0", "1"], "2.228", 0.025],
  ["student", ["1", "0", "1"], "12.706", 0.025],
  ["student", ["30", "0", "1"], "2.042", 0.025],
  ["chi_square", ["1", "0"], "3.841", 0.05],
  ["chi_square", ["10", "0"], "18.307", 0.05],
  ["chi_square", ["30", "0"], "43.773", 0.05],
] as const)("%s(%j) exceeds %s with chance %d", (family, parameters, cut, chance) => {
  expect(above(family, parameters, cut)).toBeCloseTo(chance, 4);
});

describe("factors for control charts: ASTM (1951), Manual on Quality Control of Materials, Table B2 (from memory; reprinted in Montgomery, Introduction to Statistical Quality Control, appendix VI)", () => {
  test.each([
    [2, "0.7979", "1.128", "0.853"],
    [3, "0.8862", "1.693", "0.888"],
    [4, "0.9213", "2.059", "0.880"],
    [5, "0.9400", "2.326", "0.864"],
    [6, "0.9515", "2.534", "0.848"],
    [10, "0.9727", "3.078", "0.797"],
    [25, "0.9896", "3.931", "0.708"],
  ])("n = %d: c4 %s, d2 %s, d3 %s", (n, forC4, forD2, forD3) => {
    expectPrinted(toDouble(c4(n)), forC4);
    expectPrinted(toDouble(d2(n)), forD2);
    expectPrinted(toDouble(d3(n)), forD3);
  });
});
