// `tocsin replay --state`: stopping anywhere and going on is as if nothing had stopped; a state that is not of this policy
// and these options is refused, and a refusal or a fault leaves the file as it was.

import { mkdirSync, rmSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { jsonLines, placeWith } from "./command.ts";

const WIDE = `policy wide "Everything that is remembered"

zones   x: low < 0 <= mid < 2 <= high
letters v: good, bad

missing break
blocks of 7

signal run  when 2 high gap 1 of mid           quiet for 2
signal both when high then bad within 4
signal odd  when 2 separate [bad 1..2 good bad] restart
clear after 3 low
`;
const OTHER = WIDE.replace("gap 1 of mid", "gap 2 of mid");

/** A table of 40 rows of two streams that raises every signal, with values missing. */
const ROWS = Array.from({ length: 40 }, (_, i) => {
  const x = i % 11 === 5 ? "" : (((i * 37) % 23) / 3 - 3).toFixed(2);
  return `${x},${(i * 5) % 3 === 0 ? "bad" : "good"},${i % 3 === 0 ? "B" : "A"}`;
});
const table = (rows: readonly string[]) => `x,v,line\n${rows.map((row) => `${row}\n`).join("")}`;

const { folder, tocsin, write, read, files } = placeWith({
  "wide.tocsin": WIDE,
  "other.tocsin": OTHER,
  "numbers.tocsin": "policy p\nzones x: low <= 1 < high\nsignal s when 2 high\n",
});

type Line = { readonly row?: number };

/** The lines of signals, their rows in the whole table; and the trials counted. */
function replay(policy: string, data: string, from: number, ...options: string[]) {
  const { status, stdout, stderr } = tocsin(["replay", policy, "-", "--json", ...options], data);
  expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
  const lines = jsonLines(stdout) as Line[];
  const { summary } = lines.pop() as { summary: { trials: number; unfinishedRows: number } };
  return { lines: lines.map((line) => ({ ...line, row: (line.row ?? 0) + from })), summary };
}

describe("going on", () => {
  test.each([0, 1, 6, 7, 13, 25, 39, 40])("after %i of 40 rows, of two streams", (stop) => {
    const whole = replay("wide.tocsin", table(ROWS), 0, "--stream", "line");
    expect(whole.lines.length).toBeGreaterThan(4);
    const state = `split-${stop}.json`;
    const parts = [
      replay("wide.tocsin", table(ROWS.slice(0, stop)), 0, "--stream", "line", "--state", state),
      replay("wide.tocsin", table(ROWS.slice(stop)), stop, "--stream", "line", "--state", state),
    ];
    expect(parts.flatMap(({ lines }) => lines)).toEqual(whole.lines);
    expect(parts.reduce((sum, { summary }) => sum + summary.trials, 0)).toBe(whole.summary.trials);
  });

  test("row by row, with subgroups that are not full", () => {
    const values = ["3", "4", "1e308", "1e308", "inf", "2", "3", "", "2", "9", "9"];
    const data = (rows: readonly string[]) => `x\n${rows.map((row) => `${row}\n`).join("")}`;
    const options = ["--subgroup", "3"];
    const whole = replay("numbers.tocsin", data(values.map((value) => value || "NaN")), 0, ...options);
    const parts = values.map((value, row) =>
      replay("numbers.tocsin", data([value || "NaN"]), row, ...options, "--state", "rows.json"),
    );
    expect(parts.flatMap(({ lines }) => lines)).toEqual(whole.lines);
    expect(parts.at(-1)?.summary.unfinishedRows).toBe(whole.summary.unfinishedRows);
  });

  test("with trials written out", () => {
    const feed = (trials: string) =>
      tocsin(["replay", "numbers.tocsin", "--letters", trials, "--state", "letters.json"]).stdout;
    expect(feed("low high")).toBe("2 trials; signals raised: s 0\n");
    expect(feed("high")).toBe(
      "trial 3  row 1  x high  s — 2 high, trials 2 to 3\n1 trial; signals raised: s 1\n",
    );
  });
});

describe("refused", () => {
  const options = ["--stream", "line", "--state", "kept.json"];
  const start = () => {
    rmSync(join(folder, "kept.json"), { force: true });
    expect(tocsin(["replay", "wide.tocsin", "-", ...options], table(ROWS.slice(0, 9))).status).toBe(0);
    return read("kept.json");
  };

  test.each<[string, string[], string]>([
    ["another policy", ["other.tocsin", "-", ...options], "this is the state of another machine"],
    ["no streams", ["wide.tocsin", "-", "--state", "kept.json"], "it was written with another --stream"],
    [
      "another column of streams",
      ["wide.tocsin", "-", "--stream", "v", "--state", "kept.json"],
      "another --stream",
    ],
  ])("for %s, with what to do", (_, args, words) => {
    const before = start();
    const { status, stdout, stderr } = tocsin(["replay", ...args], table(ROWS));
    expect({ status, stdout }).toEqual({ status: 2, stdout: "" });
    expect(stderr).toContain(`tocsin: kept.json: `);
    expect(stderr).toContain(words);
    expect(stderr).toContain("remove the file to begin anew");
    expect(read("kept.json")).toBe(before);
  });

  test("for subgroups of another size", () => {
    expect(
      tocsin(["replay", "numbers.tocsin", "-", "--subgroup", "3", "--state", "s.json"], "x\n1\n").status,
    ).toBe(0);
    const { stderr } = tocsin(
      ["replay", "numbers.tocsin", "-", "--subgroup", "4", "--state", "s.json"],
      "x\n1\n",
    );
    expect(stderr).toContain("it was written with another --subgroup");
  });

  test.each<[string, (text: string) => string]>([
    ["nothing", () => ""],
    ["half of it", (text) => text.slice(0, text.length / 2)],
    ["no JSON", () => "state"],
    ["a list", (text) => `[${text}]`],
    ["null", () => "null"],
    ["a number too large", (text) => text.replace(/"state":\d+/, '"state":99999')],
    ["a number that is none", (text) => text.replace(/"trial":\d+/, '"trial":"7"')],
    ["a field left out", (text) => text.replace(/"passedOver":\d+,/, "")],
    ["a stream twice", (text) => text.replace('["B"', '["A"')],
    ["a stream that is no pair", (text) => text.replace('["B",', '["B",0,')],
    ["no streams", (text) => text.replace('"streams":[', '"streams":7,"others":[')],
    ["subgroups of nowhere", (text) => text.replace('"subgroups":[]', '"subgroups":[["A",[[1,2]]]]')],
    ["a machine file", () => tocsin(["emit", "wide.tocsin", "--as", "json"]).stdout],
    ["bytes that are no text", (text) => text.replace("A", "\uFFFD")],
  ])("a state that holds %s, and it stays as it was", (_, spoil) => {
    const good = start();
    const bad = spoil(good);
    expect(bad).not.toBe(good);
    write("kept.json", bad);
    const { status, stdout, stderr } = tocsin(["replay", "wide.tocsin", "-", ...options], table(ROWS));
    expect({ status, stdout }).toEqual({ status: 2, stdout: "" });
    expect(stderr).toMatch(/^tocsin: kept\.json: .*\n$/);
    expect(read("kept.json")).toBe(bad);
  });

  test("a place where nothing can be written, before any data are read", () => {
    mkdirSync(join(folder, "taken"), { recursive: true });
    for (const [state, words] of [
      ["taken", "taken: this is a folder, not a file"],
      ["no/where.json", "no/where.json: there is no such file or folder"],
      ["wide.tocsin/x", "wide.tocsin/x: a part of the path is not a folder"],
    ] as const) {
      const args = ["replay", "wide.tocsin", "nowhere.csv", "--state", state];
      expect(tocsin(args)).toEqual({ status: 2, stdout: "", stderr: `tocsin: ${words}\n` });
    }
  });
});

test("a fault in the data leaves the state as it was, and nothing half-written", () => {
  const args = ["replay", "numbers.tocsin", "-", "--state", "fault.json"];
  expect(tocsin(args, "x\n1\n2\n").status).toBe(0);
  const before = read("fault.json");
  expect(tocsin(args, "x\n1\n2\n3\noops\n").status).toBe(1);
  expect(read("fault.json")).toBe(before);
  expect(files().filter((name) => name.endsWith(".tmp"))).toEqual([]);
});
