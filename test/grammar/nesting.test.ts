// The limits that keep every later walk of the tree from overflowing the stack, and hostile texts of a megabyte.

import { describe, expect, test } from "vitest";
import { parse } from "../../grammar/parse.ts";
import { print } from "../../grammar/print.ts";
import { makeSource } from "../../grammar/source.ts";

function codes(text: string): string[] {
  return parse(makeSource("policy.tocsin", text)).diagnostics.map((one) => one.code);
}

/** Each nests `n` deep. */
const deep: Readonly<Record<string, (n: number) => string>> = {
  parentheses: (n) => `rule r = ${"(".repeat(n)}a${")".repeat(n)}`,
  "parentheses of numbers": (n) => `let x = ${"(".repeat(n)}a${")".repeat(n)}`,
  calls: (n) => `let x = ${"f(".repeat(n)}a${")".repeat(n)}`,
  braces: (n) => `group g = ${"{".repeat(n)}a${"}".repeat(n)}`,
  patterns: (n) => `rule r = [${"(".repeat(n - 1)}a${")".repeat(n - 1)}]`,
  repeats: (n) => `rule r = [${"2 (".repeat(n - 1)}a${")".repeat(n - 1)}]`,
  not: (n) => `rule r = ${"not ".repeat(n)}a`,
  "not after a condition": (n) => `rule r = a and b or ${"not ".repeat(n)}a`,
  signs: (n) => `let x = 1 - ${"-".repeat(n)}a`,
  powers: (n) => `let x = ${"2^".repeat(n)}a`,
  "signed powers": (n) => `let x = ${"2^-".repeat(n / 2)}a${n % 2 === 1 ? "^2" : ""}`,
  separate: (n) => `rule r = ${"2 separate ".repeat(n)}a`,
  overlapping: (n) => `rule r = ${"k overlapping ".repeat(n)}a`,
  mixed: (n) => `rule r = ${"not (".repeat(n / 2)}${n % 2 === 1 ? "not " : ""}a${")".repeat(n / 2)}`,
};

describe.each(Object.entries(deep))("%s", (_, make) => {
  test("64 deep is read", () => {
    expect(codes(make(64))).toEqual([]);
  });

  test("65 deep is too deep", () => {
    expect(codes(make(65))).toEqual(["nesting_too_deep"]);
  });

  test("a hundred thousand deep is told of once, in good time", () => {
    expect(codes(`${make(100_000)}\nlet last = 1`)).toEqual(["nesting_too_deep"]);
  });
});

test("what was nested before does not count", () => {
  const pair = "not not not not not not not not (a and b) and ";
  expect(codes(`rule r = ${pair.repeat(100)}a`)).toEqual([]);
  expect(codes(`let x = ${"-1 - -1 - ".repeat(100)} -1`)).toEqual([]);
  expect(codes(`let x = f(${"-2^2, ".repeat(1000)} -1)`)).toEqual([]);
});

const long: Readonly<Record<string, (n: number) => string>> = {
  or: (n) => `rule r = ${"a or ".repeat(n)}a`,
  "and, then": (n) => `rule r = ${"a and b then ".repeat(n / 2)}a`,
  sum: (n) => `let x = ${"1 + ".repeat(n)}1`,
  product: (n) => `let x = ${"2*".repeat(n)}1`,
  meet: (n) => `group g = ${"a & ".repeat(n)}a`,
  except: (n) => `group g = ${"a except ".repeat(n)}a`,
  "first in brackets": (n) => `rule r = (((${"a or ".repeat(n / 2)}a) and b) ${"or a ".repeat(n / 2 - 1)})`,
};

describe.each(Object.entries(long))("a chain of %s", (_, make) => {
  test("1,000 operators are read and printed", () => {
    const { tree, diagnostics } = parse(makeSource("policy.tocsin", make(1000)));
    expect(diagnostics).toEqual([]);
    expect(print(tree).length).toBeGreaterThan(1000);
  });

  test("1,002 are too many", () => {
    expect(codes(make(1002))).toEqual(["nesting_too_deep"]);
  });

  test("a hundred thousand are told of once", () => {
    expect(codes(make(100_000))).toEqual(["nesting_too_deep"]);
  });
});

test("lists are as long as they like", () => {
  expect(codes(`expect s on ${"a 2 b ".repeat(20_000)}`)).toEqual([]);
  expect(codes(`group g = {${"a & b, ".repeat(20_000)}a}`)).toEqual([]);
  expect(codes(`zones z: a ${"< 1 + 2*3 <= b ".repeat(5_000)}`)).toEqual([]);
  expect(codes(`rule r = [${"a & b | ".repeat(10_000)}a]`)).toEqual([]);
  expect(codes("let a = 1 + 2\n".repeat(10_000))).toEqual([]);
});

/** Seconds of this process that parsing takes. */
function secondsOf(text: string): number {
  const begun = process.cpuUsage().user;
  codes(text);
  return (process.cpuUsage().user - begun) / 1e6;
}

test.each(["(", "a ", "é;", "lett x = 5\n", "expect s on a, "])(
  "a megabyte of %j is told of in good time",
  (piece) => {
    expect(secondsOf(piece.repeat(1_000_000 / piece.length))).toBeLessThan(20);
  },
);

test.each([
  "(",
  ")",
  "[(",
  "{a ",
  "a ",
  "a\n",
  "$",
  "$ ",
  "é;",
  "1",
  "1.",
  ".",
  "..",
  '"',
  '\\"',
  "'",
  "#",
  "/",
  "\n",
  "\r",
  "rule ",
  "rule\n",
  "rule x = ",
  "let x 5\n",
  "lett x = 5\n",
  "letters x: a b ",
  "expect s on a, ",
  "assign a -> ",
  "not ",
  "- ",
  "any ",
  "\u{1D11E}",
  "\uD834",
  "e+1",
  "<= ",
])("much of %j is told of in good time, wherever it stands", (piece) => {
  const text = piece.repeat(100_000 / piece.length);
  for (const start of ["", "rule r = ", "let x = ", "policy p "])
    expect(secondsOf(start + text)).toBeLessThan(5);
});
