/**
 * Questions about a policy that stand outside its text: a process or trials as typed at a command line, read with the same
 * grammar and checked by the same rules.
 */
import { type Diagnostic, hasErrors, type Outcome } from "../../grammar/diagnostic.ts";
import { parse } from "../../grammar/parse.ts";
import { makeSource } from "../../grammar/source.ts";
import type { ExpectedTrial, Policy, ProcessUse } from "../policy.ts";
import type { Of } from "./declarations.ts";
import { checkExpects } from "./expectations.ts";
import { checkFixedProcess, checkProcessUse } from "./measures.ts";
import { namesOf } from "./process-at.ts";
import { makeScope } from "./scope.ts";
import { numberTrials } from "./trials.ts";
import type { Values } from "./values.ts";

/** A process as in a measure: `steady`, `shifted(1.5)`, or, unless it must be `fixed`, `shifted` for its whole range. */
export function askProcess(policy: Policy, text: string, where: string, fixed: boolean): Outcome<ProcessUse> {
  return ask<"require", ProcessUse>(
    policy,
    `require arl(any, ${text}) >= 0`,
    where,
    "require",
    (declaration, values) => {
      const at = declaration.measure.of?.process.at;
      if (!at || declaration.measure.of?.process.after) return null;
      if (fixed) return checkFixedProcess(at, "after", policy.processes, values);
      return checkProcessUse(at, policy.processes, values);
    },
  );
}

/** Trials as in `expect`. */
export function askTrials(policy: Policy, text: string, where: string): Outcome<readonly ExpectedTrial[]> {
  const trials = numberTrials(policy.alphabets.map(({ letters }) => letters.length));
  if (!trials) return { diagnostics: [] };
  const stream = { alphabets: policy.alphabets, trials };
  return ask(policy, `expect all on ${text}`, where, "expect", (declaration, values) => {
    return checkExpects([declaration], stream, values)[0]?.trials ?? null;
  });
}

/** Parses one declaration of the wanted kind and reads it; spans lie in a source named after where it was typed. */
function ask<K extends "require" | "expect", T>(
  policy: Policy,
  text: string,
  where: string,
  kind: K,
  read: (declaration: Of<K>, values: Values) => T | null,
): Outcome<T> {
  const { tree, diagnostics } = parse(makeSource(where, text));
  if (hasErrors(diagnostics)) return { diagnostics };
  const [declaration, ...more] = tree.declarations;
  if (declaration?.kind !== kind || more.length > 0) return { diagnostics };
  const findings: Diagnostic[] = [];
  const scope = makeScope(namesOf(policy), findings, false);
  const lets = [...policy.lets.values()].map(({ value }) => value);
  const value = read(declaration as Of<K>, { scope, lets, parameters: null });
  return value === null || hasErrors(findings) ? { diagnostics: findings } : { value, diagnostics: findings };
}
