// Numbers: exact where they can be, with a radius that covers the truth elsewhere, refused before they explode.

import Fraction from "fraction.js";
import { describe, expect, test } from "vitest";
import { doubleOf } from "../../compiler/chance/quantity.ts";
import { around, checkText, codesOf, numberOf, policyOf } from "./policies.ts";

function exactly(expression: string): string {
  const value = numberOf(expression);
  if (!("radius" in value)) throw new Error(value.map(({ message }) => message).join("\n"));
  expect(value.radius, `${expression} is exact`).toBe(0);
  return value.value.toFraction();
}

describe("exact arithmetic", () => {
  test.each([
    ["0.1 + 0.2", "3/10"],
    ["5%", "1/20"],
    ["1e-4 * 3", "3/10000"],
    ["12.50e1", "125"],
    ["-2^2", "-4"],
    ["(-2)^2", "4"],
    ["2^-3", "1/8"],
    ["2^3^2", "512"],
    ["0^0", "1"],
    ["(2/3)^5", "32/243"],
    ["sqrt(9/16)", "3/4"],
    ["sqrt(0)", "0"],
    ["sqrt(10^60)", "1000000000000000000000000000000"],
    ["sqrt(2.25)", "3/2"],
    ["abs(-7/3)", "7/3"],
    ["min(3, 1/2, 2)", "1/2"],
    ["max(3, 1/2, 2)", "3"],
    ["exp(0)", "1"],
    ["ln(1)", "0"],
    ["1 - 1e-300 - 1", `-1/1${"0".repeat(300)}`],
    ["1^(10^300)", "1"],
    ["(-1)^(10^300)", "1"],
    ["0 * 10^300 - 3 * -2", "6"],
    ["7 - 2 - 1", "4"],
    ["8 / 4 / 2", "1"],
  ])("%s is %s", (expression, expected) => {
    expect(exactly(expression)).toBe(expected);
  });
});

describe("double accuracy", () => {
  // Truths to 40 digits, from bc(1).
  test.each([
    ["sqrt(2)", "1.4142135623730950488016887242096980785697"],
    ["sqrt(1e-301)", `0.${"0".repeat(150)}3162277660168379331998893544432718533720`],
    ["exp(1)", "2.7182818284590452353602874713526624977572"],
    ["exp(-20.5)", "0.0000000012501528663867426306461812138967"],
    ["ln(2)", "0.6931471805599453094172321214581765680755"],
    ["ln(1 + 1e-20)", "0.000000000000000000009999999999999999999950000"],
    ["ln(10^300)", "690.7755278982137052053974364053092622803"],
    ["pi", "3.1415926535897932384626433832795028841972"],
    ["sqrt(2) * sqrt(2)", "2"],
    ["upper(normal(0, 1), 2.5%)", "1.9599639845400542355245944305205515279"],
    ["lower(normal(10, 2), 2.5%)", "6.0800720309198915289508111389588969442"],
  ])("%s lies within its radius of the truth", (expression, truth) => {
    const value = numberOf(expression);
    if (!("radius" in value)) throw new Error(value.map(({ message }) => message).join("\n"));
    const distance = Math.abs(doubleOf(value.value.sub(new Fraction(truth))));
    expect(value.radius).toBeGreaterThan(0);
    expect(distance).toBeLessThanOrEqual(value.radius + 1e-39);
    expect(value.radius).toBeLessThan(1e-13 * Math.abs(doubleOf(value.value)) + 1e-300);
  });

  test("the factors of the standard deviation and the range", () => {
    const policy = policyOf(around("let a = c4(5)\nlet b = d2(5)\nlet c = d3(5)"));
    const digits = [...policy.lets.values()].map(({ value }) => doubleOf(value.value).toFixed(3));
    expect(digits).toEqual(["0.940", "2.326", "0.864"]);
  });
});

describe("refused before they explode", () => {
  test.each([
    ["10^(10^9)"],
    ["10^10^10^10"],
    ["1e999999999"],
    ["1e-999999999"],
    ["9^9^9"],
    ["1.0001^100000"],
    ["sqrt(2)^100000"],
    ["exp(710)"],
    ["exp(-800)"],
    ["1e308 * 10"],
    ["1e-300 * 1e-300"],
    [`1${"0".repeat(2000)}`],
    [`0.${"1".repeat(2000)}`],
  ])("%s", (expression) => {
    const begun = performance.now();
    const found = numberOf(expression);
    expect("radius" in found ? "a value" : found.map(({ code }) => code)).toEqual(["number_too_large"]);
    expect(performance.now() - begun).toBeLessThan(500);
  });

  test("a long chain of squares stops at the first that is too long", () => {
    const lets = Array.from({ length: 60 }, (_, i) => `let a${i + 1} = a${i} * a${i} * 1.1`);
    expect(codesOf(around(`let a0 = 1.234567\n${lets.join("\n")}`))).toEqual(["number_too_large"]);
  });
});

describe("names that are no members of a table", () => {
  test.each(["constructor(1)", "toString(1)", "__proto__(1)", "hasOwnProperty(1)"])("%s", (expression) => {
    const found = numberOf(expression);
    expect("radius" in found ? "a value" : found.map(({ code }) => code)).toEqual(["unknown_function"]);
  });

  test("a model, a measure, a unit and a code of such names", () => {
    const text = `policy p
zones x: low < 0 <= high
signal s when high
cadence 5 constructor
process q: x ~ valueOf(1)
require toString(s, q) > 1
allow constructor "why"`;
    expect(codesOf(text)).toEqual(["unknown_unit", "unknown_model", "unknown_measure", "allow_unknown"]);
  });
});

describe("lets", () => {
  test("may be used before they are declared, in any order", () => {
    const policy = policyOf(around("let a = b * 2\nlet b = c + 1\nlet c = 1/3"));
    expect(policy.lets.get("a")?.value.value.toFraction()).toBe("8/3");
  });

  test("a chain of ten thousand is worked out without recursion", () => {
    const lets = Array.from({ length: 10_000 }, (_, i) => `let a${i} = a${i + 1} + 1`);
    const policy = policyOf(around(`${lets.join("\n")}\nlet a10000 = 0`));
    expect(policy.lets.get("a0")?.value.value.toFraction()).toBe("10000");
  });

  test("one fault is told once, not at every use", () => {
    expect(codesOf(around("let a = 1 / 0\nlet b = a + 1\nlet c = a * b\nrule r = a high"))).toEqual([
      "division_by_zero",
    ]);
  });

  test("another value given from outside replaces the expression", () => {
    const text = around("let d = 1.5\nlet e = d * 2");
    const { value } = checkText(text, {}, { lets: new Map([["d", "2 + 1/4"]]) });
    expect(value && "lets" in value ? value.lets.get("e")?.value.value.toFraction() : null).toBe("9/2");
  });

  test.each([
    ["q", "2", "unknown_name"],
    ["d", "2 +", "syntax"],
    ["d", "2 let e = 3", "syntax"],
    ["d", "2 signal t when high", "syntax"],
    ["d", "1 / 0", "division_by_zero"],
    ["d = 3 let d", "2", "syntax"],
    ["d", "oops", "unknown_name"],
  ])("given %s = %s: %s", (name, text, code) => {
    const { value, diagnostics } = checkText(around("let d = 1.5"), {}, { lets: new Map([[name, text]]) });
    expect(value).toBeUndefined();
    expect(diagnostics.map((diagnostic) => diagnostic.code)).toContain(code);
    expect(diagnostics[0]?.span.source.path).toBe("--let");
  });
});
