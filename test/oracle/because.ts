/**
 * Why a condition holds at a trial: the leaves under its and/or/not whose completion makes it hold, each with the shortest
 * run of trials, since memory was clear, on which the leaf begun afresh completes there. A leaf is a rule mentioned by name
 * or a form without a name, known by its text.
 */
import { type History, holds } from "./meaning.ts";
import type { Condition } from "./policy.ts";
import { conditionText } from "./text.ts";

export type Reason = { readonly rule: string; readonly trials: readonly [from: number, to: number] };

/** The leaves to thank that the condition does (`wanted`) or does not hold at `t`. */
function leaves(
  history: History,
  condition: Condition,
  start: number,
  t: number,
  wanted: boolean,
): readonly Condition[] {
  switch (condition.kind) {
    case "not":
      return leaves(history, condition.operand, start, t, !wanted);
    case "and":
    case "or": {
      // Both operands of an `and` that holds, or of an `or` that does not, are needed and are as wanted; of the others,
      // those operands count that are as wanted.
      const asWanted = [condition.left, condition.right].filter(
        (operand) => holds(history, operand, start, t) === wanted,
      );
      return asWanted.flatMap((operand) => leaves(history, operand, start, t, wanted));
    }
    default:
      return wanted ? [condition] : [];
  }
}

/** The reasons for a condition that holds at `t`, its memory that of the trials from `start`. */
export function reasons(history: History, condition: Condition, start: number, t: number): readonly Reason[] {
  return leaves(history, condition, start, t, true).map((leaf) => {
    let from = t;
    while (from > start && !holds(history, leaf, from, t)) from--;
    return { rule: leaf.kind === "rule" ? leaf.name : conditionText(leaf), trials: [from, t] };
  });
}
