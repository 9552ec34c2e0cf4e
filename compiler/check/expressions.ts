/**
 * Expressions, worked out. In: an expression, the values of the lets and, in a process, of its parameters. Out: its value,
 * or null once the reason was reported. Rational arithmetic is exact; what is not known exactly carries a radius. Every
 * result is kept to `MOST_DIGITS` digits and the range of doubles, judged before it is made where it could explode.
 */
import { spanText } from "../../grammar/span.ts";
import type { Expression, Name } from "../../grammar/tree.ts";
import {
  add,
  compareQuantities,
  divide,
  exact,
  multiply,
  negate,
  power,
  subtract,
  toDouble,
} from "../chance/quantity.ts";
import type { Quantity } from "../policy.ts";
import { showNumber } from "./figures.ts";
import { applyFunction } from "./functions.ts";
import { bitsOf, MOST_DIGITS, readNumber, sizeText } from "./literals.ts";
import { resolve } from "./scope.ts";
import { kept, shorten, type Values } from "./values.ts";

type Binary = Extract<Expression, { kind: "binary" }>;

const ZERO = exact(0n);
const PI: Quantity = { value: exact(Math.PI).value, radius: 1.3e-16 };
/** Largest whole power of an inexact number. */
const MOST_POWER = 2 ** 31;

/** The value of an expression. */
export function evaluate(expression: Expression, values: Values): Quantity | null {
  switch (expression.kind) {
    case "number": {
      const value = readNumber(expression.text, expression.percent);
      if (typeof value !== "string") return value;
      values.scope.report("number_too_large", expression.span, `${shorten(expression)} ${sizeText(value)}`);
      return null;
    }
    case "reference":
      return evaluateName(expression.name, values);
    case "negate": {
      const operand = evaluate(expression.operand, values);
      return operand === null ? null : negate(operand);
    }
    case "call":
      return applyFunction(expression, values, evaluate);
    case "binary": {
      const left = evaluate(expression.left, values);
      const right = evaluate(expression.right, values);
      return left === null || right === null
        ? null
        : kept(combine(expression, left, right, values), expression, values);
    }
  }
}

function evaluateName(name: Name, values: Values): Quantity | null {
  if (name.text === "pi") return PI;
  const entity = resolve(
    values.scope,
    name,
    ["let", "parameter"],
    "a number is a `let` or a parameter of the process",
  );
  if (entity === null) return null;
  if (entity.role === "let") return values.lets[entity.index] ?? null;
  const value = values.parameters?.get(name.text);
  if (value !== undefined) return value;
  values.scope.report(
    "wrong_role",
    name.span,
    `"${name.text}" is a parameter of process "${entity.of}" and has a value only in its laws`,
    {
      related: [{ span: entity.span, message: `"${name.text}" is declared here` }],
      data: { name: name.text },
    },
  );
  return null;
}

function combine(expression: Binary, left: Quantity, right: Quantity, values: Values): Quantity | null {
  switch (expression.operator) {
    case "+":
      return add(left, right);
    case "-":
      return subtract(left, right);
    case "*":
      return multiply(left, right);
    case "/":
      return isNonZero(right, expression.right, values) ? divide(left, right) : null;
    case "^":
      return raise(expression, left, right, values);
  }
}

/** Whether a divisor is certainly not zero; reports when it is, or may be. */
function isNonZero(divisor: Quantity, written: Expression, values: Values): boolean {
  switch (compareQuantities(divisor, ZERO)) {
    case "equal":
      values.scope.report("division_by_zero", written.span, `the divisor ${shorten(written)} is 0`);
      return false;
    case "open":
      values.scope.report(
        "open_question",
        written.span,
        `whether the divisor ${shorten(written)} is 0 is left open: it is ${showNumber(divisor, 3)} ± ${divisor.radius.toPrecision(2)}`,
      );
      return false;
    default:
      return true;
  }
}

/** A whole power, its size judged beforehand. */
function raise(expression: Binary, base: Quantity, exponent: Quantity, values: Values): Quantity | null {
  const { report } = values.scope;
  if (exponent.radius !== 0 || exponent.value.d !== 1n) {
    const [x, y] = [spanText(expression.left.span), spanText(expression.right.span)];
    const hint = `for x^y with another y write \`exp(y * ln(x))\`; for the square root \`sqrt(${x})\``;
    report("number_domain", expression.right.span, `the power ${shorten(expression.right)} is not whole`, {
      hint,
      data: { base: x, power: y },
    });
    return null;
  }
  const size = exponent.value.n;
  const isNegative = exponent.value.s < 0n;
  if (isNegative && !isNonZero(base, expression.left, values)) return null;
  const known = trivialPower(base, size);
  if (known !== null) return known;
  if (explodes(base, size)) {
    const message = `${shorten(expression)} has more than ${MOST_DIGITS.toLocaleString("en-US")} digits or lies outside the range of doubles`;
    report("number_too_large", expression.span, message);
    return null;
  }
  return power(base, isNegative ? -Number(size) : Number(size));
}

/** Powers of 0, 1 and -1, and the power 0, whatever the size of the exponent. */
function trivialPower(base: Quantity, size: bigint): Quantity | null {
  if (size === 0n) return exact(1n);
  if (base.radius !== 0 || base.value.d !== 1n || base.value.n > 1n) return null;
  return base.value.s < 0n && size % 2n === 0n ? negate(base) : base;
}

function explodes(base: Quantity, size: bigint): boolean {
  if (size > BigInt(MOST_POWER)) return true;
  if (base.radius === 0) {
    const bits = Math.max(bitsOf(base.value.n), bitsOf(base.value.d));
    return (bits - 1) * Number(size) > 3.33 * MOST_DIGITS;
  }
  return Math.abs(Math.log2(Math.abs(toDouble(base)))) * Number(size) > 1100;
}
