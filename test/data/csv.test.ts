// Recorded data as people's programs write it, good and bad; whole, and a byte at a time.

import { Readable } from "node:stream";
import { describe, expect, test } from "vitest";
import { readCsv } from "../../compiler/data/csv.ts";
import type { Wanted } from "../../compiler/data/header.ts";
import { readAll, shown, X } from "./rows.ts";

const XY: Wanted = { statistics: [{ name: "x", kind: "zones" }, { name: "v", kind: "letters" }] }; // biome-ignore format: short
const utf8 = (text: string) => new TextEncoder().encode(text);
const bytes = (...parts: (string | number)[]) =>
  Uint8Array.from(parts.flatMap((part) => (typeof part === "number" ? [part] : [...utf8(part)])));

describe("good tables", () => {
  const cases: [string, string | Uint8Array, Wanted, string[]][] = [
    ["LF", "x\n1\n2.5\n", X, ["1:2 1", "2:3 2.5"]],
    ["no end of the last line", "x\n1\n2", X, ["1:2 1", "2:3 2"]],
    ["CRLF", "x,v\r\n1,a\r\n2,b\r\n", XY, ["1:2 1 a", "2:3 2 b"]],
    ["CR", "x,v\r1,a\r2,b", XY, ["1:2 1 a", "2:3 2 b"]],
    ["mixed ends", "x\n1\r\n2\r3\n", X, ["1:2 1", "2:3 2", "3:4 3"]],
    ["BOM", "\uFEFFx\n1\n", X, ["1:2 1"]],
    ["a header and nothing else", "x\n", X, []],
    ["columns in another order, and more of them", "t,v,x,w\n9,a,1,8\n", XY, ["1:2 1 a"]],
    ["quotes", '"x","v"\n"1","a ""b"", c"\n', XY, ['1:2 1 a "b", c']],
    ["a line break within quotes", 'x,v\n1,"a\nb"\n2,"c\r\nd"\n3,e\n', XY, ["1:2 1 a\nb", "2:4 2 c\r\nd", "3:6 3 e"]],
    ["space around cells", "x , v\n 1 ,  a b \n", XY, ["1:2 1 a b"]],
    ["space within quotes", 'x,v\n1," a "\n', XY, ["1:2 1  a "]],
    ["empty cells", "x,v\n,a\n2,\n,\n", XY, ["1:2 ? a", "2:3 2 ?", "3:4 ? ?"]],
    ["NaN in any case, quoted empty", 'x,v\nNaN,NaN\nnan,""\n"",b\n', XY, ["1:2 ? NaN", "2:3 ? ?", "3:4 ? b"]],
    ["blank lines between rows of two columns", "x,v\n\n1,a\n  \n2,b\n\n", XY, ["1:3 1 a", "2:5 2 b"]],
    ["blank lines before the header", "\n\nx,v\n1,a\n", XY, ["1:4 1 a"]],
    ["blank lines in one column are empty cells, but not at the end", "x\n1\n\n\n2\n\n\n", X, ["1:2 1", "2:3 ?", "3:4 ?", "4:5 2"]],
    ["letters beyond ASCII", "x,v\n1,Gänsefüßchen 𝄞\n", XY, ["1:2 1 Gänsefüßchen 𝄞"]],
    ["a replacement character of its own", "x,v\n1,\uFFFD\n", XY, ["1:2 1 \uFFFD"]],
    ["names that are those of objects", "__proto__,x\n1,2\n", X, ["1:2 2"]],
  ]; // biome-ignore format: a table a line

  test.each(cases)("%s", async (_, data, wanted, expected) => {
    for (const size of [65536, 1, 2, 3, 7]) {
      const { rows, problems } = await readAll(data, wanted, size);
      expect(problems).toEqual([]);
      expect(shown(rows)).toEqual(expected);
    }
  });

  test("columns by another name, a clock and a stream", async () => {
    const wanted = {
      statistics: [{ name: "x", kind: "zones", column: "Fill (g)" }],
      time: "at",
      stream: "line",
    } as const;
    const { rows } = await readAll("at,line,Fill (g)\n10:00,L2,331\n,,\n", wanted);
    expect(rows).toEqual([
      { kind: "row", row: 1, line: 2, values: [331], time: "10:00", stream: "L2" },
      { kind: "row", row: 2, line: 3, values: [null], time: "", stream: "" },
    ]);
  });

  test("one column for two statistics", async () => {
    const statistics = [{ name: "x", kind: "zones" }, { name: "y", kind: "zones", column: "x" }] as const; // biome-ignore format: short
    expect(shown((await readAll("x\n3\n", { statistics })).rows)).toEqual(["1:2 3 3"]);
  });
});

