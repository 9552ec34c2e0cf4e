/**
 * Patterns: strings of SETs with choices and repeats. In: the tree of a pattern. Out: the pattern with its trials and
 * counts, or null once the reason was reported. A pattern the empty string satisfies is an error.
 */
import type { PatternTree } from "../../grammar/tree.ts";
import type { Pattern } from "../policy.ts";
import { readDigits } from "./counts.ts";
import { evaluateSet, type Sets } from "./sets.ts";
import { shorten, type Values } from "./values.ts";

/** Builds a whole pattern. */
export function buildPattern(tree: PatternTree, sets: Sets, values: Values): Pattern | null {
  const pattern = build(tree, sets, values);
  if (!isNullable(tree)) return pattern;
  const message = `the pattern ${shorten(tree)} is satisfied by no trial at all`;
  sets.scope.report("pattern_empty", tree.span, message, {
    hint: "let at least one item be needed: `1..` instead of `0..`",
    data: { pattern: shorten(tree).slice(1, -1) },
  });
  return null;
}

function build(tree: PatternTree, sets: Sets, values: Values): Pattern | null {
  switch (tree.kind) {
    case "letters": {
      const set = evaluateSet(tree.set, sets);
      return set === null ? null : { kind: "letters", set: set.trials };
    }
    case "choice": {
      const options = tree.options.map((option) => build(option, sets, values));
      return areBuilt(options) ? { kind: "choice", options } : null;
    }
    case "sequence": {
      const items = tree.items.map((item) => build(item, sets, values));
      return areBuilt(items) ? { kind: "sequence", items } : null;
    }
    case "repeat":
      return buildRepeat(tree, sets, values);
  }
}

function buildRepeat(
  tree: Extract<PatternTree, { kind: "repeat" }>,
  sets: Sets,
  values: Values,
): Pattern | null {
  const operand = build(tree.operand, sets, values);
  const least = readDigits(tree.least, "a count in a pattern", tree.span, values);
  const isPlain = tree.most === null || tree.most === tree.least;
  const most = isPlain ? least : readDigits(tree.most ?? "", "a count in a pattern", tree.span, values);
  if (operand === null || least === null || most === null) return null;
  if (most >= least) return { kind: "repeat", least, most: tree.most === null ? null : most, operand };
  sets.scope.report(
    "count_out_of_range",
    tree.span,
    `"${tree.least}..${tree.most}" goes from ${least} down to ${most}`,
    {
      hint: `write \`${most}..${least}\``,
      data: { least, most },
    },
  );
  return null;
}

function areBuilt(patterns: readonly (Pattern | null)[]): patterns is readonly Pattern[] {
  return !patterns.includes(null);
}

/** Whether the empty string satisfies a pattern. */
function isNullable(tree: PatternTree): boolean {
  switch (tree.kind) {
    case "letters":
      return false;
    case "choice":
      return tree.options.some(isNullable);
    case "sequence":
      return tree.items.every(isNullable);
    case "repeat":
      return Number(tree.least) === 0 || isNullable(tree.operand);
  }
}
