// `tocsin replay`: recorded data and trials written out, told line by line, as text and as JSON lines.

import { describe, expect, test } from "vitest";
import { jsonLines, OVEN, placeWith } from "./command.ts";

const DOOR = `policy door "Temperature and door"

zones   heat: cold < 0 <= warm
letters door: open = "O", shut = "S"

missing skip

signal draught when 2 (cold)
signal ajar    when cold & open
`.replace("2 (cold)", "2 cold");
const VALUES = ["100", "104", "101", "105", "104.5", "", "95", "96", "95"];
const { tocsin, write } = placeWith({
  "oven.tocsin": OVEN,
  "door.tocsin": DOOR,
  "values.csv": `taken,heat\n${VALUES.map((value, i) => `08:${10 + i},${value}`).join("\n")}\n`,
  "lines.csv": "t °C,line\n104,A\n104,B\n105,A\n104,A\n105,B\n106,B\n",
});

/** A replay that must be done, as JSON objects: the lines, and the closing summary. */
function replay(...args: string[]) {
  const { status, stdout, stderr } = tocsin(["replay", ...args, "--json"]);
  expect({ status, stderr }).toEqual({ status: 0, stderr: "" });
  const lines = jsonLines(stdout);
  return { lines: lines.slice(0, -1), summary: (lines.at(-1) as { summary: unknown }).summary };
}

