// Means of consecutive rows, by stream; subgroups that are not full; and going on from them.

import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type DataItem, readCsv } from "../../compiler/data/csv.ts";
import {
  MOST_IN_SUBGROUP,
  meanOf,
  type OpenSubgroups,
  readSubgroups,
  subgroupMeans,
  subgroupProblem,
  writeSubgroups,
} from "../../compiler/data/subgroups.ts";
import { chunked, collect, X } from "./rows.ts";

const STREAMS = { ...X, stream: "s", time: "t" };

async function means(text: string, size: number, open: OpenSubgroups = new Map(), wanted = X) {
  const { rows, problems } = await collect(subgroupMeans(readCsv(chunked(text), wanted), size, open));
  return {
    rows: rows.map(({ row, line, values, time, stream }) => ({ row, line, values, time, stream })),
    problems,
  };
}

describe("subgroup means", () => {
  test("of every five rows; what is left over is kept", async () => {
    const open: OpenSubgroups = new Map();
    const { rows } = await means("x\n1\n2\n3\n4\n5\n10\n10\n10\n10\n11\n7\n8\n", 5, open);
    expect(rows.map(({ row, line, values }) => [row, line, ...values])).toEqual([[5, 6, 3], [10, 11, 10.2]]); // biome-ignore format: short
    expect([...open]).toEqual([["", [[7], [8]]]]);
  });

  test("by stream, timed as the last row", async () => {
    const open: OpenSubgroups = new Map();
    const text = "t,s,x\n1,a,1\n2,b,10\n3,a,3\n4,b,30\n5,b,7\n";
    const { rows } = await means(text, 2, open, STREAMS);
    expect(rows.map(({ time, stream, values }) => [time, stream, ...values])).toEqual([["3", "a", 2], ["4", "b", 20]]); // biome-ignore format: short
    expect([...open.keys()]).toEqual(["b"]);
  });

  test("a missing value makes the mean missing", async () => {
    const { rows } = await means("x\n1\n\n3\n4\n", 2);
    expect(rows.map(({ values }) => values)).toEqual([[null], [3.5]]);
  });

  test("a problem comes through after the means before it", async () => {
    const { rows, problems } = await means("x\n1\n3\nhigh\n", 2);
    expect(rows.map(({ values }) => values)).toEqual([[2]]);
    expect(problems.map(({ code }) => code)).toEqual(["data_number"]);
  });

  test("subgroups of one are the rows", async () => {
    const open: OpenSubgroups = new Map();
    expect((await means("x\n1\n2\n", 1, open)).rows.map(({ values }) => values)).toEqual([[1], [2]]);
    expect(open.size).toBe(0);
  });
});

describe("going on", () => {
  test("from the subgroups kept, through JSON, is as if never stopped", async () => {
    const row = fc.tuple(fc.constantFrom("a", "b"), fc.constantFrom("1", "2.5", "", "-inf", "inf"));
    const property = fc.asyncProperty(
      fc.array(row),
      fc.nat(20),
      fc.integer({ min: 1, max: 4 }),
      async (all, cut, size) => {
        const text = (rows: typeof all) => `s,x\n${rows.map((cells) => `${cells.join(",")}\n`).join("")}`;
        const wanted = { ...X, stream: "s" };
        const values = async (rows: typeof all, open: OpenSubgroups) =>
          (await means(text(rows), size, open, wanted)).rows.map((mean) => [mean.stream, ...mean.values]);
        const whole: OpenSubgroups = new Map();
        const expected = await values(all, whole);
        const first: OpenSubgroups = new Map();
        const before = await values(all.slice(0, cut), first);
        const second = readSubgroups(JSON.parse(JSON.stringify(writeSubgroups(first))), 1, size)!;
        expect([...before, ...(await values(all.slice(cut), second))]).toEqual(expected);
        expect(new Map(second)).toEqual(whole);
      },
    );
    await fc.assert(property, { seed: 7, numRuns: 200 });
  });

  test.each([
    [null],
    [{}],
    ["[]"],
    [[["a"]]],
    [[["a", []]]],
    [[["a", [[1], [2], [3]]]]],
    [[["a", [[1, 2]]]]],
    [[["a", [["1"]]]]],
    [[["a", [[Number.NaN]]]]],
    [[[1, [[1]]]]],
    [
      [
        ["a", [[1]]],
        ["a", [[1]]],
      ],
    ],
    [[["a", { length: 1 }]]],
  ])("but not from %j", (kept) => {
    expect(readSubgroups(kept, 1, 3)).toBeUndefined();
  });
});

describe("the mean", () => {
  test.each([
    [[1, 2, 4], 7 / 3],
    [[0.1, 0.2, 0.3], 0.2],
    [[1e16, 1, -1e16, 1], 0.5],
    [[1e308, 1e308], 1e308],
    [[-1e308, -1e308, -1e308], -1e308],
    [[Infinity, 1], Infinity],
    [[-Infinity, 1e308, 1e308], -Infinity],
    [[Infinity, -Infinity], null],
    [[1, null], null],
  ])("of %j", (values, mean) => {
    if (mean === null || !Number.isFinite(mean)) expect(meanOf(values)).toBe(mean);
    else expect(Math.abs(meanOf(values)! - mean)).toBeLessThanOrEqual(Math.abs(mean) * 2 ** -52);
  });
});

test("which statistics and sizes can be had", () => {
  const mixed: DataItem["kind"] extends string ? typeof X : never = {
    statistics: [...X.statistics, { name: "v", kind: "letters" }],
  };
  expect(subgroupProblem(X, 5)).toBeUndefined();
  expect(subgroupProblem(mixed, 5)?.what).toBe('"v" is read as categories, of which there is no mean');
  for (const size of [0, -1, 2.5, Number.NaN, MOST_IN_SUBGROUP + 1]) {
    expect(subgroupProblem(X, size)?.code).toBe("data_subgroups");
  }
});
