/**
 * Calls of distributions, in laws and in `upper` and `lower`: `normal(mu, 2)`.
 * In: a name and its operands. Out: all parameters, defaults filled in and each within its range, or null once the reason
 * was reported. Which distributions there are is told by `chance/families.ts`.
 */
import { nearest } from "../../grammar/spelling.ts";
import type { Expression, Name } from "../../grammar/tree.ts";
import { FAMILIES, type Family, withDefaults } from "../chance/families.ts";
import type { Quantity } from "../policy.ts";
import type { Call, Evaluate } from "./calls.ts";
import { countOf } from "./figures.ts";
import { shorten, type Values } from "./values.ts";

export type Distributed = { readonly family: Family; readonly parameters: readonly Quantity[] };

/** The family of a call, with its parameters. */
export function readFamily(
  call: Pick<Call, "name" | "operands" | "span">,
  values: Values,
  evaluate: Evaluate,
): Distributed | null {
  const family = FAMILIES.get(call.name.text);
  if (family === undefined) return unknownModel(call.name, values);
  const operands = call.operands.map((operand) => evaluate(operand, values));
  const required = family.parameters.filter(({ fallback }) => fallback === null).length;
  if (operands.length < required || operands.length > family.parameters.length) {
    return wrongNumber(call, family, required, values);
  }
  if (operands.includes(null)) return null;
  const parameters = withDefaults(family, operands as readonly Quantity[]);
  const fault = parameters === null ? null : family.check(parameters);
  if (parameters !== null && fault === null) return { family, parameters };
  values.scope.report(
    "model_parameter",
    spanOfOperands(call),
    `there is no \`${shorten(call).slice(1, -1)}\`: ${fault}`,
    {
      data: { model: family.name, fault },
    },
  );
  return null;
}

function spanOfOperands(call: {
  readonly operands: readonly Expression[];
  readonly span: Expression["span"];
}): Expression["span"] {
  const [first] = call.operands;
  const last = call.operands.at(-1);
  return first === undefined || last === undefined ? call.span : { ...first.span, end: last.span.end };
}

function unknownModel(name: Name, values: Values): null {
  const known = [...FAMILIES.keys()];
  const near = nearest(name.text, known);
  const hint = near ? `did you mean \`${near}\`?` : `the models are ${known.join(", ")}, { … } and markov`;
  values.scope.report("unknown_model", name.span, `there is no model "${name.text}"`, {
    hint,
    data: { model: name.text },
  });
  return null;
}

function wrongNumber(
  call: Pick<Call, "name" | "operands" | "span">,
  family: Family,
  required: number,
  values: Values,
): null {
  const parameters = family.parameters.map(({ name, fallback }) => (fallback === null ? name : `[${name}]`));
  const most = family.parameters.length;
  const due = required === most ? countOf(most, "operand") : `${required} to ${most} operands`;
  const message = `\`${family.name}\` takes ${due}, and ${shorten(call)} has ${call.operands.length}`;
  values.scope.report("wrong_operands", call.span, message, {
    hint: `write \`${family.name}(${parameters.join(", ")})\``,
    data: { model: family.name, operands: call.operands.length },
  });
  return null;
}
