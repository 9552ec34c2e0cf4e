/**
 * `c4(n)`, `d2(n)` and `d3(n)`: the usual factors of the standard deviation and of the range of n normal values.
 * In: the call and its operand. Out: the factor to double accuracy, or null once the reason was reported.
 */
import { c4, d2, d3, LARGEST_SAMPLE } from "../chance/control-constants.ts";
import { toDouble } from "../chance/quantity.ts";
import type { Quantity } from "../policy.ts";
import type { Call } from "./calls.ts";
import { showNumber } from "./figures.ts";
import { showValue, type Values } from "./values.ts";

const factors: ReadonlyMap<string, (n: number) => Quantity> = new Map([
  ["c4", c4],
  ["d2", d2],
  ["d3", d3],
]);

/** Factors worked out so far: d3 takes 20 ms, and the law of a sweep asks for it at every value. */
const known = new Map<string, Quantity>();

/** The factor a call asks for. */
export function controlConstant(n: Quantity, call: Call, values: Values): Quantity | null {
  const size = toDouble(n);
  const isWhole = n.radius === 0 && n.value.d === 1n;
  const factor = factors.get(call.name.text);
  if (factor !== undefined && isWhole && size >= 2 && size <= LARGEST_SAMPLE) {
    const key = `${call.name.text} ${size}`;
    const value = known.get(key) ?? factor(size);
    known.set(key, value);
    return value;
  }
  const operand = call.operands[0] ?? call;
  const most = LARGEST_SAMPLE.toLocaleString("en-US");
  const message = `\`${call.name.text}\` is of a sample size, whole and from 2 to ${most}, not ${showValue(operand, n)}`;
  values.scope.report("number_domain", operand.span, message, {
    data: { function: call.name.text, value: showNumber(n) },
  });
  return null;
}
