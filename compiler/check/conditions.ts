/**
 * Conditions: from the tree of a condition to the algebra the machine is built from.
 * In: the tree, with SETs, counts, assignments and the rules it mentions at hand. Out: the condition with its canonical
 * text, or null once the reason was reported. A lone name is a rule or a SET, told by its declaration; each mention of a
 * rule is a node of its own around the one shared condition, so that mentions of mentions cost nothing.
 */

import { conditionText } from "../../grammar/print.ts";
import type { ConditionTree, Count, Name } from "../../grammar/tree.ts";
import type { Condition } from "../policy.ts";
import type { Assignments } from "./assigns.ts";
import { readCount } from "./counts.ts";
import { failuresOf } from "./gaps.ts";
import { buildPattern } from "./patterns.ts";
import { resolve } from "./scope.ts";
import { evaluateSet, type Sets } from "./sets.ts";
import { shorten, type Values } from "./values.ts";

/** All that conditions are made from. */
export type Materials = {
  readonly sets: Sets;
  readonly values: Values;
  readonly assignments: Assignments;
  /** By index; null for one whose fault was reported, or that comes later. */
  readonly rules: readonly (Condition | null)[];
};

type TreeOf<K extends ConditionTree["kind"]> = Extract<ConditionTree, { kind: K }>;

/** Builds a condition. */
export function buildCondition(tree: ConditionTree, materials: Materials): Condition | null {
  switch (tree.kind) {
    case "set":
      return tree.set.kind === "named"
        ? buildNamed(tree, tree.set.name, materials)
        : buildSet(tree, materials);
    case "run":
      return buildRun(tree, materials);
    case "weakRun":
      return buildWeakRun(tree, materials);
    case "scan":
      return buildScan(tree, materials);
    case "pattern": {
      const pattern = buildPattern(tree.pattern, materials.sets, materials.values);
      return pattern === null ? null : { ...head(tree), kind: "pattern", pattern };
    }
    case "separate":
    case "overlapping": {
      const count = readCount(tree.count, 1, `the count of \`${tree.kind}\``, materials.values);
      const operand = buildCondition(tree.operand, materials);
      return count === null || operand === null ? null : { ...head(tree), kind: tree.kind, count, operand };
    }
    case "then":
    case "unless":
      return buildChain(tree, materials);
    case "and":
    case "or": {
      const left = buildCondition(tree.left, materials);
      const right = buildCondition(tree.right, materials);
      return left === null || right === null ? null : { ...head(tree), kind: tree.kind, left, right };
    }
    case "not": {
      const operand = buildCondition(tree.operand, materials);
      return operand === null ? null : { ...head(tree), kind: "not", operand };
    }
  }
}

function head(tree: ConditionTree): { readonly span: ConditionTree["span"]; readonly text: string } {
  return { span: tree.span, text: conditionText(tree) };
}

/** A name alone: a rule when it is declared as one, else a SET. */
function buildNamed(tree: TreeOf<"set">, name: Name, materials: Materials): Condition | null {
  const { scope } = materials.sets;
  const place = "a condition is made of rules, letters and groups";
  const entity = resolve(scope, name, ["rule", "letter", "group"], place);
  if (entity?.role !== "rule") return entity === null ? null : buildSet(tree, materials);
  const condition = materials.rules[entity.index] ?? null;
  if (condition === null) return null;
  return { span: tree.span, text: name.text, kind: "rule", name: name.text, condition };
}

function buildSet(tree: TreeOf<"set">, { sets }: Materials): Condition | null {
  const set = evaluateSet(tree.set, sets);
  return set === null ? null : { ...head(tree), kind: "set", set: set.trials };
}

function buildRun(tree: TreeOf<"run">, { sets, values }: Materials): Condition | null {
  const count = readCount(tree.count, 1, "the length of a run", values);
  const set = evaluateSet(tree.set, sets);
  return count === null || set === null ? null : { ...head(tree), kind: "run", count, set: set.trials };
}

function buildWeakRun(tree: TreeOf<"weakRun">, { sets, values, assignments }: Materials): Condition | null {
  const count = readCount(tree.count, 1, "the number of successes", values);
  const gap = readCount(tree.gap, 0, "a gap limit", values);
  const set = evaluateSet(tree.set, sets);
  const failures = failuresOf(tree, set, assignments, sets);
  if (count === null || gap === null || set === null || failures === null) return null;
  return { ...head(tree), kind: "weakRun", count, gap, set: set.trials, failures };
}

function buildScan(tree: TreeOf<"scan">, { sets, values }: Materials): Condition | null {
  const count = readCount(tree.count, 1, "the number of a scan", values);
  const window = readCount(tree.window, 1, "the window of a scan", values);
  const set = evaluateSet(tree.set, sets);
  if (count === null || window === null || set === null) return null;
  if (count <= window) return { ...head(tree), kind: "scan", count, window, set: set.trials };
  values.scope.report(
    "count_out_of_range",
    tree.span,
    `${shorten(tree)} can never complete: ${count} of the last ${window} trials are more than there are`,
    {
      hint: `the smaller number comes first: \`${countText(tree.window)} of ${countText(tree.count)} …\``,
      data: { count, window },
    },
  );
  return null;
}

function countText(count: Count): string {
  return count.kind === "literal" ? count.text : count.name.text;
}

function buildChain(tree: TreeOf<"then" | "unless">, materials: Materials): Condition | null {
  const left = buildCondition(tree.left, materials);
  const right = buildCondition(tree.right, materials);
  const limit = `the time limit of \`${tree.kind}\``;
  const within = tree.within === undefined ? undefined : readCount(tree.within, 1, limit, materials.values);
  if (left === null || right === null || within === null) return null;
  if (tree.kind === "then") return { ...head(tree), kind: "then", left, right, within: within ?? null };
  return within === undefined ? null : { ...head(tree), kind: "unless", left, right, within };
}
