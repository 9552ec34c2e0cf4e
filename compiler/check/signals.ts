/**
 * Signals and clears. In: their declarations and the rules. Out: their checked forms, null where a fault was reported.
 */
import type { Condition, Signal, TrialSet } from "../policy.ts";
import { readCount } from "./counts.ts";
import type { Of } from "./declarations.ts";
import type { Rules } from "./rules.ts";
import type { Scope } from "./scope.ts";
import { evaluateSet, type Sets } from "./sets.ts";
import { requireSilence } from "./silence.ts";
import { addAll } from "./trials.ts";
import type { Values } from "./values.ts";

/** The signals a machine file has room for: one bit each. */
const MOST_SIGNALS = 31;

/** Checks one signal. */
export function checkSignal(declaration: Of<"signal">, rules: Rules, values: Values): Signal | null {
  const { name, condition: tree, response, quiet, span } = declaration;
  const condition = rules.build(tree);
  requireSilence(tree, `the condition of signal "${name.text}"`, rules.silent, values.scope);
  const checked = checkQuiet(quiet, rules, values);
  if (condition === null || checked === undefined) return null;
  return { name: name.text, condition, response: response ?? "own", quiet: checked, span };
}

/** The quiet time; undefined where its fault was reported. */
function checkQuiet(quiet: Of<"signal">["quiet"], rules: Rules, values: Values): Signal["quiet"] | undefined {
  if (quiet === undefined) return null;
  if (quiet.kind === "for") {
    const count = readCount(quiet.count, 1, "a quiet time", values);
    return count === null ? undefined : { kind: "for", count };
  }
  const condition = rules.build(quiet.condition);
  return condition === null ? undefined : { kind: "until", condition };
}

/** Reports the first signal that is one too many. */
export function checkSignalCount(signals: readonly Of<"signal">[], scope: Scope): void {
  const extra = signals[MOST_SIGNALS];
  if (extra === undefined) return;
  scope.report(
    "too_many_signals",
    extra.name.span,
    `the policy declares ${signals.length} signals; it may declare ${MOST_SIGNALS}`,
    {
      hint: "join conditions that are answered alike by `or`",
      data: { signals: signals.length, most: MOST_SIGNALS },
    },
  );
}

/** The trials of all `clear before`, or null when there is none. */
export function checkClearsBefore(clears: readonly Of<"clearBefore">[], sets: Sets): TrialSet | null {
  const found = clears.map(({ set }) => evaluateSet(set, sets)).filter((set) => set !== null);
  const [first] = found;
  if (first === undefined) return null;
  const all = new Uint8Array(first.trials.length);
  for (const { trials } of found) addAll(all, trials);
  return all;
}

/** The conditions of all `clear after`. */
export function checkClearsAfter(clears: readonly Of<"clearAfter">[], rules: Rules): Condition[] {
  return clears.map(({ condition }) => rules.build(condition)).filter((condition) => condition !== null);
}
