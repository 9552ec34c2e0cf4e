/**
 * Concrete syntax → tree, for numbers: expressions and counts. Chains of operators are built by a loop, from the left;
 * recursion is as deep as the nesting, which `nesting.ts` has limited.
 */
import { cover, type Span } from "./span.ts";
import {
  has,
  name,
  nodeSpan,
  optionalPart,
  part,
  parts,
  type Syntax,
  token,
  tokenSpan,
  tokens,
} from "./syntax-node.ts";
import type { Count, Expression, NumberLiteral } from "./tree.ts";

export function buildExpression(from: Syntax): Expression {
  return buildChain(from, parts(from, "term"), (term) =>
    buildChain(term, parts(term, "signed"), buildSigned),
  );
}

type Operator = "+" | "-" | "*" | "/" | "^";

function buildChain(from: Syntax, operands: Syntax[], build: (operand: Syntax) => Expression): Expression {
  const [first, ...others] = operands;
  if (!first) return build(part(from, "an operand"));
  const signs = tokens(from, "sign");
  const start = nodeSpan(first);
  let left = build(first);
  for (const [i, operand] of others.entries()) {
    const operator = signOf(signs[i]?.tokenType.name);
    left = { kind: "binary", operator, left, right: build(operand), span: cover(start, nodeSpan(operand)) };
  }
  return left;
}

/** By the type, not the text: a lookalike has the text of another sign. */
function signOf(type: string | undefined): Operator {
  switch (type) {
    case "Plus":
      return "+";
    case "Minus":
      return "-";
    case "Times":
      return "*";
    default:
      return "/";
  }
}

function buildSigned(from: Syntax): Expression {
  const inner = optionalPart(from, "signed");
  const base = optionalPart(from, "primary");
  if (!base) return { kind: "negate", operand: buildSigned(part(from, "signed")), span: nodeSpan(from) };
  const left = buildPrimary(base);
  if (!inner) return left;
  return { kind: "binary", operator: "^", left, right: buildSigned(inner), span: nodeSpan(from) };
}

function buildPrimary(from: Syntax): Expression {
  if (has(from, "Numeral")) return numberLiteral(from, nodeSpan(from));
  if (!has(from, "Name")) return buildExpression(part(from, "expression"));
  const operands = optionalPart(from, "operands");
  const span = nodeSpan(from);
  if (!operands) return { kind: "reference", name: name(from), span };
  return { kind: "call", name: name(from), operands: buildOperands(operands), span };
}

export function buildOperands(from: Syntax): Expression[] {
  return parts(from, "expression").map(buildExpression);
}

/** The number of a node that holds a numeral, and perhaps a percent sign. */
export function numberLiteral(from: Syntax, span: Span): NumberLiteral {
  return { kind: "number", text: token(from, "Numeral").image, percent: has(from, "Percent"), span };
}

export function buildCount(from: Syntax): Count {
  const span = nodeSpan(from);
  if (!has(from, "Whole")) return { kind: "named", name: name(from), span };
  const digits = token(from, "Whole");
  return { kind: "literal", text: digits.image, span: tokenSpan(from.source, digits) };
}
