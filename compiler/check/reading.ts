/**
 * Which statistics a policy reads: those on whose letter some SET of its signals and clears hangs.
 * In: the conditions and SETs. Out: the SETs, and a flag for each alphabet. A statistic that is not read may be left out of a
 * process; letters that no SET tells apart are one column of the machine.
 */
import type { Condition, Pattern, Signal, TrialSet } from "../policy.ts";
import { dependsOn, type Trials } from "./trials.ts";

type Reader = {
  readonly signals: readonly Signal[];
  readonly clearBefore: TrialSet | null;
  readonly clearAfter: readonly Condition[];
};

/** Whether each alphabet is read. */
export function alphabetsRead(reader: Reader, trials: Trials): boolean[] {
  const sets = setsRead(reader);
  return trials.sizes.map((_, alphabet) => [...sets].some((set) => dependsOn(trials, set, alphabet)));
}

/** The SETs of all signals and clears: what a machine can tell trials apart by. */
export function setsRead({ signals, clearBefore, clearAfter }: Reader): ReadonlySet<TrialSet> {
  const sets = new Set<TrialSet>(clearBefore === null ? [] : [clearBefore]);
  const seen = new Set<Condition>();
  for (const condition of clearAfter) collect(condition, sets, seen);
  for (const { condition, quiet } of signals) {
    collect(condition, sets, seen);
    if (quiet?.kind === "until") collect(quiet.condition, sets, seen);
  }
  return sets;
}

/** Gathers the SETs of a condition; rules that are mentioned often are looked into once. */
function collect(condition: Condition, sets: Set<TrialSet>, seen: Set<Condition>): void {
  if (seen.has(condition)) return;
  seen.add(condition);
  switch (condition.kind) {
    case "set":
    case "run":
    case "scan":
      sets.add(condition.set);
      return;
    case "weakRun":
      sets.add(condition.set).add(condition.failures);
      return;
    case "pattern":
      collectPattern(condition.pattern, sets);
      return;
    case "separate":
    case "overlapping":
    case "not":
      collect(condition.operand, sets, seen);
      return;
    case "then":
    case "unless":
    case "and":
    case "or":
      collect(condition.left, sets, seen);
      collect(condition.right, sets, seen);
      return;
    case "rule":
      collect(condition.condition, sets, seen);
      return;
    default:
      condition satisfies never;
  }
}

function collectPattern(pattern: Pattern, sets: Set<TrialSet>): void {
  switch (pattern.kind) {
    case "letters":
      sets.add(pattern.set);
      return;
    case "choice":
      for (const option of pattern.options) collectPattern(option, sets);
      return;
    case "sequence":
      for (const item of pattern.items) collectPattern(item, sets);
      return;
    case "repeat":
      collectPattern(pattern.operand, sets);
      return;
    default:
      pattern satisfies never;
  }
}
