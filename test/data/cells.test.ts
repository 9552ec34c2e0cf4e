// The cell of a number, and what is said when it holds none.

import { describe, expect, test } from "vitest";
import { numberCell } from "../../compiler/data/cells.ts";

describe("numbers", () => {
  test.each([
    ["0", 0],
    ["-0", -0],
    ["12.50", 12.5],
    ["+3", 3],
    ["-4.25e-3", -0.00425],
    ["1e3", 1000],
    ["1E+03", 1000],
    [".5", 0.5],
    ["5.", 5],
    ["007", 7],
    ["0.1", 0.1],
    ["9007199254740993", 9007199254740992],
    ["1e999", Infinity],
    ["-1e999", -Infinity],
    ["inf", Infinity],
    ["-Infinity", -Infinity],
    ["+INF", Infinity],
    ["", null],
    ["NaN", null],
    ["nan", null],
  ])("%j", (cell, value) => {
    expect(numberCell(cell)).toEqual({ value });
  });
});

describe("none", () => {
  test.each([
    ["12,5", "write 12.5"],
    [",5", "write .5"],
    ["1,234", "if the comma is the decimal point, write 1.234; if it separates thousands, write 1234"],
    ["1,234.5", "write 1234.5"],
    ["1,234,567", "write 1234567"],
    ["1 234", "write 1234"],
    ["1\u00a0234", "write 1234"],
    ["1'234'567", "write 1234567"],
    ["1_000", "write 1000"],
    ["1.234,5", "write 1234.5"],
    ["0x1F", "write it in decimal"],
    ["0b11", "write it in decimal"],
    ["5%", "write the number alone: 5"],
    ["331.2 g", "write the number alone: 331.2"],
    ["n/a", "leave a missing value empty"],
    ["-", "leave a missing value empty"],
    ["null", "leave a missing value empty"],
    ["1e", "write the number alone: 1"],
    ["--1", "leave a missing value empty"],
    ["1.2.3", "write a number such as 12.5"],
    ["²", "write a number such as 12.5"],
    ["١٢", "write a number such as 12.5"],
    ["\u001b[31m", "write a number such as 12.5"],
    ["9".repeat(1e5).concat("x"), "leave a missing value empty"],
  ])("%j", (cell, hint) => {
    const found = numberCell(cell);
    expect(found.value).toBeUndefined();
    if (found.value !== undefined) return;
    expect(found.hint).toContain(hint);
    expect(found.what.length).toBeLessThan(100);
    // biome-ignore lint/suspicious/noControlCharactersInRegex: that there are none is the point
    expect(found.what).not.toMatch(/[\u0000-\u001f]/);
  });

  test("a cell of a megabyte is read in no time", () => {
    const begin = performance.now();
    for (const piece of ["1", ".", "e", "1.", "1,", "1 234"]) numberCell(`${piece.repeat(2 ** 20)}x`);
    expect(performance.now() - begin).toBeLessThan(1000);
  });
});
