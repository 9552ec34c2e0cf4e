// Alphabets, SETs and assignments: the trials they name, as symbols.

import { describe, expect, test } from "vitest";
import type { Policy } from "../../compiler/policy.ts";
import { codesOf, policyOf } from "./policies.ts";

const TWO = "policy p\nletters x: a, b, c\nletters y: d, e\nsignal s when a\n";

/** The trials of a SET as pairs of letters. */
function trialsOf(set: string): string[] {
  const policy = policyOf(`${TWO}group it = ${set}`);
  return membersOf(policy, policy.groups[0]?.set ?? new Uint8Array());
}

function membersOf(policy: Policy, set: Uint8Array): string[] {
  const [x, y] = policy.alphabets;
  return [...set.entries()]
    .filter(([, member]) => member === 1)
    .map(([symbol]) => `${x?.letters[Math.floor(symbol / 2)]?.name}${y?.letters[symbol % 2]?.name}`);
}

describe("SETs over two alphabets, the first varying slowest", () => {
  test.each([
    ["a", "ad ae"],
    ["e", "ae be ce"],
    ["any", "ad ae bd be cd ce"],
    ["{a, e}", "ad ae be ce"],
    ["a & e", "ae"],
    ["{a, b} & d", "ad bd"],
    ["any except a", "bd be cd ce"],
    ["any except a except d", "be ce"],
    ["any except a & d", "ae bd be cd ce"],
    ["{a, b & e, c except d}", "ad ae be ce"],
    ["{any}", "ad ae bd be cd ce"],
    ["{{a}, {{b}}} & {d}", "ad bd"],
  ])("%s", (set, expected) => {
    expect(trialsOf(set)).toEqual(expected.split(" "));
  });

  test("groups may be used before they are declared", () => {
    const policy = policyOf(`${TWO}group g = h & d\ngroup h = {i, b}\ngroup i = a`);
    expect(membersOf(policy, policy.groups[0]?.set ?? new Uint8Array())).toEqual(["ad", "bd"]);
  });

  test.each(["a & b", "a except x1", "a except {a, b}", "{a, b & c}", "any except {d, e}", "(a)"])(
    "%s holds nothing, or is none",
    (set) => {
      const codes = codesOf(`${TWO}group x1 = a\ngroup it = ${set}`);
      expect(codes).toEqual([set === "(a)" ? "syntax" : "set_empty"]);
    },
  );
});

describe("alphabets", () => {
  test("zones keep their cuts exact, with the letter that owns each", () => {
    const [alphabet] = policyOf(
      "policy p\nzones x: under < 0 <= level <= 0 < over < 1/3 <= far\nsignal s when far",
    ).alphabets;
    expect(alphabet?.cuts.map(({ at, owner }) => [at.value.toFraction(), owner])).toEqual([
      ["0", "above"],
      ["0", "below"],
      ["1/3", "above"],
    ]);
    expect(alphabet?.letters.map(({ name }) => name)).toEqual(["under", "level", "over", "far"]);
  });

  test("a missing value may be a letter of its own, or one that is there", () => {
    const policy = policyOf(
      'policy p\nmissing x: as gone\nmissing y: as e\nzones x: a < 0 <= b\nletters y: d = "D", e = "E"\nsignal s when gone & e',
    );
    expect(policy.alphabets.map(({ letters, missing }) => [letters.length, missing])).toEqual([
      [3, 2],
      [2, 1],
    ]);
    expect(policy.alphabets[1]?.letters.map(({ text }) => text)).toEqual(["D", "E"]);
    expect(policy.symbols).toBe(6);
  });

  test.each([
    ["a < 0 <= b <= 0 < c", []],
    ["a <= 0 < b < 1 <= c", []],
    ["a < 0 < b <= 1 < c", ["cut_unowned"]],
    ["a <= 0 <= b <= 1 < c", ["cut_owned_twice"]],
    ["a < 1 <= b <= 0 < c", ["cuts_not_increasing"]],
    ["a <= 0 < b < 0 <= c", ["cuts_not_increasing"]],
    ["a < 0 <= b < 0 <= c", ["cuts_not_increasing"]],
    ["a < 0 <= b <= 0 < c < 0 <= d", ["cuts_not_increasing"]],
    ["a < 0 <= b < 1e-320 <= c", []],
    ["a < 1 <= b < 1 + 1e-17 <= c", ["cuts_collide"]],
    ["a < sqrt(2) <= b <= sqrt(2) < c", ["open_question"]],
    ["a < sqrt(2) - 1e-14 <= b <= sqrt(2) < c", []],
    ["a < sqrt(4) <= b <= sqrt(4) < c", []],
    ["a < 3 <= b < 2 <= c < 1 <= d", ["cuts_not_increasing", "cuts_not_increasing"]],
    ["a < oops <= b < 2 <= c < 1 <= d", ["unknown_name", "cuts_not_increasing"]],
  ])("%s", (chain, codes) => {
    expect(codesOf(`policy p\nzones x: ${chain}\nsignal s when a`)).toEqual(codes);
  });

  test("two letters are not read from one text, nor any from an empty one", () => {
    const letters = (list: string) => codesOf(`policy p\nletters x: ${list}\nsignal s when a`);
    expect(letters('a = "A", b = "B"')).toEqual([]);
    expect(letters('a = "b", b = "a"')).toEqual([]);
    expect(letters('a = "b", b')).toEqual(["letter_text"]);
    expect(letters('a, b = "a"')).toEqual(["letter_text"]);
    expect(letters('a = " ", b')).toEqual(["letter_text"]);
  });
});

