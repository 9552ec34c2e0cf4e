/**
 * `not` may not hold on silence: with every completion replaced by "no", a signal's condition and the operands of
 * `separate`, `overlapping`, `then` and `unless` must be "no".
 * In: the tree of a condition, and for each rule whether it holds on silence. Out: reports.
 */
import type { ConditionTree } from "../../grammar/tree.ts";
import type { Scope } from "./scope.ts";
import { shorten } from "./values.ts";

/** By index of the rule; false for one whose fault was reported. */
export type SilentRules = readonly boolean[];

/** Whether a condition holds when nothing completes. */
export function holdsOnSilence(tree: ConditionTree, rules: SilentRules, scope: Scope): boolean {
  switch (tree.kind) {
    case "set": {
      const entity = tree.set.kind === "named" ? scope.names.get(tree.set.name.text) : undefined;
      return entity?.role === "rule" && rules[entity.index] === true;
    }
    case "run":
    case "weakRun":
    case "scan":
    case "pattern":
    case "separate":
    case "overlapping":
    case "then":
    case "unless":
      return false;
    case "not":
      return !holdsOnSilence(tree.operand, rules, scope);
    case "and":
      return holdsOnSilence(tree.left, rules, scope) && holdsOnSilence(tree.right, rules, scope);
    case "or":
      return holdsOnSilence(tree.left, rules, scope) || holdsOnSilence(tree.right, rules, scope);
  }
}

/** Reports a condition that would hold on silence; `what` says what it is. */
export function requireSilence(tree: ConditionTree, what: string, rules: SilentRules, scope: Scope): void {
  if (!holdsOnSilence(tree, rules, scope)) return;
  const message = `${shorten(tree)} is ${what}, and holds at a trial where nothing completes`;
  scope.report("silent_not", tree.span, message, {
    hint: "join the `not` with something that completes: `A and not B`",
    data: { condition: shorten(tree).slice(1, -1) },
  });
}

/** Checks every operand inside a condition that must be silent. */
export function checkOperands(tree: ConditionTree, rules: SilentRules, scope: Scope): void {
  switch (tree.kind) {
    case "set":
    case "run":
    case "weakRun":
    case "scan":
    case "pattern":
      return;
    case "separate":
    case "overlapping":
      requireSilence(tree.operand, `what \`${tree.kind}\` counts`, rules, scope);
      checkOperands(tree.operand, rules, scope);
      return;
    case "then":
    case "unless":
      requireSilence(tree.left, `the first operand of \`${tree.kind}\``, rules, scope);
      requireSilence(tree.right, `the second operand of \`${tree.kind}\``, rules, scope);
      checkOperands(tree.left, rules, scope);
      checkOperands(tree.right, rules, scope);
      return;
    case "and":
    case "or":
      checkOperands(tree.left, rules, scope);
      checkOperands(tree.right, rules, scope);
      return;
    case "not":
      checkOperands(tree.operand, rules, scope);
  }
}