describe("lines for people", () => {
  test("one for each signal and each refusal, then a summary", () => {
    expect(tocsin(["replay", "oven.tocsin", "values.csv", "--time", "taken"])).toEqual({
      status: 0,
      stdout: `trial 5  row 5  08:14  heat 104.5 high  act — weak, trials 2 to 5
row 6  08:15  heat missing  refused: a value is missing
trial 7  row 8  08:17  heat 96 low  look — 2 low, trials 6 to 7
8 trials; signals raised: act 1, look 1; 1 reading refused
`,
      stderr: "",
    });
  });

  test("several statistics, streams, and several signals at one trial", () => {
    write("doors.csv", 'heat,door,where\n-1,S,"north ""1"""\n-2,O,"north ""1"""\n1,O,south\n-3,open,south\n');
    expect(tocsin(["replay", "door.tocsin", "doors.csv", "--stream", "where"]).stdout).toBe(
      `north "1"  trial 2  row 2  heat -2 cold  door O open  draught, ajar — 2 cold, trials 1 to 2; cold & open, trial 2
south  trial 2  row 4  heat -3 cold  door open  ajar — cold & open, trial 2
4 trials; signals raised: draught 1, ajar 2
`,
    );
  });

  test("what acts on a terminal is not passed on", () => {
    write("wild.csv", 'heat,door,where\n-1,O,"a\u001b[31m\nb"\n');
    const { stdout } = tocsin(["replay", "door.tocsin", "wild.csv", "--stream", "where"]);
    expect(stdout.split("\n")).toHaveLength(3);
    expect(stdout).toMatch(/^a\uFFFD\[31m\uFFFDb {2}trial 1 /);
  });
});

describe("JSON lines", () => {
  test("trial, row, values, letters, signals and why; a reading refused; the summary", () => {
    expect(replay("oven.tocsin", "values.csv")).toEqual({
      lines: [
        {
          trial: 5,
          row: 5,
          values: { heat: 104.5 },
          letters: { heat: "high" },
          signals: ["act"],
          because: [{ signal: "act", rule: "weak", trials: [2, 5], complete: true }],
        },
        {
          trial: null,
          row: 6,
          values: { heat: null },
          letters: { heat: null },
          signals: [],
          refused: true,
          because: [],
        },
        {
          trial: 7,
          row: 8,
          values: { heat: 96 },
          letters: { heat: "low" },
          signals: ["look"],
          because: [{ signal: "look", rule: "2 low", trials: [6, 7], complete: true }],
        },
      ],
      summary: {
        trials: 8,
        refused: 1,
        skipped: 0,
        broken: 0,
        unfinishedRows: 0,
        signals: { act: 1, look: 1 },
      },
    });
  });

  test("with a clock and streams, each stream with trials of its own", () => {
    const { lines, summary } = replay(
      ...["oven.tocsin", "lines.csv", "--column", "heat=t °C", "--stream", "line", "--time", "line"],
    );
    expect(lines).toMatchObject([
      { trial: 3, row: 4, time: "A", stream: "A", signals: ["act"] },
      { trial: 3, row: 6, time: "B", stream: "B", signals: ["act"] },
    ]);
    expect(summary).toEqual({
      trials: 6,
      refused: 0,
      skipped: 0,
      broken: 0,
      unfinishedRows: 0,
      signals: { act: 2, look: 0 },
    });
  });
});

describe("--subgroup", () => {
  test("takes means, numbered as their last row; what is left over is told", () => {
    write("raw.csv", `heat\n${["103", "105", "104", "104", "103", "106", "99"].join("\n")}\n`);
    expect(replay("oven.tocsin", "raw.csv", "--subgroup", "2")).toMatchObject({
      lines: [{ trial: 3, row: 6, values: { heat: 104.5 }, because: [{ trials: [1, 3] }] }],
      summary: { trials: 3, unfinishedRows: 1 },
    });
    expect(tocsin(["replay", "oven.tocsin", "raw.csv", "--subgroup", "4"]).stdout).toBe(
      "1 trial; signals raised: act 0, look 0; 3 rows left in an unfinished subgroup\n",
    );
  });

  test("is refused for categories, which have no mean", () => {
    const { status, stderr } = tocsin(["replay", "door.tocsin", "doors.csv", "--subgroup", "2"]);
    expect(status).toBe(2);
    expect(stderr).toContain('--subgroup 2: "door" is read as categories, of which there is no mean');
  });
});

describe("--letters", () => {
  test.each<[string, string, string]>([
    [
      "oven",
      "high mid 2 high",
      "trial 4  row 4  heat high  act — weak, trials 1 to 4\n4 trials; signals raised: act 1, look 0\n",
    ],
    [
      "oven",
      "low ? low",
      "row 2  heat missing  refused: a value is missing\ntrial 2  row 3  heat low  look — 2 low, trials 1 to 2\n2 trials; signals raised: act 0, look 1; 1 reading refused\n",
    ],
    [
      "door",
      "(cold, open)",
      "trial 1  row 1  heat cold  door open  ajar — cold & open, trial 1\n1 trial; signals raised: draught 0, ajar 1\n",
    ],
    [
      "door",
      "2 (cold, shut) ?",
      "trial 2  row 2  heat cold  door shut  draught — 2 cold, trials 1 to 2\n2 trials; signals raised: draught 1, ajar 0; 1 reading skipped\n",
    ],
  ])("%s: %s", (policy, trials, text) => {
    expect(tocsin(["replay", `${policy}.tocsin`, "--letters", trials])).toEqual({
      status: 0,
      stdout: text,
      stderr: "",
    });
  });

  test("as JSON has no values", () => {
    expect(replay("oven.tocsin", "--letters", "2 low").lines).toEqual([
      {
        trial: 2,
        row: 2,
        values: null,
        letters: { heat: "low" },
        signals: ["look"],
        because: [{ signal: "look", rule: "2 low", trials: [1, 2], complete: true }],
      },
    ]);
  });
});

test("standard input: data when no file is given or for -, and the policy when the data are a file", () => {
  const data = "heat\n95\n95\n";
  const told = { status: 0, stdout: expect.stringContaining("look — 2 low, trials 1 to 2"), stderr: "" };
  expect(tocsin(["replay", "oven.tocsin"], data)).toEqual(told);
  expect(tocsin(["replay", "oven.tocsin", "-"], data)).toEqual(told);
  write("data.csv", data);
  expect(tocsin(["replay", "-", "data.csv"], OVEN)).toEqual(told);
  expect(tocsin(["replay", "-"], OVEN)).toMatchObject({
    status: 2,
    stderr: "tocsin: the policy and the data cannot both come from standard input\n",
  });
});

test("--let runs another machine", () => {
  expect(replay("oven.tocsin", "values.csv", "--let", "d=4").lines).toHaveLength(1);
});

test.each<[string[], number, string]>([
  [["nowhere.tocsin", "values.csv"], 2, "nowhere.tocsin: there is no such file or folder"],
  [["oven.tocsin", "nowhere.csv"], 2, "nowhere.csv: there is no such file or folder"],
  [["oven.tocsin", "."], 2, ".: this is a folder, not a file"],
  [["oven.tocsin", "values.csv", "more.csv"], 2, "too many arguments"],
  [["oven.tocsin", "values.csv", "--letters", "high"], 2, "--letters stands instead of data"],
  [["oven.tocsin", "--letters", "high", "--subgroup", "2"], 2, "--subgroup is for data"],
  [["oven.tocsin", "--letters", "high", "--stream", "x"], 2, "--stream is for data"],
  [["oven.tocsin", "--letters", "hihg"], 2, "did you mean `high`?"],
  [["oven.tocsin", "--letters", ""], 2, "write it as in --letters 'high mid 2 high'"],
  [["oven.tocsin", "--letters", "high) expect"], 2, "not understood"],
  [["oven.tocsin", "values.csv", "--column", "haet=x"], 2, 'the policy has no statistic "haet"; it has heat'],
  [["oven.tocsin", "values.csv", "--column", "heat"], 2, "Write it as in --column fill=Weight."],
  [["oven.tocsin", "values.csv", "--subgroup", "0"], 2, "A whole number from 1 is due."],
  [["oven.tocsin", "values.csv", "--subgroup", "99999"], 2, "from 1 to 10000"],
  [["oven.tocsin", "values.csv", "--lettres", "x"], 2, "Did you mean --letters?"],
  [["oven.tocsin", "values.csv", "--let", "d=oops"], 1, 'nothing is called "oops"'],
])("replay %j: exit %i, and nothing on standard output", (args, status, words) => {
  const found = tocsin(["replay", ...args]);
  expect({ status: found.status, stdout: found.stdout }).toEqual({ status, stdout: "" });
  expect(found.stderr).toContain(words);
});
