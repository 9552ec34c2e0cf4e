/**
 * The rules, built in the order they mention one another.
 * In: `rule` declarations. Out: conditions by index, null where a fault was reported, and the way to build the conditions
 * of signals, clears and quiet times. Depth counts through the rules mentioned and is limited, because later stages walk
 * conditions by recursion; breadth is not: copies share one condition.
 */
import type { ConditionTree } from "../../grammar/tree.ts";
import type { Condition } from "../policy.ts";
import { buildCondition, type Materials } from "./conditions.ts";
import type { Of } from "./declarations.ts";
import { reportCycle } from "./lets.ts";
import { loneNamesInCondition } from "./mentions.ts";
import { dependencyOrder } from "./order.ts";
import type { Scope } from "./scope.ts";
import { checkOperands, holdsOnSilence, type SilentRules } from "./silence.ts";

/** How deep conditions may be nested through the rules they mention. */
const MOST_DEPTH = 1000;

export type Rules = {
  readonly conditions: readonly (Condition | null)[];
  readonly silent: SilentRules;
  /** Builds the condition of a signal, clear or quiet time. */
  readonly build: (tree: ConditionTree) => Condition | null;
};

/** Builds all rules. */
export function checkRules(rules: readonly Of<"rule">[], materials: Omit<Materials, "rules">): Rules {
  const { scope } = materials.sets;
  const { order, cycles } = dependencyOrder(rules.length, (index) => rulesIn(rules[index]!.condition, scope));
  const conditions: (Condition | null)[] = rules.map(() => null);
  const silent = rules.map(() => false);
  const depths = rules.map(() => 0);
  const onCycle = new Set(cycles.flat());
  for (const cycle of cycles)
    reportCycle(
      cycle.map((index) => rules[index]!),
      "rule",
      scope,
    );
  const build = (tree: ConditionTree): Condition | null => {
    checkOperands(tree, silent, scope);
    return buildCondition(tree, { ...materials, rules: conditions });
  };
  for (const index of order) {
    const rule = rules[index];
    if (rule === undefined || onCycle.has(index)) continue;
    silent[index] = holdsOnSilence(rule.condition, silent, scope);
    depths[index] = depthOf(rule.condition, depths, scope);
    if (depths[index] > MOST_DEPTH) {
      depths[index] = 0;
      reportDepth(rule, scope);
    } else {
      conditions[index] = build(rule.condition);
    }
  }
  return { conditions, silent, build };
}

function rulesIn(tree: ConditionTree, scope: Scope): number[] {
  return loneNamesInCondition(tree).flatMap((name) => {
    const entity = scope.names.get(name.text);
    return entity?.role === "rule" ? [entity.index] : [];
  });
}

function depthOf(tree: ConditionTree, depths: readonly number[], scope: Scope): number {
  switch (tree.kind) {
    case "set": {
      const entity = tree.set.kind === "named" ? scope.names.get(tree.set.name.text) : undefined;
      return 1 + (entity?.role === "rule" ? (depths[entity.index] ?? 0) : 0);
    }
    case "run":
    case "weakRun":
    case "scan":
    case "pattern":
      return 1;
    case "separate":
    case "overlapping":
    case "not":
      return 1 + depthOf(tree.operand, depths, scope);
    case "then":
    case "unless":
    case "and":
    case "or":
      return 1 + Math.max(depthOf(tree.left, depths, scope), depthOf(tree.right, depths, scope));
  }
}

function reportDepth(rule: Of<"rule">, scope: Scope): void {
  const limit = MOST_DEPTH.toLocaleString("en-US");
  const message = `the condition of "${rule.name.text}", with the rules it mentions, is nested more than ${limit} deep`;
  scope.report("nesting_too_deep", rule.name.span, message, {
    hint: "mention fewer rules by way of other rules",
    data: { name: rule.name.text, most: MOST_DEPTH },
  });
}
