// Policies for the tests of the check, from text.

import { type CheckOptions, checkPolicy, isLibrary, type Library } from "../../compiler/check/check.ts";
import type { Policy, Quantity } from "../../compiler/policy.ts";
import type { Diagnostic, Outcome } from "../../grammar/diagnostic.ts";

/** Checks a text, with its libraries by path. */
export function checkText(
  text: string,
  libraries: Readonly<Record<string, string>> = {},
  options: CheckOptions = {},
): Outcome<Policy | Library> {
  const files = new Map([["policy.tocsin", text], ...Object.entries(libraries)]);
  return checkPolicy("policy.tocsin", (path) => files.get(path) ?? null, options);
}

/** A policy that must have no error. */
export function policyOf(
  text: string,
  libraries: Readonly<Record<string, string>> = {},
  options: CheckOptions = {},
): Policy {
  const { value, diagnostics } = checkText(text, libraries, options);
  if (value === undefined || isLibrary(value)) {
    throw new Error(diagnostics.map(({ code, message }) => `${code}: ${message}`).join("\n") || "a library");
  }
  return value;
}

/** The codes found, in the order of the text. */
export function codesOf(text: string, libraries: Readonly<Record<string, string>> = {}): string[] {
  return checkText(text, libraries).diagnostics.map(({ code }) => code);
}

/** A policy around one or more declarations, on `low < 0 <= mid <= 1 < high`. */
export function around(declarations: string): string {
  return `policy p\nzones x: low < 0 <= mid <= 1 < high\nsignal s when high\n${declarations}\n`;
}

/** The value of `let it = EXPRESSION`, or the diagnostics. */
export function numberOf(expression: string): Quantity | readonly Diagnostic[] {
  const { value, diagnostics } = checkText(around(`let it = ${expression}`));
  if (value === undefined || isLibrary(value)) return diagnostics;
  return value.lets.get("it")?.value ?? diagnostics;
}