describe("assignments", () => {
  const THREE = "policy p\nzones x: a < 0 <= b <= 1 < c\nsignal s when c\n";

  test.each([
    ["assign c -> b, a -> b", []],
    ["assign {a, c} -> b", []],
    ["assign any -> b", ["assigned_to_itself"]],
    ["assign c -> any", ["assigned_to_itself"]],
    ["assign c -> a, c -> b", ["assigned_twice"]],
    ["assign {a, c} -> b\nassign c -> a", ["assigned_twice"]],
    ["assign c -> b except b", ["set_empty"]],
    ["assign c -> oops", ["unknown_name"]],
    ["assign c -> oops\nrule r = 2 c gap 1", ["unknown_name"]],
    ["assign c -> c\nrule r = 2 c gap 1", ["assigned_to_itself"]],
    ["assign a -> b\nrule r = 2 c gap 1", ["gap_unclear"]],
    ["assign a -> b, c -> b\nrule r = 2 {a, c} gap 1", []],
    ["assign a -> c, c -> b\nrule r = 2 {a, c} gap 1", ["gap_unclear"]],
    ["assign c -> b\nrule r = 2 c gap 0", []],
    ["rule r = 2 c gap 1 of b", []],
    ["rule r = 2 c gap 1 of {b, c}", ["gap_overlap"]],
    ["rule r = 2 c gap 1 of any except c", []],
  ])("%s", (declarations, codes) => {
    expect(codesOf(THREE + declarations)).toEqual(codes);
  });

  test("over two alphabets a letter stands for all trials that have it", () => {
    expect(codesOf(`${TWO}assign a & d -> b`)).toEqual(["assign_unclear"]);
    expect(codesOf(`${TWO}assign a -> d`)).toEqual(["assigned_to_itself"]);
    expect(codesOf(`${TWO}assign a -> b & d\nrule r = 2 a gap 1`)).toEqual([]);
    expect(codesOf(`${TWO}assign {a, e} -> b & d\nrule r = 2 {a, e} gap 1`)).toEqual([]);
    expect(codesOf(`${TWO}assign a -> b, e -> b & d\nrule r = 2 a & e gap 1`)).toEqual(["gap_unclear"]);
    expect(codesOf(`${TWO}assign {a, e} -> b & d\nrule r = 2 a & e gap 1`)).toEqual([]);
    expect(codesOf(`${TWO}assign a -> b & d\nrule r = 2 a except e gap 1`)).toEqual([]);
  });
});
