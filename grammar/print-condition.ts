/**
 * SETs, conditions and patterns as pieces of canonical text, with the parentheses and braces the tree needs and no other.
 * A line may break before the words that join conditions; those that bind less tightly break first.
 */
import type { Piece } from "./layout.ts";
import { type Pieces, putCount, putName } from "./print-expression.ts";
import type { ConditionTree, PatternTree, SetTree } from "./tree.ts";

type Edge = { readonly tight?: boolean };

/** `except` 1, `&` 2, the rest 3. */
function setBinding(set: SetTree): number {
  return set.kind === "except" ? 1 : set.kind === "meet" ? 2 : 3;
}

export function putSet(out: Pieces, set: SetTree, breakLevel: number, edge: Edge = {}): void {
  switch (set.kind) {
    case "any":
      out.push({ text: "any", at: set.span.start, ...edge });
      return;
    case "named":
      putName(out, set.name, edge);
      return;
    case "union":
      putUnion(out, set.members, breakLevel, { at: set.span.start, ...edge });
      return;
    case "meet":
    case "except": {
      const level = setBinding(set);
      putSetOperand(out, set.left, level, breakLevel, edge);
      out.push({ text: set.kind === "meet" ? "&" : "except", breakLevel: breakLevel + level });
      putSetOperand(out, set.right, level + 1, breakLevel);
      return;
    }
    default:
      set satisfies never;
  }
}

/** SETs have no parentheses: where the tree needs them, braces around one SET do the same. */
function putSetOperand(out: Pieces, set: SetTree, least: number, breakLevel: number, edge: Edge = {}): void {
  if (setBinding(set) >= least) putSet(out, set, breakLevel, edge);
  else putUnion(out, [set], breakLevel, edge);
}

function putUnion(
  out: Pieces,
  members: readonly SetTree[],
  breakLevel: number,
  first: Omit<Piece, "text">,
): void {
  out.push({ text: "{", ...first });
  for (const [i, member] of members.entries()) {
    if (i > 0) out.push({ text: ",", tight: true });
    const start = out.length;
    putSet(out, member, breakLevel + 1, { tight: i === 0 });
    if (i > 0) allowBreak(out, start, breakLevel);
  }
  out.push({ text: "}", tight: true });
}

/** Lets a line break before the piece at an index. */
export function allowBreak(out: Pieces, index: number, breakLevel: number): void {
  const piece = out[index];
  if (piece) out[index] = { ...piece, breakLevel };
}

/** `or` 1, `and` 2, `then` and `unless` 3, `not` 4, what needs no parentheses anywhere 5. */
function conditionBinding(condition: ConditionTree): number {
  switch (condition.kind) {
    case "or":
      return 1;
    case "and":
      return 2;
    case "then":
    case "unless":
      return 3;
    case "not":
      return 4;
    default:
      return 5;
  }
}

export function putCondition(
  out: Pieces,
  condition: ConditionTree,
  breakLevel: number,
  edge: Edge = {},
): void {
  switch (condition.kind) {
    case "set":
      putSet(out, condition.set, breakLevel + 3, edge);
      return;
    case "pattern":
      out.push({ text: "[", at: condition.span.start, ...edge });
      putPattern(out, condition.pattern, "choice", breakLevel + 3, { tight: true });
      out.push({ text: "]", tight: true });
      return;
    case "run":
    case "weakRun":
    case "scan":
      putCounted(out, condition, breakLevel, edge);
      return;
    case "separate":
    case "overlapping":
      putCount(out, condition.count, edge);
      out.push({ text: condition.kind });
      putOperand(out, condition.operand, 5, breakLevel);
      return;
    case "not":
      out.push({ text: "not", at: condition.span.start, ...edge });
      putOperand(out, condition.operand, 4, breakLevel);
      return;
    case "then":
    case "unless":
    case "and":
    case "or":
      putJoined(out, condition, breakLevel, edge);
      return;
    default:
      condition satisfies never;
  }
}

type Counted = Extract<ConditionTree, { kind: "run" | "weakRun" | "scan" }>;

function putCounted(out: Pieces, condition: Counted, breakLevel: number, edge: Edge): void {
  putCount(out, condition.count, edge);
  if (condition.kind === "scan") {
    out.push({ text: "of" });
    putCount(out, condition.window);
  }
  putSet(out, condition.set, breakLevel + 3);
  if (condition.kind !== "weakRun") return;
  out.push({ text: "gap" });
  putCount(out, condition.gap);
  if (!condition.failures) return;
  out.push({ text: "of" });
  putSet(out, condition.failures, breakLevel + 3);
}

type Joined = Extract<ConditionTree, { kind: "then" | "unless" | "and" | "or" }>;

function putJoined(out: Pieces, condition: Joined, breakLevel: number, edge: Edge): void {
  const level = conditionBinding(condition);
  putOperand(out, condition.left, level, breakLevel, edge);
  out.push({ text: condition.kind, breakLevel: breakLevel + level - 1 });
  putOperand(out, condition.right, level + 1, breakLevel);
  if ((condition.kind !== "then" && condition.kind !== "unless") || !condition.within) return;
  out.push({ text: "within" });
  putCount(out, condition.within);
}

function putOperand(
  out: Pieces,
  operand: ConditionTree,
  least: number,
  breakLevel: number,
  edge: Edge = {},
): void {
  if (conditionBinding(operand) >= least) {
    putCondition(out, operand, breakLevel, edge);
    return;
  }
  out.push({ text: "(", ...edge });
  putCondition(out, operand, breakLevel + 3, { tight: true });
  out.push({ text: ")", tight: true });
}

/** Where a pattern stands; what is too loose for its place gets parentheses. */
type PatternPlace = "choice" | "sequence" | "item" | "operand";
const patternPlaces: readonly PatternPlace[] = ["choice", "sequence", "item", "operand"];

/** The tightest place a pattern may stand in as it is. */
function tightestPlace(pattern: PatternTree): PatternPlace {
  return pattern.kind === "letters" ? "operand" : pattern.kind === "repeat" ? "item" : pattern.kind;
}

function putPattern(
  out: Pieces,
  pattern: PatternTree,
  place: PatternPlace,
  breakLevel: number,
  edge: Edge = {},
): void {
  const fits = patternPlaces.indexOf(tightestPlace(pattern)) >= patternPlaces.indexOf(place);
  if (!fits) out.push({ text: "(", ...edge });
  putBarePattern(out, pattern, breakLevel, fits ? edge : { tight: true });
  if (!fits) out.push({ text: ")", tight: true });
}

function putBarePattern(out: Pieces, pattern: PatternTree, breakLevel: number, edge: Edge): void {
  switch (pattern.kind) {
    case "letters":
      putSet(out, pattern.set, breakLevel + 2, edge);
      return;
    case "repeat": {
      const { least, most } = pattern;
      const text = most === null ? `${least}..` : most === least ? least : `${least}..${most}`;
      out.push({ text, at: pattern.span.start, ...edge });
      putPattern(out, pattern.operand, "operand", breakLevel);
      return;
    }
    case "choice":
      for (const [i, option] of pattern.options.entries()) {
        if (i > 0) out.push({ text: "|", breakLevel });
        putPattern(out, option, "sequence", breakLevel + 1, i === 0 ? edge : {});
      }
      return;
    case "sequence":
      for (const [i, item] of pattern.items.entries()) {
        const start = out.length;
        putPattern(out, item, "item", breakLevel + 1, i === 0 ? edge : {});
        if (i > 0) allowBreak(out, start, breakLevel);
      }
      return;
    default:
      pattern satisfies never;
  }
}
