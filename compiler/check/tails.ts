/**
 * `upper(MODEL, p)` and `lower(MODEL, p)`: the value exceeded, or not reached, with chance p.
 * In: the call. Out: its value to double accuracy, or null once the reason was reported. The first operand is a call of a
 * distribution and no number: it is read here and nowhere else.
 */
import { FAMILIES } from "../chance/families.ts";
import { lowerQuantile, upperQuantile } from "../chance/quantile.ts";
import { compareQuantities, exact } from "../chance/quantity.ts";
import type { Quantity } from "../policy.ts";
import { type Call, type Evaluate, wrongCount } from "./calls.ts";
import { type Distributed, readFamily } from "./families.ts";
import { showNumber } from "./figures.ts";
import { shorten, showValue, type Values } from "./values.ts";

/** The value of a call of `upper` or `lower`. */
export function applyTail(call: Call, values: Values, evaluate: Evaluate): Quantity | null {
  const [model, chance] = call.operands;
  if (model === undefined || chance === undefined || call.operands.length > 2) {
    return wrongCount(call, "2 operands, a distribution and a probability", values);
  }
  const p = evaluate(chance, values);
  if (model.kind !== "call") {
    const message = `\`${call.name.text}\` takes a distribution first, and ${shorten(model)} is none`;
    values.scope.report("wrong_operands", model.span, message, {
      hint: `write \`${call.name.text}(normal(0, 1), 0.001)\``,
      data: { function: call.name.text },
    });
    return null;
  }
  const found = readFamily(model, values, evaluate);
  if (p === null || found === null || !isInside(p, chance, call, values)) return null;
  return quantileOf(found, p, call, values);
}

function isInside(p: Quantity, written: Call["operands"][number], call: Call, values: Values): boolean {
  const [low, high] = [compareQuantities(p, exact(0n)), compareQuantities(p, exact(1n))];
  if (low === "greater" && high === "less") return true;
  const isOpen = low === "open" || high === "open";
  const message = `the probability of \`${call.name.text}\` lies between 0 and 1, not at ${showValue(written, p)}`;
  const data = { function: call.name.text, value: showNumber(p) };
  if (isOpen)
    values.scope.report("open_question", written.span, `${message}, to double accuracy only`, { data });
  else values.scope.report("number_domain", written.span, message, { data });
  return false;
}

function quantileOf(
  { family, parameters }: Distributed,
  p: Quantity,
  call: Call,
  values: Values,
): Quantity | null {
  const quantile = call.name.text === "upper" ? upperQuantile : lowerQuantile;
  const value = quantile(family, parameters, p);
  if (!("refused" in value)) return value;
  const code = FAMILIES.get(family.name)?.law === null ? "measure_not_built" : "number_domain";
  values.scope.report(code, call.span, `${shorten(call)} has no value: ${value.refused}`, {
    data: { function: call.name.text, model: family.name },
  });
  return null;
}
