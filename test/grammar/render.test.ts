// How a diagnostic is shown: where the line is cut, what stands under what, what cannot reach a terminal.

import { describe, expect, test } from "vitest";
import { diagnose } from "../../grammar/diagnostic.ts";
import { type RenderOptions, renderDiagnostic } from "../../grammar/render.ts";
import { makeSource, positionAt } from "../../grammar/source.ts";

function show(text: string, start: number, end: number, options: RenderOptions = {}): string[] {
  const source = makeSource("fill.tocsin", text);
  return renderDiagnostic(diagnose("syntax", { source, start, end }, "wrong"), options).split("\n");
}

test("header, message, line, caret, hint and the other place", () => {
  const source = makeSource("fill.tocsin", "let a = (1\nlet b = 2\n");
  const diagnostic = diagnose("name_case", { source, start: 15, end: 16 }, "one", {
    hint: "two",
    related: [{ span: { source, start: 8, end: 9 }, message: "three" }],
  });
  expect(renderDiagnostic(diagnostic)).toBe(
    [
      "warning[name_case] fill.tocsin:2:5",
      "  one",
      "  2: let b = 2",
      "         ^",
      "  hint: two",
      "  see fill.tocsin:1:9: three",
      "  1: let a = (1",
      "             ^",
    ].join("\n"),
  );
});

describe("the underline", () => {
  test.each([
    ["let abc = 1", 4, 7, "         ^^^"],
    ["let abc = 1", 11, 11, "                ^"],
    ["let abc = 1\n", 12, 12, "     ^"],
    ["", 0, 0, "     ^"],
    ["let a\nlet b", 4, 9, "         ^"],
    ["let 🎈🎈 x", 9, 10, "            ^"],
    ["let 🎈🎈 x", 4, 8, "         ^^"],
    ["\tlet\tx", 5, 6, "     \t   \t^"],
    ["a\r\nbc\rd", 4, 5, "      ^"],
    ["a\r\nbc\rd", 6, 7, "     ^"],
  ])("of %j from %i to %i", (text, start, end, expected) => {
    expect(show(text, start, end)[3]).toBe(expected);
  });
});

describe("long lines", () => {
  const text = `${"a".repeat(300)}XYZ${"b".repeat(300)}`;

  test("are shown around the place", () => {
    const [, , line = "", marks = ""] = show(text, 300, 303, { width: 41 });
    expect(line).toBe(`  1: …${"a".repeat(19)}XYZ${"b".repeat(19)}…`);
    expect(line.slice(marks.indexOf("^"), marks.lastIndexOf("^") + 1)).toBe("XYZ");
  });

  test("at their start and end", () => {
    expect(show(text, 0, 1, { width: 10 })[2]).toBe(`  1: ${"a".repeat(10)}…`);
    expect(show(text, 602, 603, { width: 10 })[2]).toBe(`  1: …${"b".repeat(10)}`);
  });

  test("with a place longer than the view", () => {
    const [, , line = "", marks = ""] = show(text, 100, 500, { width: 20 });
    expect(line).toBe(`  1: …${"a".repeat(20)}…`);
    expect(marks).toBe(`      ${"^".repeat(20)}`);
  });

  test("of a megabyte, in good time", () => {
    const source = makeSource("fill.tocsin", "🎈".repeat(500_000));
    const begun = process.cpuUsage().user;
    for (let i = 0; i < 100; i++) {
      const span = { source, start: 2 * (499_000 + i), end: 2 * (499_010 + i) };
      expect(renderDiagnostic(diagnose("syntax", span, "wrong")).length).toBeLessThan(700);
    }
    expect((process.cpuUsage().user - begun) / 1e6).toBeLessThan(5);
  });
});

test("nothing that acts on a terminal gets through", () => {
  const source = makeSource("a\u001b[2J\u0007.tocsin", "let \u001b]0;x\u0007\u009b \u202Ex\uD800");
  const diagnostic = diagnose("syntax", { source, start: 4, end: 5 }, "found \u001b[1m", { hint: "\u0008" });
  const text = renderDiagnostic(diagnostic);
  expect(text.replaceAll("\n", "")).not.toMatch(/[\p{Cc}\p{Cs}\u202E]/u);
  expect(text).toContain("␛]0;x␇");
});

test("colour comes from the caller, and changes nothing but colour", () => {
  const mark = (name: string) => (text: string) => `<${name}>${text}</${name}>`;
  const paint = { error: mark("e"), strong: mark("s"), quiet: mark("q") };
  const painted = show("let a", 4, 5, { paint });
  expect(painted).toEqual([
    "<e>error[syntax]</e> <q>fill.tocsin:1:5</q>",
    "  <s>wrong</s>",
    "<q>  1: </q>let a",
    "         <e>^</e>",
  ]);
  expect(painted.map((line) => line.replace(/<.*?>/g, ""))).toEqual(show("let a", 4, 5));
});

test.each([
  ["\uFEFFab", 1, 1, 2],
  ["a\nb", 2, 2, 1],
  ["a\r\nb", 3, 2, 1],
  ["a\rb", 2, 2, 1],
  ["🎈b", 2, 1, 2],
  ["ab", 99, 1, 3],
  ["a\n", 2, 2, 1],
])("in %j offset %i is line %i, column %i", (text, offset, line, column) => {
  expect(positionAt(makeSource("x", text), offset)).toEqual({ line, column });
});
