// Every diagnostic of the check, as it is shown: one case or more for each code, in test/golden/diagnostics/.
// A case is CODE.tocsin, or CODE-2.tocsin and so on where a code has several faces; libraries lie in libraries/.

import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { applyAllowances } from "../../compiler/check/allowances.ts";
import { checkPolicy, isLibrary } from "../../compiler/check/check.ts";
import { catalogue, type Diagnostic, sortDiagnostics } from "../../grammar/diagnostic.ts";
import { renderDiagnostic } from "../../grammar/render.ts";
import { positionAt } from "../../grammar/source.ts";
import { expectGolden, orphans } from "../golden.ts";

const FOLDER = join(import.meta.dirname, "../golden/diagnostics");

/** Codes that only a later stage gives: the machine, the analysis, the contracts. Their cases are run elsewhere. */
const LATER: ReadonlySet<string> = new Set([
  "signal_never",
  "too_many_states",
  "measure_not_built",
  "require_fails",
  "require_open",
  "expect_fails",
]);

const cases = readdirSync(FOLDER)
  .filter((name) => name.endsWith(".tocsin"))
  .map((name) => name.slice(0, -".tocsin".length))
  .sort();

function codeOf(name: string): string {
  return name.replace(/-\d+$/, "");
}

/** What is said of a case, the paths as if its folder were the working folder. */
function judge(name: string): readonly Diagnostic[] {
  const read = (path: string) => {
    try {
      return readFileSync(join(FOLDER, path), "utf8");
    } catch {
      return null;
    }
  };
  const { value, diagnostics } = checkPolicy(`${name}.tocsin`, read);
  if (value === undefined || isLibrary(value)) return diagnostics;
  return sortDiagnostics(applyAllowances(value.allowances, diagnostics));
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

describe("golden diagnostics", () => {
  test.each(cases.filter((name) => !LATER.has(codeOf(name))))("%s", (name) => {
    const diagnostics = judge(name);
    expect(diagnostics.map(({ code }) => code)).toContain(codeOf(name));
    expectGolden(join(FOLDER, `${name}.expect`), expectation(diagnostics));
  });

  test("every code of the check has a case, and every case a code", () => {
    const shown = new Set(cases.map(codeOf));
    const due = Object.keys(catalogue).filter((code) => !LATER.has(code));
    expect(due.filter((code) => !shown.has(code))).toEqual([]);
    expect([...shown].filter((code) => !Object.hasOwn(catalogue, code))).toEqual([]);
  });

  test("no expected file is without its case", () => {
    expect(orphans(FOLDER, ".expect", cases)).toEqual([]);
  });
});
