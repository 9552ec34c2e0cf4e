// Every diagnostic, as the command shows it: one case or more for each code, in test/golden/diagnostics/.
// A case is CODE.tocsin, or CODE-2.tocsin and so on where a code has several faces; libraries lie in libraries/.

import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { compile } from "../../compiler/compile.ts";
import { DEFAULT_MOST_STATES } from "../../compiler/machine/budget.ts";
import { findingsOf } from "../../compiler/review/findings.ts";
import { catalogue, type Diagnostic } from "../../grammar/diagnostic.ts";
import { renderDiagnostic } from "../../grammar/render.ts";
import { positionAt } from "../../grammar/source.ts";
import { expectGolden, orphans } from "../golden.ts";

const FOLDER = join(import.meta.dirname, "../golden/diagnostics");

const cases = readdirSync(FOLDER)
  .filter((name) => name.endsWith(".tocsin"))
  .map((name) => name.slice(0, -".tocsin".length))
  .sort();

function codeOf(name: string): string {
  return name.replace(/-\d+$/, "");
}

/** What is said of a case by the whole check, the paths as if its folder were the working folder. */
function judge(name: string): readonly Diagnostic[] {
  const read = (path: string) => {
    try {
      return readFileSync(join(FOLDER, path), "utf8");
    } catch {
      return null;
    }
  };
  const path = `${name}.tocsin`;
  return findingsOf(compile(read(path) ?? "", { path, read }), DEFAULT_MOST_STATES);
}

/** Text for people, then one line of JSON for each diagnostic. */
function expectation(diagnostics: readonly Diagnostic[]): string {
  const rendered = diagnostics.map((diagnostic) => renderDiagnostic(diagnostic).trimEnd()).join("\n\n");
  const rows = diagnostics.map(({ code, severity, span, message, hint, data }) => {
    const { line, column } = positionAt(span.source, span.start);
    const { line: endLine, column: endColumn } = positionAt(span.source, span.end);
    return JSON.stringify({ code, severity, line, column, endLine, endColumn, message, hint, data });
  });
  return `${rendered}\n\n${rows.join("\n")}\n`;
}

/** Of what was measured ten digits: further ones tell how close a bound is, which a better solver may change. */
function steady(name: string, text: string): string {
  if (!name.startsWith("require_")) return text;
  return text.replace(/\d+\.\d{10,}/g, (number) => `${Number(number).toPrecision(10)}…`);
}

describe("golden diagnostics", () => {
  test.each(cases)("%s", (name) => {
    const diagnostics = judge(name);
    expect(diagnostics.map(({ code }) => code)).toContain(codeOf(name));
    expectGolden(join(FOLDER, `${name}.expect`), steady(name, expectation(diagnostics)));
  });

  test("every code has a case, and every case a code", () => {
    const shown = new Set(cases.map(codeOf));
    expect(Object.keys(catalogue).filter((code) => !shown.has(code))).toEqual([]);
    expect([...shown].filter((code) => !Object.hasOwn(catalogue, code))).toEqual([]);
  });

  test("no expected file is without its case", () => {
    expect(orphans(FOLDER, ".expect", cases)).toEqual([]);
  });
});
