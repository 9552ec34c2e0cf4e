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
    const cause = causeOf(policy, signal, mostStates);
    return diagnose("signal_never", signal.span, `"${signal.name}" can never be raised: ${cause}`, {
      hint: `change its condition or what prevents it, or remove the signal`,
      data: { signal: signal.name, cause },
    });
  });
}

/** In words, what keeps a signal from ever being raised. */
function causeOf(whole: Policy, signal: Signal, mostStates: number): string {
  // Signals that do not restart leave the memory of others alone.
  const signals = whole.signals.filter((other) => other === signal || other.response === "restart");
  const policy: Policy = { ...whole, signals };
  /** Whether it is raised where all is as it is but for some of the suspects; null where that is too large to tell. */
  const raisedWithout = (some: readonly Suspect[]): boolean | null => {
    const changed = some.reduce<Policy>((left, { remove }) => remove(left), policy);
    const { value } = buildMachine(changed, { mostStates });
    const at = changed.signals.indexOf(signal);
    return value ? value.output.some((output) => ((output >>> at) & 1) === 1) : null;
  };
  const suspects = suspectsOf(policy, signal);
  const condition = `"${signal.condition.text}"`;
  if (raisedWithout(suspects) === false) return `no string of trials makes its condition ${condition} hold`;
  const names = (found: readonly Suspect[]) => found.map(({ name }) => name).join(" and ");
  const end = `its memory before ${condition} can hold`;
  const needed = suspects.filter((suspect) => raisedWithout([suspect]) === true);
  if (needed.length === 1) return `${names(needed)} clears ${end}`;
  if (needed.length > 1) return `${names(needed)} between them clear ${end}`;
  const enough = suspects.filter(
    (suspect) => raisedWithout(suspects.filter((other) => other !== suspect)) === false,
  );
  if (enough.length > 1) return `${names(enough)} each clear ${end}`;
  return `${names(suspects)} between them clear ${end}`;
}

/** Something that may clear the memory of a signal from outside, and the policy without it. */
type Suspect = { readonly name: string; readonly remove: (policy: Policy) => Policy };

function suspectsOf(policy: Policy, signal: Signal): Suspect[] {
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
  for (const other of policy.signals)
    if (other !== signal && other.response === "restart")
      suspects.push({
        name: `the restart of "${other.name}"`,
        remove: (from) => ({ ...from, signals: from.signals.filter((one) => one !== other) }),
      });
  return suspects;
}
