/**
 * The values of process parameters: `PARAM from a to b by c`.
 * In: sweeps. Out: the values of each parameter, and the combinations of all, at most MOST_VALUES of them. The number of
 * values is judged before they are made.
 */
import type { Sweep } from "../../grammar/tree.ts";
import { add, compareQuantities, divide, exact, multiply, subtract } from "../chance/quantity.ts";
import type { Parameter, Quantity } from "../policy.ts";
import { evaluate } from "./expressions.ts";
import { showNumber } from "./figures.ts";
import { shorten, type Values } from "./values.ts";

/** The combinations of parameter values a process may have. */
const MOST_VALUES = 10_000;

const ZERO = exact(0n);

/** The parameters of a process, null for one whose fault was reported. */
export function checkSweeps(sweeps: readonly Sweep[], values: Values): (Parameter | null)[] {
  const parameters = sweeps.map((sweep) => checkSweep(sweep, values));
  const combinations = parameters.reduce(
    (product, parameter) => product * (parameter?.values.length ?? 1),
    1,
  );
  if (combinations <= MOST_VALUES) return parameters;
  const last = sweeps.at(-1)!;
  values.scope.report(
    "sweep_range",
    last.span,
    `the sweeps make ${combinations.toLocaleString("en-US")} combinations; at most ${MOST_VALUES.toLocaleString("en-US")} are measured`,
    {
      hint: "take larger steps",
      data: { combinations, most: MOST_VALUES },
    },
  );
  return parameters.map(() => null);
}

function checkSweep(sweep: Sweep, values: Values): Parameter | null {
  const from = evaluate(sweep.from, values);
  const to = evaluate(sweep.to, values);
  const by = evaluate(sweep.by, values);
  if (from === null || to === null || by === null) return null;
  const steps = countSteps(sweep, from, to, by, values);
  if (steps === null) return null;
  const grid = Array.from({ length: steps + 1 }, (_, step) => add(from, multiply(exact(BigInt(step)), by)));
  return { name: sweep.name.text, values: grid, span: sweep.span };
}

/** The number of steps from the first value to the last, or null once the reason was reported. */
function countSteps(sweep: Sweep, from: Quantity, to: Quantity, by: Quantity, values: Values): number | null {
  const fail = (message: string, hint: string): null => {
    const data = {
      parameter: sweep.name.text,
      from: showNumber(from),
      to: showNumber(to),
      by: showNumber(by),
    };
    values.scope.report("sweep_range", sweep.span, message, { hint, data });
    return null;
  };
  const open = (question: string): null => {
    values.scope.report(
      "open_question",
      sweep.span,
      `${question} is left open: the numbers are known to double accuracy only`,
    );
    return null;
  };
  const step = compareQuantities(by, ZERO);
  if (step === "open") return open(`whether the step ${shorten(sweep.by)} is above 0`);
  if (step !== "greater")
    return fail(`the step of "${sweep.name.text}" is ${showNumber(by)}`, "a step is more than 0");
  const order = compareQuantities(from, to);
  if (order === "equal") return 0;
  if (order === "greater") {
    const hint = `write \`from ${shorten(sweep.to)} to ${shorten(sweep.from)}\``.replaceAll('"', "");
    return fail(`"${sweep.name.text}" goes from ${showNumber(from)} down to ${showNumber(to)}`, hint);
  }
  const ratio = divide(subtract(to, from), by);
  if (compareQuantities(ratio, exact(BigInt(MOST_VALUES))) !== "less") {
    const most = MOST_VALUES.toLocaleString("en-US");
    return fail(
      `"${sweep.name.text}" takes more than ${most} values`,
      `take larger steps than ${showNumber(by)}`,
    );
  }
  const steps = Number(ratio.value.floor().n);
  const last = compareQuantities(ratio, exact(BigInt(steps)));
  const isClear =
    ratio.radius === 0 ||
    (last === "greater" && compareQuantities(ratio, exact(BigInt(steps + 1))) === "less");
  return isClear ? steps : open(`whether ${showNumber(to)} is the last value of "${sweep.name.text}"`);
}
