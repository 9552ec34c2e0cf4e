/**
 * How the conditions of a signal combine under `and`, `or` and `not`, apart from what they are: the formula over its parts.
 *
 * A part is a mention of a rule or a form without a name. Parts of one formula are begun and cleared together, so equal
 * ones share a place. Attribution: what makes the formula true, read from the top (see `grammar/README.md`, The machine).
 */
import type { Condition } from "../policy.ts";
import { numberOf } from "./numbering.ts";

export type FormulaNode =
  | { readonly kind: "part"; readonly part: number }
  | { readonly kind: "and" | "or"; readonly operands: readonly FormulaNode[] }
  | { readonly kind: "not"; readonly operand: FormulaNode };

export type Formula = { readonly root: FormulaNode; readonly parts: readonly Condition[] };

/**
 * The formula of a condition. With `open`, mentioned rules that are themselves made of `and`, `or`, `not` are looked into,
 * which gives more and smaller parts; without, a rule is one part and keeps its name.
 */
export function formulaOf(condition: Condition, open: boolean): Formula {
  const parts: Condition[] = [];
  const places = new Map<string | Condition, number>();
  const visit = (node: Condition): FormulaNode => {
    if (node.kind === "rule" && open) return visit(node.condition);
    if (node.kind === "and" || node.kind === "or") {
      const operands = operandsOf(node, node.kind, open).map(visit);
      return { kind: node.kind, operands };
    }
    if (node.kind === "not") return { kind: "not", operand: visit(node.operand) };
    const part = numberOf(places, node.kind === "rule" ? node.name : node);
    parts[part] = node;
    return { kind: "part", part };
  };
  return { root: visit(condition), parts };
}

/** The operands of a chain of one operator, left to right, without recursion: chains are long, nesting is not. */
function operandsOf(condition: Condition, kind: "and" | "or", open: boolean): Condition[] {
  const operands: Condition[] = [];
  const waiting = [condition];
  for (let node = waiting.pop(); node; node = waiting.pop()) {
    const inner = node.kind === "rule" && open ? node.condition : node;
    if (inner.kind === kind) waiting.push(inner.right, inner.left);
    else operands.push(inner);
  }
  return operands;
}

/** A rule's name, or the canonical text of a condition without one. */
export function nameOf(formula: Formula, part: number): string {
  const condition = formula.parts[part];
  if (!condition) throw new RangeError(`part ${part} of ${formula.parts.length}`);
  return condition.kind === "rule" ? condition.name : condition.text;
}

/** Whether the formula holds at a trial, given which parts complete there. */
export function holds(formula: Formula, completes: Uint8Array): boolean {
  return holdsNode(formula.root, completes);
}

function holdsNode(node: FormulaNode, completes: Uint8Array): boolean {
  switch (node.kind) {
    case "part":
      return completes[node.part] === 1;
    case "and":
      for (const operand of node.operands) if (!holdsNode(operand, completes)) return false;
      return true;
    case "or":
      for (const operand of node.operands) if (holdsNode(operand, completes)) return true;
      return false;
    case "not":
      return !holdsNode(node.operand, completes);
    default:
      return node satisfies never;
  }
}

/** The parts whose completion makes the formula hold at a trial where it does, in order. */
export function attributedParts(formula: Formula, completes: Uint8Array): number[] {
  const found = new Set<number>();
  attribute(formula.root, true, completes, found);
  return [...found].sort((a, b) => a - b);
}

/** Collects the parts that make `node` be what it is, `wanted` telling which of yes and no that is. */
function attribute(node: FormulaNode, wanted: boolean, completes: Uint8Array, found: Set<number>): void {
  switch (node.kind) {
    case "part":
      if (wanted) found.add(node.part);
      return;
    case "not":
      attribute(node.operand, !wanted, completes, found);
      return;
    case "and":
    case "or":
      for (const operand of node.operands)
        if (holdsNode(operand, completes) === wanted) attribute(operand, wanted, completes, found);
      return;
    default:
      node satisfies never;
  }
}