describe("bad tables: the rows before the fault, and the fault with its place", () => {
  const cases: [string, string | Uint8Array, Wanted, string[], string, string?][] = [
    ["nothing", "", X, [], "data_empty -:1 -"],
    ["blank lines", "\n\n", X, [], "data_empty -:1 -"],
    ["a missing column", "y,z\n1,2\n", X, [], "data_column_missing -:1 x", 'the columns are "y", "z"'],
    ["a near miss", "fil,z\n1,2\n", { statistics: [{ name: "fill", kind: "zones" }] }, [], "data_column_missing -:1 fill", 'did you mean "fil"?'],
    ["another case", "X,z\n1,2\n", X, [], "data_column_missing -:1 x", 'did you mean "X"?'],
    ["semicolons", "x;z\n1;2\n", X, [], "data_column_missing -:1 x", "semicolons"],
    ["tabs", "x\tz\n1\t2\n", X, [], "data_column_missing -:1 x", "tabs"],
    ["no header", "1.5\n2.5\n", X, [], "data_column_missing -:1 x", "the first line must be a header"],
    ["no clock", "x\n1\n", { ...X, time: "t" }, [], "data_column_missing -:1 t", "the clock"],
    ["one name twice", "x,x\n1,2\n", X, [], "data_column_twice -:1 x"],
    ["text for a number", "x,v\n1,a\nhigh,b\n", XY, ["1:2 1 a"], "data_number 2:3 x", '"high" is not a decimal number'],
    ["a row too short", "x,v\n1,a\n2\n3,c\n", XY, ["1:2 1 a"], "data_cells 2:3 -", "has 1 cell where the header has 2"],
    ["a row too long", "x,v\n1,5,a\n", XY, [], "data_cells 1:2 -", "decimals follow a point"],
    ["a quote not closed", 'x,v\n1,a\n2,"b\n3,c\n', XY, ["1:2 1 a"], "data_quote 2:3 -", "never closed"],
    ["a quote within a cell", 'x,v\n1,a"b\n', XY, [], "data_quote 1:2 -", "middle"],
    ["more after a quote", 'x,v\n1,a\n2,"b"c\n', XY, ["1:2 1 a"], "data_quote 2:3 -", "goes on"],
    ["more after a quote and a space", 'x,v\n2,"b" c\n', XY, [], "data_quote 1:2 -", "goes on"],
    ["a quote in the header", 'x,"v\n1,a\n', XY, [], "data_quote -:1 -"],
    ["NUL", bytes("x\n1\n2", 0, "\n3\n"), X, ["1:2 1"], "data_encoding 2:3 -", "NUL"],
    ["UTF-16", bytes(0xff, 0xfe, "x", 0, "\n", 0, "1", 0), X, [], "data_encoding -:1 -", "UTF-16"],
    ["Latin-1", bytes("x,v\n1,a\n2,20 ", 0xb0, "C\n3,c\n"), XY, ["1:2 1 a"], "data_encoding 2:3 -", "Windows-1252"],
    ["half a character at the end", bytes("x,v\n1,a\n2,", 0xc3), XY, ["1:2 1 a"], "data_encoding 2:3 -"],
    ["an overlong form", bytes("x\n1\n", 0xc0, 0x80, "\n"), X, ["1:2 1"], "data_encoding 2:3 -"],
    ["half of a surrogate pair", bytes("x\n1\n", 0xed, 0xa0, 0x80, "\n"), X, ["1:2 1"], "data_encoding 2:3 -"],
    ["after blank lines in one column", "x\n1\n\nhigh\n", X, ["1:2 1", "2:3 ?"], "data_number 3:4 x"],
  ]; // biome-ignore format: a table a line

  test.each(cases)("%s", async (_, data, wanted, expected, place, words = "") => {
    for (const size of [65536, 1, 2, 3, 7]) {
      const { rows, problems } = await readAll(data, wanted, size);
      expect(shown(rows)).toEqual(expected);
      expect(problems.map((one) => `${one.code} ${one.row ?? "-"}:${one.line} ${one.column ?? "-"}`)).toEqual(
        [place],
      );
      expect(`${problems[0]?.what} (${problems[0]?.hint})`).toContain(words);
      expect(problems[0]?.hint).not.toBe("");
    }
  });

  test("all faults of a row, and all columns that are not there", async () => {
    const two: Wanted = { statistics: [{ name: "x", kind: "zones" }, { name: "y", kind: "zones" }] }; // biome-ignore format: short
    expect((await readAll("x,y\na,b\n", two)).problems.map(({ column }) => column)).toEqual(["x", "y"]);
    expect((await readAll("a,b\n1,2\n", two)).problems.map(({ column }) => column)).toEqual(["x", "y"]);
  });

  test("a row longer than the limit, in cells, in one cell, or in quotes", async () => {
    for (const long of [",".repeat(200), "9".repeat(200), `"${"\n".repeat(200)}"`]) {
      for (const size of [65536, 1, 64]) {
        const { rows, problems } = await readAll(`x\n1\n${long}\n2\n`, X, size, 100);
        expect(shown(rows)).toEqual(["1:2 1"]);
        expect(problems.map(({ code, row, line }) => `${code} ${row}:${line}`)).toEqual([
          "data_record_long 2:3",
        ]);
      }
    }
    expect((await readAll(`x\n${"9".repeat(99)}\n`, X, 65536, 100)).problems).toEqual([]);
  });

  test("a row without end is not read to its end", async () => {
    for (const piece of [",", "9", '"\n']) {
      let asked = 0;
      async function* endless() {
        yield piece === "9" ? "x\n" : 'x\n"';
        for (;;) {
          asked++;
          yield piece.repeat(10_000);
        }
      }
      const problems = [];
      for await (const item of readCsv(endless(), X))
        if (item.kind === "problems") problems.push(...item.problems);
      expect(problems).toHaveLength(1);
      expect(asked).toBeLessThan(200);
    }
  });

  test("what the stream itself throws goes through", async () => {
    async function* failing() {
      yield "x\n1\n";
      throw new Error("the disk is gone");
    }
    const read = async () => {
      for await (const item of readCsv(failing(), X)) expect(item.kind).toBe("row");
    };
    await expect(read()).rejects.toThrow("the disk is gone");
  });
});

