/**
 * Calls of functions in expressions: their shape, and what is said of operands that do not fit.
 */
import type { Expression } from "../../grammar/tree.ts";
import { toDouble } from "../chance/quantity.ts";
import type { Quantity } from "../policy.ts";
import { showNumber } from "./figures.ts";
import { shorten, showValue, type Values } from "./values.ts";

export type Call = Extract<Expression, { kind: "call" }>;
/** The way to work out an operand. */
export type Evaluate = (expression: Expression, values: Values) => Quantity | null;

/** Says that a call has too many or too few operands. */
export function wrongCount(call: Call, due: string, values: Values): null {
  values.scope.report(
    "wrong_operands",
    call.span,
    `\`${call.name.text}\` takes ${due}, and ${shorten(call)} has ${call.operands.length}`,
    {
      data: { function: call.name.text, operands: call.operands.length },
    },
  );
  return null;
}

/** Says that an operand lies, or may lie, outside the domain. */
export function outside(call: Call, domain: string, x: Quantity, order: string, values: Values): null {
  const operand = call.operands[0] ?? call;
  if (order === "open") {
    const range = `${showNumber(x, 3)} ± ${x.radius.toPrecision(2)}`;
    values.scope.report(
      "open_question",
      operand.span,
      `${domain}, and the sign of ${shorten(operand)} is left open: it is ${range}`,
    );
  } else {
    values.scope.report("number_domain", operand.span, `${domain}, not ${showValue(operand, x)}`, {
      data: { function: call.name.text, value: toDouble(x) },
    });
  }
  return null;
}
