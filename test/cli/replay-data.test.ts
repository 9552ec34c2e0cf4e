// What the data may look like, and what is said of data that cannot be read: what, where, and how to mend it.

import { describe, expect, test } from "vitest";
import { type Content, placeWith } from "./command.ts";

const policy = (missing: string) => `policy p
zones x: low <= 1 < high
${missing}
signal s when 2 high
`;
const { tocsin, write } = placeWith({ "p.tocsin": policy("") });

function replay(data: Content, ...options: string[]) {
  write("data.csv", data);
  return tocsin(["replay", "p.tocsin", "data.csv", ...options]);
}

const TWO_HIGH = "trial 2  row 2  x 3 high  s — 2 high, trials 1 to 2\n2 trials; signals raised: s 1\n";

describe("the same two values", () => {
  test.each<[string, Content]>([
    ["plain", "x\n2\n3\n"],
    ["without an end of line at the end", "x\n2\n3"],
    ["CRLF", "x\r\n2\r\n3\r\n"],
    ["CR", "x\r2\r3\r"],
    ["a byte order mark", "\uFEFFx\n2\n3\n"],
    ["quotes", '"x"\n"2"\n"3"\n'],
    ["space around", " x \n 2 \n\t3\t\n"],
    ["other columns, one of them with line breaks", 'a,x,b\n"1\n2",2,\nz,3,"é ""q"""\n'],
    ["blank lines among several columns", "a,x\n\n1,2\n\n\n1,3\n\n"],
    ["exponents", "x\n+2.0e0\n.3e1\n"],
  ])("%s", (_, data) => {
    const { stdout, ...rest } = replay(data);
    expect(rest).toEqual({ status: 0, stderr: "" });
    expect(stdout).toBe(TWO_HIGH);
  });
});

describe("an empty cell, under each policy for missing values", () => {
  test.each<[string, string, string]>([
    [
      "",
      "row 2  x missing  refused: a value is missing\ntrial 2  row 3  x 3 high  s — 2 high, trials 1 to 2\n2 trials; signals raised: s 1; 1 reading refused\n",
      "says it, and stays",
    ],
    [
      "missing skip",
      "trial 2  row 3  x 3 high  s — 2 high, trials 1 to 2\n2 trials; signals raised: s 1; 1 reading skipped\n",
      "stays",
    ],
    ["missing break", "3 trials; signals raised: s 0; 1 trial broken by a missing value\n", "clears memory"],
    [
      "missing x: as high",
      "trial 2  row 2  x missing high  s — 2 high, trials 1 to 2\n3 trials; signals raised: s 1\n",
      "is a high",
    ],
    ["missing x: as silent", "3 trials; signals raised: s 0\n", "is a letter of its own"],
  ])("%s", (missing, text) => {
    write("m.tocsin", policy(missing));
    for (const cell of ["", "NaN", " nan "]) {
      write("data.csv", `x,a\n2,a\n${cell},a\n3,a\n`);
      expect(tocsin(["replay", "m.tocsin", "data.csv"])).toEqual({ status: 0, stdout: text, stderr: "" });
    }
  });
});

describe("what cannot be read ends the replay at its row, after what came before", () => {
  const LONG = `x\n2\n3\n${"9".repeat(3_000_000)}\n`;
  const NINE = new Uint8Array([0x78, 0x0a, 0x32, 0x0a, 0x33, 0x0a]);
  const bytes = (...more: number[]) => new Uint8Array([...NINE, ...more]);
  test.each<[string, Content, string, string]>([
    ["text", "x\n2\n3\nabc\n", 'data.csv:4: x: "abc" is not a decimal number', "write a number such as 12.5"],
    [
      "a decimal comma",
      'x\n2\n3\n"1,5"\n',
      '"1,5" is not a decimal number',
      "decimals follow a point: write 1.5",
    ],
    ["a unit", "x\n2\n3\n4 mm\n", '"4 mm" is not a decimal number', "write the number alone: 4"],
    [
      "thousands",
      'x\n2\n3\n"1,234,567"\n',
      "is not a decimal number",
      "thousands are not separated: write 1234567",
    ],
    ["a cell too many", "x\n2\n3\n4,5\n", "data.csv:4: ", "hint: "],
    ["a quote that stays open", 'x\n2\n3\n"4\n', "a quote is opened and never closed", "stands in quotes"],
    ["NUL", bytes(0x00, 0x0a), "data.csv:4: there is a NUL character", "UTF-8"],
    [
      "bytes that are not UTF-8",
      bytes(0xe9, 0x0a),
      "data.csv:4: there are bytes in this row that are not UTF-8",
      "Windows-1252",
    ],
    [
      "a huge line",
      LONG,
      "data.csv:4: a row is longer than 1048576 bytes",
      "a quote that is opened and not closed",
    ],
  ])("%s", (_, data, what, hint) => {
    const { status, stdout, stderr } = replay(data);
    expect(status).toBe(1);
    expect(stdout).toBe("trial 2  row 2  x 3 high  s — 2 high, trials 1 to 2\n");
    expect(stderr).toContain(what);
    expect(stderr).toContain(hint);
  });
});

describe("a header that does not fit", () => {
  test.each<[string, Content, string[], string, string]>([
    ["nothing", "", [], "there is no header row: the data are empty", "the first line names the columns"],
    ["only blank lines", "\n\n", [], "there is no header row", "the first line names the columns"],
    [
      "no such column",
      "y,z\n1,2\n",
      [],
      'there is no column "x" for statistic "x"; the columns are "y", "z"',
      "--column STATISTIC=NAME",
    ],
    ["another case", "X\n1\n", [], 'there is no column "x"', 'did you mean "X"?'],
    ["no header", "1\n2\n", [], 'there is no column "x"', "the first line must be a header"],
    ["semicolons", "y;x\n1;2\n", [], 'there is no column "x"', "separate them by commas"],
    ["tabs", "y\tx\n1\t2\n", [], 'there is no column "x"', "separate them by commas"],
    ["a column there twice", "x,x\n1,2\n", [], 'two columns are called "x"', "rename one of them"],
    ["no column for the clock", "x\n1\n", ["--time", "t"], 'there is no column "t"', "hint: "],
    ["no column for streams", "x\n1\n", ["--stream", "s"], 'there is no column "s"', "hint: "],
    [
      "no column of that name",
      "x\n1\n",
      ["--column", "x=Weight"],
      'there is no column "Weight" for statistic "x"',
      "hint: ",
    ],
  ])("%s", (_, data, options, what, hint) => {
    const { status, stdout, stderr } = replay(data, ...options);
    expect({ status, stdout }).toEqual({ status: 1, stdout: "" });
    expect(stderr).toContain(`data.csv:1: `);
    expect(stderr).toContain(what);
    expect(stderr).toContain(hint);
  });

  test("a table without rows is no fault", () => {
    expect(replay("x\n")).toEqual({ status: 0, stdout: "0 trials; signals raised: s 0\n", stderr: "" });
  });
});

test("more streams than memory is kept for are refused, not begun", () => {
  const rows = Array.from({ length: 50_001 }, (_, i) => `2,s${i}\n`);
  const { status, stdout, stderr } = replay(`x,s\n${rows.join("")}`, "--stream", "s");
  expect({ status, stdout }).toEqual({ status: 2, stdout: "" });
  expect(stderr).toBe("tocsin: data.csv: more than 50,000 streams: replay the data in parts\n");
});