describe("streaming", () => {
  /** Rows of a sine and a clock, made as they are asked for. */
  async function* table(rows: number, asked: { rows: number }) {
    yield "t,x\n";
    for (let at = 0; at < rows; ) {
      let chunk = "";
      for (const end = Math.min(at + 2000, rows); at < end; at++)
        chunk += `${at},${Math.sin(at).toFixed(9)}\n`;
      asked.rows = at;
      yield new TextEncoder().encode(chunk);
    }
  }

  test("a million rows in bounded memory, no further ahead than a chunk", async () => {
    const asked = { rows: 0 };
    let [count, sum, ahead, most] = [0, 0, 0, 0];
    const before = process.memoryUsage().heapUsed;
    for await (const item of readCsv(table(1_000_000, asked), X)) {
      if (item.kind === "problems") throw new Error(JSON.stringify(item.problems));
      count++;
      sum += item.values[0] as number;
      ahead = Math.max(ahead, asked.rows - count);
      if (count % 10_000 === 0) most = Math.max(most, process.memoryUsage().heapUsed - before);
    }
    expect(count).toBe(1_000_000);
    expect(sum).toBeCloseTo(0.2328, 3);
    expect(ahead).toBeLessThanOrEqual(4000);
    expect(most).toBeLessThan(150e6);
  }, 120_000);

  test("a chunk larger than the memory for it is read in slices", async () => {
    const whole = `x\n${"1\n".repeat(200_000)}`;
    expect((await readAll(whole, X, 2 ** 30)).rows).toHaveLength(200_000);
  });

  test("a live row comes out before the next is written", async () => {
    let taken = 0;
    async function* live() {
      yield "x,v\n";
      for (let row = 1; row <= 50; row++) {
        yield row % 2 ? `${row},"a\n` : `${row},b\r\n`;
        if (row % 2) yield 'b"\n';
        expect(taken).toBe(row);
      }
    }
    for await (const item of readCsv(live(), XY)) {
      taken++;
      expect(item).toMatchObject({ row: taken, values: [taken, taken % 2 ? "a\nb" : "b"] });
    }
    expect(taken).toBe(50);
  });

  test("leaving early closes the source", async () => {
    const source = Readable.from(table(1_000_000, { rows: 0 }));
    for await (const item of readCsv(source, X)) {
      expect(item.kind).toBe("row");
      break;
    }
    expect(source.destroyed).toBe(true);
  });
});
