// Numbers, texts and characters: what is read, and what is said of the rest. The words of the messages are in the goldens.

import { expect, test } from "vitest";
import { parse } from "../../grammar/parse.ts";
import { makeSource } from "../../grammar/source.ts";
import { spanText } from "../../grammar/span.ts";

function said(text: string): string[] {
  const { diagnostics } = parse(makeSource("policy.tocsin", text));
  return diagnostics.map(({ code, span }) => `${code} ${spanText(span)}`);
}

test.each(["0", "007", "12", "0.05", "12.50", "1e-4", "1E+4", "1e4", "2.5e10", "5%"])("number %s", (text) => {
  expect(said(`let a = ${text}`)).toEqual([]);
});

test.each([
  [".5", ".5"],
  ["5.", "5."],
  ["5.e3", "5.e3"],
  ["1.2.3", "1.2.3"],
  ["12a", "12a"],
  ["1e", "1e"],
  ["1e-", "1e"],
  ["1e5x", "1e5x"],
  ["0x1F", "0x1F"],
  ["1_000", "1_000"],
  ["3._", "3._"],
  [".5.5", ".5.5"],
])("no number: %s", (text, bad) => {
  expect(said(`let a = ${text}`)[0]).toBe(`bad_number ${bad}`);
});

test.each(["[0..3 a]", "[1.. a]", "[1..a]", "[1 .. 3 a]", "[1..\n3 a]"])("limits %s", (text) => {
  expect(said(`rule r = ${text}`)).toEqual([]);
});

test.each([
  ["[..3 a]", "syntax .."],
  ["[0...3 a]", "syntax ..."],
  ["[1.5..3 a]", "syntax 1.5"],
  ["[1..2.5 a]", "syntax 2.5"],
])("no limits: %s", (text, expected) => {
  expect(said(`rule r = ${text}`)).toContain(expected);
});

test.each(['""', '"#"', '"a b"', '"\\""', '"\\\\"', '"émigré ≤ 🎈"', '"\t"'])("text %s", (text) => {
  expect(said(`policy p ${text}`)).toEqual([]);
});

test.each([
  ['"a', 'unterminated_string "a'],
  ['"a\\"', 'unterminated_string "a\\"'],
  ['"', 'unterminated_string "'],
  ['"a\\n"', "syntax \\n"],
  ['"a\\🎈"', "syntax \\🎈"],
  ["'a'", "syntax 'a'"],
  ['"\u0007"', "unexpected_character \u0007"],
  ['"\uD800"', "unexpected_character \uD800"],
  ['"\u2066a\u2069"', "unexpected_character \u2066"],
])("no text: %j", (text, expected) => {
  expect(said(`policy p ${text}`)).toContain(expected);
});

test.each([
  ["let a = 1 $", ["unexpected_character $"]],
  ["let a = 1 $€@ $", ["unexpected_character $€@", "unexpected_character $"]],
  ["let a = 1 🎈🎈", ["unexpected_character 🎈🎈"]],
  ["let naïve = 1", ["unexpected_character naïve"]],
  ["let a = ω + µm2", ["unexpected_character ω", "unexpected_character µm2"]],
  ["let a\u00A0= 1", ["unexpected_character \u00A0"]],
  ["let a = 1 # \u202E", ["unexpected_character \u202E"]],
  ["let a\u0001= 1", ["unexpected_character \u0001"]],
  ["\uFEFF\uFEFFlet a = 1", ["unexpected_character \uFEFF"]],
])("characters of no use in %j", (text, expected) => {
  expect(said(text)).toEqual(expected);
});

test("a NUL makes a file no text, whatever else it holds", () => {
  expect(said("let a = = 1 $\0 .5\0")).toEqual(["not_text \0"]);
});

test("a thousand mistakes are told, and that there are more", () => {
  const { diagnostics } = parse(makeSource("policy.tocsin", "let a 1\n".repeat(1500)));
  expect(diagnostics).toHaveLength(1000);
  expect(diagnostics.at(-1)?.message).toContain("more than 999 syntax errors");
  expect(parse(makeSource("policy.tocsin", "let a 1\n".repeat(1000))).diagnostics.at(-1)?.message).toContain(
    "expected",
  );
});
