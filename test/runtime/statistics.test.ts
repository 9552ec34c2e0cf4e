// How a value becomes a letter, checked against a plain reading of the chain of inequalities.

import { describe, expect, test } from "vitest";
import type { CutInFile, StatisticInFile } from "../../runtime/machine-file.ts";
import type { Problem } from "../../runtime/problems.ts";
import { checkStatistic, letterOf, type Statistic } from "../../runtime/statistics.ts";
import { EIGHT_ZONES, GOOD_BAD } from "./machines.ts";

function open(file: StatisticInFile): Statistic {
  const problems: Problem[] = [];
  const statistic = checkStatistic(file, "$", problems);
  expect(problems).toEqual([]);
  return statistic!;
}

function zones(
  cuts: readonly (readonly [number, CutInFile["owner"]])[],
  missing: number | null = null,
): StatisticInFile {
  const letters = Array.from({ length: Math.max(cuts.length, missing ?? 0) + 1 }, (_, i) => `z${i}`);
  return {
    name: "x",
    kind: "zones",
    letters,
    missing,
    cuts: cuts.map(([at, owner]) => ({ at, owner, exact: "0" })),
  };
}

/** From the chain `z0 < cut <= z1 …`: the number of cuts the value lies above, or on and owned above. */
function plainly(cuts: readonly (readonly [number, CutInFile["owner"]])[], value: number): number {
  return cuts.filter(([at, owner]) => value > at || (value === at && owner === "above")).length;
}

describe("zones", () => {
  const above = open(zones([[1.5, "above"]]));
  const below = open(zones([[1.5, "below"]]));

  test.each([
    [above, 1.5, 1],
    [below, 1.5, 0],
    [above, 1.4999999999999998, 0],
    [below, 1.5000000000000002, 1],
    [above, Infinity, 1],
    [above, -Infinity, 0],
    [open(zones([[0, "above"]])), -0, 1],
    [open(zones([[0, "below"]])), -0, 0],
    [open(zones([[-0, "above"]])), 0, 1],
    [open(zones([[-0, "below"]])), 0, 0],
    [open(zones([[0, "above"]])), -5e-324, 0],
    [open(zones([[-1.7976931348623157e308, "above"]])), -Infinity, 0],
    [open(zones([[-1.7976931348623157e308, "above"]])), -1.7976931348623157e308, 1],
    [open(zones([[1.7976931348623157e308, "below"]])), 1.7976931348623157e308, 0],
    [open(zones([[1.7976931348623157e308, "below"]])), Infinity, 1],
  ])("case %#: a value on or beside the cut", (statistic, value, letter) => {
    expect(letterOf(statistic, value)).toBe(letter);
  });

  test("two equal cuts around a letter that owns both", () => {
    const level = open(zones([[0, "above"], [0, "below"]])); // biome-ignore format: as it reads in the language
    expect([-1, -5e-324, -0, 0, 5e-324, 1].map((value) => letterOf(level, value))).toEqual([
      0, 0, 1, 1, 2, 2,
    ]);
  });

  test("any number of cuts, on, beside and between them", () => {
    for (const count of [1, 2, 6, 7, 8, 15, 16, 100, 1000]) {
      const cuts = Array.from({ length: count }, (_, i) => [i * 0.1 - 3, i % 3 ? "above" : "below"] as const);
      const statistic = open(zones(cuts));
      for (const [at] of cuts) {
        for (const value of [at, at - 1e-12, at + 1e-12, at + 0.05]) {
          expect(letterOf(statistic, value)).toBe(plainly(cuts, value));
        }
      }
      for (const value of [-Infinity, -1e300, 1e300, Infinity]) {
        expect(letterOf(statistic, value)).toBe(plainly(cuts, value));
      }
    }
  });

  test("no number is missing, and becomes the letter that stands for it or none", () => {
    const added = open(zones([[0, "above"]], 2));
    const own = open({ ...zones([[0, "above"]]), missing: 0 });
    for (const value of [NaN, undefined, null, "", "12"]) {
      expect(letterOf(above, value)).toBe(-1);
      expect(letterOf(added, value)).toBe(2);
      expect(letterOf(own, value)).toBe(0);
    }
    expect(letterOf(added, Infinity)).toBe(1);
  });
});

describe("letters", () => {
  const statistic = open(GOOD_BAD);
  test.each([
    ["good", 0],
    ["bad", 1],
    ["NOK", 1],
    ["nok", -1],
    ["Good", -1],
    ["", -1],
    [null, -1],
    [undefined, -1],
    [0, -1],
    [NaN, -1],
    ["__proto__", -1],
    ["constructor", -1],
  ])("%s", (value, letter) => {
    expect(letterOf(statistic, value)).toBe(letter);
  });

  test("a text goes before another letter's name", () => {
    const crossed = open({ ...GOOD_BAD, letters: ["a", "b"], texts: ["b", "a"] } as StatisticInFile);
    expect([letterOf(crossed, "a"), letterOf(crossed, "b")]).toEqual([1, 0]);
  });
});

test("the eight zones of the other tests", () => {
  const statistic = open(EIGHT_ZONES);
  expect(
    [-4, -3, -2.5, -1, -0.5, 0, 1, 2.5, 3].map((value) => statistic.letters[letterOf(statistic, value)]),
  ).toEqual(["n4", "n4", "n3", "n2", "n1", "p1", "p2", "p3", "p4"]);
});
