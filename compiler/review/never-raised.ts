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
export function causeOf(policy: Policy, index: number, mostStates: number): string {
  const signal = policy.signals[index] as Signal;
  const raisable = (changed: Policy, at: number) => {
    const { value } = buildMachine(changed, { mostStates });
    return value?.output.some((output) => ((output >>> at) & 1) === 1) ?? false;
  };
  const alone: Policy = { ...policy, signals: [signal], clearBefore: null, clearAfter: [], block: null };
  if (!raisable(alone, 0)) return `no string of trials makes its condition "${signal.condition.text}" hold`;
  const suspects = suspectsOf(policy, index);
  const culprits = suspects.filter(({ without }) => raisable(without, index));
  const named = (culprits.length > 0 ? culprits : suspects).map(({ name }) => name);
  return `${named.join(" or ")} clears its memory before "${signal.condition.text}" can hold`;
}

/** All that may clear the memory of a signal from outside, each with the policy that lacks it. */
function suspectsOf(policy: Policy, index: number): { name: string; without: Policy }[] {
  const suspects: { name: string; without: Policy }[] = [];
  if (policy.clearBefore)
    suspects.push({ name: "`clear before`", without: { ...policy, clearBefore: null } });
  for (const condition of policy.clearAfter) {
    const clearAfter = policy.clearAfter.filter((other) => other !== condition);
    suspects.push({ name: `\`clear after ${condition.text}\``, without: { ...policy, clearAfter } });
  }
  if (policy.block)
    suspects.push({ name: `\`blocks of ${policy.block}\``, without: { ...policy, block: null } });
  policy.signals.forEach((other, at) => {
    if (at !== index && other.response === "restart")
      suspects.push({ name: `the restart of "${other.name}"`, without: withOwnResponse(policy, at) });
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
