/**
 * The whole check of a policy: what its compilation had to say, what it says of itself held against its machine, and what of
 * all that it allows. In: a compilation. Out: every finding, in the order of the text.
 */
import { type Diagnostic, sortDiagnostics } from "../../grammar/diagnostic.ts";
import { applyAllowances } from "../check/allowances.ts";
import type { Machine } from "../machine/automaton.ts";
import type { Policy } from "../policy.ts";
import { checkContracts } from "./contracts.ts";

/** A policy as far as it could be compiled: with its machine, without one, or with neither. */
type Compiled = {
  readonly policy?: Policy;
  readonly machine?: Machine;
  readonly diagnostics: readonly Diagnostic[];
};

/** Everything there is to say of a policy. */
export function findingsOf({ policy, machine, diagnostics }: Compiled, mostStates: number): Diagnostic[] {
  if (!policy) return sortDiagnostics(diagnostics);
  if (!machine) return sortDiagnostics(withoutIdle(applyAllowances(policy.allowances, diagnostics)));
  const all = [...diagnostics, ...checkContracts(policy, machine, mostStates)];
  return sortDiagnostics(applyAllowances(policy.allowances, all));
}

/** Without a machine nobody looked for all the warnings that may be allowed, so none is known to be idle. */
function withoutIdle(diagnostics: readonly Diagnostic[]): Diagnostic[] {
  return diagnostics.filter(({ code }) => code !== "allow_idle");
}
