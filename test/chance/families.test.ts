/** The table of distributions: what the reference of the language lists, and what each parameter must be. */
import { describe, expect, test } from "vitest";
import { FAMILIES, withDefaults } from "../../compiler/chance/families.ts";
import { exact, fromDouble } from "../../compiler/chance/quantity.ts";
import { given } from "./given.ts";

// language.md, the table of models; the names in brackets have defaults.
const LISTED: readonly (readonly [string, string])[] = [
  ["normal", "mean, sd"],
  ["student", "df, [location], [scale]"],
  ["laplace", "location, scale"],
  ["logistic", "location, scale"],
  ["lognormal", "log_mean, log_sd"],
  ["exponential", "mean"],
  ["gamma", "shape, scale"],
  ["weibull", "shape, scale"],
  ["uniform", "low, high"],
  ["chi_square", "df, [noncentrality]"],
  ["poisson", "mean"],
  ["binomial", "n, p"],
  ["negative_binomial", "r, p"],
  ["geometric", "p"],
  ["signed_rank", "n"],
  ["exceedance", "m, n, j"],
];

test("has the families of the language, with their parameters", () => {
  const found = [...FAMILIES.values()].map(({ name, parameters }) => [
    name,
    parameters.map(({ name, fallback }) => (fallback === null ? name : `[${name}]`)).join(", "),
  ]);
  expect(found).toEqual(LISTED);
});

test("fills in defaults, and tells too few from too many", () => {
  const student = FAMILIES.get("student")!;
  expect(withDefaults(student, [given("5")])).toEqual([given("5"), exact(0n), exact(1n)]);
  expect(withDefaults(student, [given("5"), given("2"), given("3")])?.[2]).toEqual(given("3"));
  expect(withDefaults(student, [])).toBeNull();
  expect(withDefaults(FAMILIES.get("poisson")!, [given("1"), given("2")])).toBeNull();
});

describe("checks", () => {
  test.each([
    ["normal", ["0", "0"], "the standard deviation must be above 0, and is 0"],
    ["normal", ["0", "-1"], "the standard deviation must be above 0, and is -1"],
    ["student", ["0", "0", "1"], "the number of degrees of freedom must be above 0, and is 0"],
    [
      "student",
      ["1e10", "0", "1"],
      "the number of degrees of freedom must be from 1e-6 to 1e9, and is 10000000000",
    ],
    ["gamma", ["1e-7", "1"], "the shape must be from 1e-6 to 1e9, and is 1e-7"],
    ["uniform", ["2", "2"], "the lower end must be below the upper end"],
    ["chi_square", ["3", "-1"], "the noncentrality must be 0 or above, and is -1"],
    ["chi_square", ["3", "1e7"], "the noncentrality must be at most 1e6, and is 10000000"],
    ["poisson", ["0"], "the mean must be above 0, and is 0"],
    ["binomial", ["2.5", "0.1"], "the number n must be a whole number, 1 or above, and is 2.5"],
    ["binomial", ["1e10", "0.1"], "the number n must be at most 1e9, and is 10000000000"],
    ["binomial", ["5", "1.5"], "the chance p must be from 0 to 1, and is 1.5"],
    ["negative_binomial", ["2", "0"], "the chance p must be above 0 and at most 1, and is 0"],
    ["negative_binomial", ["2", "1e-10"], "the chance p must be at least 1e-9, and is 1e-10"],
    ["lognormal", ["1e7", "1"], "the mean of the logarithm must be from -1e6 to 1e6, and is 10000000"],
    ["lognormal", ["0", "0"], "the standard deviation of the logarithm must be above 0, and is 0"],
    ["geometric", ["1.01"], "the chance p must be above 0 and at most 1, and is 1.01"],
    ["signed_rank", ["0"], "the number n must be a whole number, 1 or above, and is 0"],
    ["exceedance", ["10", "5", "11"], "the rank j must not be above the size m of the reference sample"],
    ["exceedance", ["10", "5"], "the rank j is missing"],
  ] as const)("%s(%j): %s", (name, parameters, message) => {
    expect(FAMILIES.get(name)!.check(parameters.map(given))).toBe(message);
  });

  test.each([
    ["binomial", ["5", "0"]],
    ["binomial", ["5", "1"]],
    ["geometric", ["1"]],
    ["gamma", ["1e-6", "1e-300"]],
    ["exceedance", ["10", "5", "10"]],
    ["chi_square", ["2.5", "0"]],
  ] as const)("%s(%j) is fine", (name, parameters) => {
    expect(FAMILIES.get(name)!.check(parameters.map(given))).toBeNull();
  });

  test("a parameter whose accuracy leaves the demand open breaks it", () => {
    const message = FAMILIES.get("normal")!.check([exact(0n), fromDouble(1e-17, 1e-16)]);
    expect(message).toBe("the standard deviation must be above 0, and is 1e-17");
    expect(FAMILIES.get("uniform")!.check([exact(0n), fromDouble(1e-17, 1e-16)])).not.toBeNull();
    expect(FAMILIES.get("binomial")!.check([fromDouble(5, 1e-16), given("0.5")])).not.toBeNull();
  });
});
