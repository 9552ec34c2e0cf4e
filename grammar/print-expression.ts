/**
 * Expressions and counts as pieces of canonical text. Parentheses are written where the tree needs them and nowhere else.
 * A product is open (`1.4 / sqrt(5)`) when it is the whole of a `let`, and close inside anything larger (`mu - d*sigma`).
 */
import type { Piece } from "./layout.ts";
import type { Count, Expression, Name, Quoted } from "./tree.ts";

/** What is being written; every function here and in the other `print-` files adds to the end. */
export type Pieces = Piece[];

export function putName(out: Pieces, name: Name, more: Partial<Piece> = {}): void {
  out.push({ text: name.text, at: name.span.start, ...more });
}

export function putText(out: Pieces, quoted: Quoted): void {
  out.push({ text: `"${quoted.value.replace(/["\\]/g, "\\$&")}"`, at: quoted.span.start });
}

export function putCount(out: Pieces, count: Count, more: Partial<Piece> = {}): void {
  const text = count.kind === "literal" ? count.text : count.name.text;
  out.push({ text, at: count.span.start, ...more });
}

/** How tightly the outermost operator of an expression binds: sums 1, products 2, signs and powers 3, the rest 4. */
function binding(expression: Expression): number {
  switch (expression.kind) {
    case "binary":
      return expression.operator === "^" ? 3 : bindingOf(expression.operator);
    case "negate":
      return 3;
    default:
      return 4;
  }
}

function bindingOf(operator: "+" | "-" | "*" | "/"): number {
  return operator === "+" || operator === "-" ? 1 : 2;
}

type Style = {
  /** Whether the first piece clings to what stands before. */
  readonly tight?: boolean;
  /** Whether products are written with spaces. */
  readonly open?: boolean;
  /** Level of the break before a sum's operators. */
  readonly breakLevel?: number;
};

export function putExpression(out: Pieces, expression: Expression, style: Style = {}): void {
  const tight = style.tight === true;
  const at = expression.span.start;
  switch (expression.kind) {
    case "number":
      out.push({ text: expression.text + (expression.percent ? "%" : ""), at, tight });
      return;
    case "reference":
      putName(out, expression.name, { tight });
      return;
    case "call":
      putName(out, expression.name, { tight });
      putOperands(out, expression.operands);
      return;
    case "negate":
      out.push({ text: "-", at, tight });
      putOperand(out, expression.operand, 3, { tight: true });
      return;
    case "binary":
      putBinary(out, expression, style);
      return;
    default:
      expression satisfies never;
  }
}

function putBinary(out: Pieces, expression: Expression & { kind: "binary" }, style: Style): void {
  const { operator, left, right } = expression;
  const tight = style.tight === true;
  if (operator === "^") {
    putOperand(out, left, 4, { tight });
    out.push({ text: "^", tight: true });
    putOperand(out, right, 3, { tight: true });
    return;
  }
  const level = bindingOf(operator);
  const close = level === 2 && !style.open;
  const inChain = binding(left) === level;
  putOperand(out, left, level, inChain ? style : { tight });
  const breakLevel = close ? undefined : style.breakLevel;
  out.push({ text: operator, tight: close, ...(breakLevel !== undefined && { breakLevel }) });
  putOperand(out, right, level + 1, { tight: close });
}

/** An operand, in parentheses when it binds less tightly than its place asks. */
function putOperand(out: Pieces, operand: Expression, least: number, style: Style): void {
  if (binding(operand) >= least) {
    putExpression(out, operand, style);
    return;
  }
  out.push({ text: "(", tight: style.tight === true });
  putExpression(out, operand, { tight: true, open: binding(operand) === 2 });
  out.push({ text: ")", tight: true });
}

/** `(a, b)`, clinging to a name. */
export function putOperands(out: Pieces, operands: readonly Expression[]): void {
  out.push({ text: "(", tight: true });
  for (const [i, operand] of operands.entries()) {
    if (i > 0) out.push({ text: ",", tight: true });
    putExpression(out, operand, { tight: i === 0 });
  }
  out.push({ text: ")", tight: true });
}
