/**
 * Concrete syntax → tree, for SETs, conditions and patterns. Parentheses leave no trace but the shape of the tree: a
 * pattern's sequence in a sequence, and a choice in a choice, become part of the outer one.
 */
import { buildCount } from "./build-expression.ts";
import { cover } from "./span.ts";
import {
  has,
  name,
  nodeSpan,
  optionalPart,
  optionalToken,
  part,
  parts,
  type Syntax,
  token,
} from "./syntax-node.ts";
import type { ConditionTree, PatternTree, SetTree } from "./tree.ts";

/** Joins operands from the left; a part's span reaches from the first operand to its last. */
function joinLeft<Tree>(
  operands: readonly Syntax[],
  build: (operand: Syntax) => Tree,
  join: (left: Tree, right: Tree, span: ReturnType<typeof nodeSpan>, operand: Syntax) => Tree,
): Tree {
  const [first, ...others] = operands as [Syntax, ...Syntax[]];
  const start = nodeSpan(first);
  let left = build(first);
  for (const operand of others) left = join(left, build(operand), cover(start, nodeSpan(operand)), operand);
  return left;
}

export function buildSet(from: Syntax): SetTree {
  return joinLeft(parts(from, "meet"), buildMeet, (left, right, span) => ({
    kind: "except",
    left,
    right,
    span,
  }));
}

function buildMeet(from: Syntax): SetTree {
  return joinLeft(parts(from, "member"), buildMember, (left, right, span) => ({
    kind: "meet",
    left,
    right,
    span,
  }));
}

function buildMember(from: Syntax): SetTree {
  const span = nodeSpan(from);
  if (has(from, "ANY")) return { kind: "any", span };
  if (has(from, "Name")) return { kind: "named", name: name(from), span };
  return { kind: "union", members: parts(part(from, "union"), "set").map(buildSet), span };
}

export function buildCondition(from: Syntax): ConditionTree {
  return joinLeft(parts(from, "both"), buildBoth, (left, right, span) => ({ kind: "or", left, right, span }));
}

function buildBoth(from: Syntax): ConditionTree {
  return joinLeft(parts(from, "chain"), buildChain, (left, right, span) => ({
    kind: "and",
    left,
    right,
    span,
  }));
}

function buildChain(from: Syntax): ConditionTree {
  const start = nodeSpan(part(from, "unary"));
  let left = buildUnary(part(from, "unary"));
  for (const link of parts(from, "link")) {
    const span = cover(start, nodeSpan(link));
    const right = buildUnary(part(link, "unary"));
    const within = optionalPart(link, "count");
    if (has(link, "UNLESS"))
      left = { kind: "unless", left, right, within: buildCount(part(link, "count")), span };
    else left = { kind: "then", left, right, ...(within && { within: buildCount(within) }), span };
  }
  return left;
}

function buildUnary(from: Syntax): ConditionTree {
  if (!has(from, "NOT")) return buildAtom(part(from, "atom"));
  return { kind: "not", operand: buildUnary(part(from, "unary")), span: nodeSpan(from) };
}

function buildAtom(from: Syntax): ConditionTree {
  const span = nodeSpan(from);
  if (has(from, "condition")) return buildCondition(part(from, "condition"));
  if (has(from, "counted")) return buildCounted(part(from, "counted"));
  if (has(from, "set")) return { kind: "set", set: buildSet(part(from, "set")), span };
  return { kind: "pattern", pattern: buildChoice(part(part(from, "pattern"), "choice")), span };
}

function buildCounted(from: Syntax): ConditionTree {
  const span = nodeSpan(from);
  const count = buildCount(part(from, "count"));
  const window = optionalPart(from, "window");
  if (window)
    return { kind: "scan", count, window: buildCount(window), set: buildSet(part(from, "set")), span };
  const repetition = optionalToken(from, "repetition")?.image;
  if (repetition === "separate" || repetition === "overlapping")
    return { kind: repetition, count, operand: buildAtom(part(from, "atom")), span };
  const run = part(from, "run");
  const set = buildSet(part(run, "set"));
  if (!has(run, "GAP")) return { kind: "run", count, set, span };
  const failures = optionalPart(run, "failures");
  const gap = buildCount(part(run, "count"));
  return { kind: "weakRun", count, set, gap, ...(failures && { failures: buildSet(failures) }), span };
}

function buildChoice(from: Syntax): PatternTree {
  const options = parts(from, "sequence")
    .map(buildSequence)
    .flatMap((option) => (option.kind === "choice" ? option.options : [option]));
  const [only] = options;
  return only && options.length === 1 ? only : { kind: "choice", options, span: nodeSpan(from) };
}

function buildSequence(from: Syntax): PatternTree {
  const items = parts(from, "item")
    .map(buildItem)
    .flatMap((item) => (item.kind === "sequence" ? item.items : [item]));
  const [only] = items;
  return only && items.length === 1 ? only : { kind: "sequence", items, span: nodeSpan(from) };
}

function buildItem(from: Syntax): PatternTree {
  const set = optionalPart(from, "set");
  const operand: PatternTree = set
    ? { kind: "letters", set: buildSet(set), span: nodeSpan(set) }
    : buildChoice(part(from, "choice"));
  if (!has(from, "least")) return operand;
  const least = token(from, "least").image;
  const most = optionalToken(from, "most")?.image ?? (has(from, "RangeTo") ? null : least);
  return { kind: "repeat", least, most, operand, span: nodeSpan(from) };
}
