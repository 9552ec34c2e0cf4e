/**
 * The functions of expressions. In: a call and the way to work out its operands. Out: its value, or null once the reason
 * was reported. `abs`, `min` and `max` are exact, and so are `sqrt` of a rational square, `exp(0)` and `ln(1)`; all
 * others are correct to double accuracy and carry a radius that covers their error and that of their operand.
 */
import Fraction from "fraction.js";
import { nearest } from "../../grammar/spelling.ts";
import { compareQuantities, exact, fromDouble, subtract, toDouble } from "../chance/quantity.ts";
import type { Quantity } from "../policy.ts";
import { type Call, type Evaluate, outside, wrongCount } from "./calls.ts";
import { controlConstant } from "./constants.ts";
import { showNumber } from "./figures.ts";
import { bitsOf, sizeText } from "./literals.ts";
import { applyTail } from "./tails.ts";
import { shorten, type Values } from "./values.ts";

const ZERO = exact(0n);
const ONE = exact(1n);
/** Two units in the last place, relative: more than the error of `Math.exp`, `Math.log` and `Math.sqrt`. */
const DOUBLE_ACCURACY = 2 ** -51;

const unary: ReadonlyMap<string, (x: Quantity, call: Call, values: Values) => Quantity | null> = new Map([
  ["sqrt", squareRoot],
  ["exp", exponential],
  ["ln", logarithm],
  ["abs", (x: Quantity) => ({ value: x.value.abs(), radius: x.radius })],
  ["c4", controlConstant],
  ["d2", controlConstant],
  ["d3", controlConstant],
]);
const choosing: ReadonlyMap<string, "less" | "greater"> = new Map([
  ["min", "less"],
  ["max", "greater"],
]);

/** Names that may stand before a parenthesis in an expression. */
const functionNames: readonly string[] = [...unary.keys(), ...choosing.keys(), "upper", "lower"];

/** The value of a call. */
export function applyFunction(call: Call, values: Values, evaluate: Evaluate): Quantity | null {
  const name = call.name.text;
  if (name === "upper" || name === "lower") return applyTail(call, values, evaluate);
  const operands = call.operands.map((operand) => evaluate(operand, values));
  const one = unary.get(name);
  const wanted = choosing.get(name);
  if (one === undefined && wanted === undefined) return unknownFunction(call, values);
  if (one !== undefined && operands.length !== 1) return wrongCount(call, "1 operand", values);
  const known = operands.filter((operand) => operand !== null);
  const [first] = known;
  if (known.length < operands.length || first === undefined) return null;
  if (one !== undefined) return one(first, call, values);
  return known.reduce((a, b) => choose(a, b, wanted ?? "less"));
}

function unknownFunction(call: Call, values: Values): null {
  const name = call.name.text;
  const near = nearest(name, functionNames);
  const hint =
    name === "pi"
      ? "`pi` stands without parentheses"
      : name === "log"
        ? "the natural logarithm is `ln(x)`; to base 10: `ln(x) / ln(10)`"
        : near
          ? `did you mean \`${near}\`?`
          : `the functions are ${functionNames.join(" ")}, and pi`;
  values.scope.report("unknown_function", call.name.span, `there is no function "${name}"`, {
    hint,
    data: { name },
  });
  return null;
}

/** The smaller or larger of two; where that is open both are within the larger radius of the answer. */
function choose(a: Quantity, b: Quantity, wanted: "less" | "greater"): Quantity {
  const order = compareQuantities(a, b);
  if (order !== "open") return order === wanted || order === "equal" ? a : b;
  const isFirst = a.value.compare(b.value) < 0 === (wanted === "less");
  return { value: (isFirst ? a : b).value, radius: Math.max(a.radius, b.radius) };
}

function squareRoot(x: Quantity, call: Call, values: Values): Quantity | null {
  const order = compareQuantities(x, ZERO);
  if (order === "equal") return ZERO;
  if (order !== "greater")
    return outside(call, "a square root needs a number of at least 0", x, order, values);
  if (x.radius === 0) {
    const n = wholeRoot(x.value.n);
    const d = n === null ? null : wholeRoot(x.value.d);
    if (n !== null && d !== null) return exact(new Fraction(n, d));
  }
  const y = Math.sqrt(toDouble(x));
  return fromDouble(y, y * DOUBLE_ACCURACY + (1.001 * x.radius + 5e-324) / y);
}

/** The root of a positive whole number when it is whole, by Newton's method from above. */
function wholeRoot(n: bigint): bigint | null {
  let root = 1n << BigInt((bitsOf(n) >> 1) + 1);
  for (let next = (root + n / root) >> 1n; next < root; next = (root + n / root) >> 1n) root = next;
  return root * root === n ? root : null;
}

function exponential(x: Quantity, call: Call, values: Values): Quantity | null {
  if (x.radius === 0 && x.value.n === 0n) return ONE;
  const argument = toDouble(x);
  const y = Math.exp(argument);
  if (!Number.isFinite(y) || y === 0) {
    const size = sizeText(y === 0 ? "small" : "large");
    values.scope.report("number_too_large", call.span, `${shorten(call)} ${size}`, {
      data: { function: "exp", value: showNumber(x) },
    });
    return null;
  }
  const relative = DOUBLE_ACCURACY + Math.abs(argument) * 2 ** -52 + Math.expm1(x.radius);
  return fromDouble(y, y * relative * 1.001 + 5e-324);
}

function logarithm(x: Quantity, call: Call, values: Values): Quantity | null {
  const order = compareQuantities(x, ZERO);
  if (order !== "greater") return outside(call, "a logarithm needs a number above 0", x, order, values);
  if (x.radius === 0 && x.value.n === 1n && x.value.d === 1n) return ZERO;
  const argument = toDouble(x);
  const near = argument > 0.5 && argument < 2;
  const y = near ? Math.log1p(toDouble(subtract(x, ONE))) : Math.log(argument);
  const fromOperand = (x.radius / Math.max(argument - x.radius, 5e-324)) * 1.001;
  const fromRounding = near ? 0 : 2 ** -52;
  return fromDouble(y, Math.abs(y) * DOUBLE_ACCURACY + fromRounding + fromOperand + 5e-324);
}
