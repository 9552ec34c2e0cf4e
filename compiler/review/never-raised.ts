/**
 * Signals that can never be raised, and what prevents it: the condition itself, or what clears its memory. The culprit is
 * found by trial: the policy is compiled again without each thing that clears, and what makes the signal possible is named.
 */
import { type Diagnostic, diagnose } from "../../grammar/diagnostic.ts";
import type { Machine } from "../machine/automaton.ts";
import { buildMachine } from "../machine/build.ts";
import type { Policy, Signal } from "../policy.ts";

/** A warning for each signal that no stream of trials raises. */
export function checkNeverRaised(policy: Policy, machine: Machine, mostStates: number): Diagnostic[] {
  const raised = machine.output.reduce((mask, output) => mask | output, 0);
  return policy.signals.flatMap((signal, index) => {
    if ((raised >>> index) & 1) return [];
    const cause = causeOf(policy, index, mostStates);
    return diagnose("signal_never", signal.span, `"${signal.name}" can never be raised: ${cause}`, {
      hint: `change its condition or what prevents it, or remove the signal`,
      data: { signal: signal.name, cause },
    });
  });
}

/** In words, what keeps a signal from ever being raised. */
function causeOf(policy: Policy, index: number, mostStates: number): string {
  const { condition } = policy.signals[index] as Signal;
  const raisable = (changed: Policy) => {
    const { value } = buildMachine(changed, { mostStates });
    return value?.output.some((output) => ((output >>> index) & 1) === 1) ?? false;
  };
  const suspects = suspectsOf(policy, index);
  if (!raisable(without(policy, suspects)))
    return `no string of trials makes its condition "${condition.text}" hold`;
  const names = (found: readonly Suspect[]) => found.map(({ name }) => name).join(" and ");
  const end = `its memory before "${condition.text}" can hold`;
  const needed = suspects.filter((suspect) => raisable(without(policy, [suspect])));
  if (needed.length === 1) return `${names(needed)} clears ${end}`;
  if (needed.length > 1) return `${names(needed)} between them clear ${end}`;
  const enough = suspects.filter(
    (suspect) =>
      !raisable(
        without(
          policy,
          suspects.filter((other) => other !== suspect),
        ),
      ),
  );
  if (enough.length > 1) return `${names(enough)} each clear ${end}`;
  return `${names(suspects)} between them clear ${end}`;
}

/** Something that may clear the memory of a signal from outside, and the policy without it. */
type Suspect = { readonly name: string; readonly remove: (policy: Policy) => Policy };

function without(policy: Policy, suspects: readonly Suspect[]): Policy {
  return suspects.reduce((left, { remove }) => remove(left), policy);
}

function suspectsOf(policy: Policy, index: number): Suspect[] {
  const suspects: Suspect[] = [];
  if (policy.clearBefore)
    suspects.push({ name: "`clear before`", remove: (from) => ({ ...from, clearBefore: null }) });
  for (const condition of policy.clearAfter)
    suspects.push({
      name: `\`clear after ${condition.text}\``,
      remove: (from) => ({ ...from, clearAfter: from.clearAfter.filter((other) => other !== condition) }),
    });
  if (policy.block)
    suspects.push({ name: `\`blocks of ${policy.block}\``, remove: (from) => ({ ...from, block: null }) });
  policy.signals.forEach((other, at) => {
    if (at !== index && other.response === "restart")
      suspects.push({ name: `the restart of "${other.name}"`, remove: (from) => withOwnResponse(from, at) });
  });
  return suspects;
}

/** The policy with one signal's restart taken back to clearing its own memory. */
function withOwnResponse(policy: Policy, at: number): Policy {
  return {
    ...policy,
    signals: policy.signals.map((signal, index) =>
      index === at ? { ...signal, response: "own" as const } : signal,
    ),
  };
}
