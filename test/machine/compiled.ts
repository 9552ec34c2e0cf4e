/** Policies as text for the tests of the machine room. */

import { type CompileOptions, compile, type Machine } from "../../compiler/compile.ts";
import type { Policy } from "../../compiler/policy.ts";
import { hasErrors } from "../../grammar/diagnostic.ts";

/** Compiles a text that must be right. */
export function compiled(text: string, options: CompileOptions = {}): { policy: Policy; machine: Machine } {
  const { policy, machine, diagnostics } = compile(text, options);
  if (!policy || !machine || hasErrors(diagnostics))
    throw new Error(
      `not a policy: ${diagnostics.map(({ code, message }) => `${code}: ${message}`).join("\n")}\n${text}`,
    );
  return { policy, machine };
}

/** A policy over letters `a`, `b`, … of one statistic, with one signal. */
export function policyOf(letters: number, condition: string, more = ""): string {
  const names = [...Array(letters).keys()].map((letter) => String.fromCharCode(97 + letter)).join(", ");
  return `policy p\nletters x: ${names}\nsignal s when ${condition}\n${more}`;
}

/** The four zone tests of Western Electric (1956) over eight zones a … h, three sd below to three above. */
export const ZONE_TESTS = `policy zone_tests
letters x: a, b, c, d, e, f, g, h
rule beyond = {a, h}
rule two    = 2 of 3 g or 2 of 3 b
rule four   = 4 of 5 {f, g} or 4 of 5 {b, c}
rule eight  = 8 {e, f, g} or 8 {b, c, d}
signal s when beyond or two or four or eight
`;
