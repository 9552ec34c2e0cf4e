// Texts with mistakes as they are told, in test/golden/syntax/, and texts in any layout as they are printed, in
// test/golden/format/. UPDATE_GOLDEN=1 writes the expected files.

import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import type { Diagnostic } from "../../grammar/diagnostic.ts";
import { parse } from "../../grammar/parse.ts";
import { print } from "../../grammar/print.ts";
import { renderDiagnostic } from "../../grammar/render.ts";
import { makeSource, positionAt } from "../../grammar/source.ts";
import { expectGolden, orphans } from "../golden.ts";

const SYNTAX = join(import.meta.dirname, "../golden/syntax");
const FORMAT = join(import.meta.dirname, "../golden/format");

function casesOf(folder: string): string[] {
  const names = readdirSync(folder).filter((name) => name.endsWith(".tocsin"));
  return names.map((name) => name.slice(0, -".tocsin".length)).sort();
}

function parseCase(folder: string, name: string) {
  const file = `${name}.tocsin`;
  return parse(makeSource(file, readFileSync(join(folder, file), "utf8")));
}

function jsonOf({ code, severity, span, message, hint, related }: Diagnostic): string {
  const place = ({ source, start, end }: Diagnostic["span"]) => {
    const from = positionAt(source, start);
    const to = positionAt(source, end);
    return { line: from.line, column: from.column, endLine: to.line, endColumn: to.column };
  };
  const others = related?.map((one) => ({ ...place(one.span), message: one.message }));
  return JSON.stringify({ code, severity, ...place(span), message, hint, related: others });
}

describe("syntax errors", () => {
  test.each(casesOf(SYNTAX))("%s", (name) => {
    const { diagnostics } = parseCase(SYNTAX, name);
    expect(diagnostics.length).toBeGreaterThan(0);
    const rendered = diagnostics.map((diagnostic) => renderDiagnostic(diagnostic)).join("\n\n");
    expectGolden(join(SYNTAX, `${name}.expect`), `${rendered}\n\n${diagnostics.map(jsonOf).join("\n")}\n`);
  });

  test("no expected file is without its case", () => {
    expect(orphans(SYNTAX, ".expect", casesOf(SYNTAX))).toEqual([]);
  });
});

describe("canonical text", () => {
  test.each(casesOf(FORMAT))("%s", (name) => {
    const { tree, diagnostics } = parseCase(FORMAT, name);
    expect(diagnostics).toEqual([]);
    const text = print(tree);
    expectGolden(join(FORMAT, `${name}.expect`), text);
    expect(print(parse(makeSource("again.tocsin", text)).tree)).toBe(text);
  });

  test("no expected file is without its case", () => {
    expect(orphans(FORMAT, ".expect", casesOf(FORMAT))).toEqual([]);
  });
});
