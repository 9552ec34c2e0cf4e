/**
 * Counts: whole numbers as written, or lets that have a whole value.
 * In: a count, the values of the lets, and the least it may be. Out: a number, or null once the reason was reported.
 * Counts go up to MOST_TRIALS; the size of what they make is for the state budget.
 */
import type { Span } from "../../grammar/span.ts";
import type { Count } from "../../grammar/tree.ts";
import { toDouble } from "../chance/quantity.ts";
import { showNumber } from "./figures.ts";
import { type More, resolve } from "./scope.ts";
import type { Values } from "./values.ts";

/** The largest count of trials, gap limit or time limit. */
export const MOST_TRIALS = 1_000_000;

/** The value of a count that may be `least` or more; `role` says in the message what it counts. */
export function readCount(count: Count, least: number, role: string, values: Values): number | null {
  if (count.kind === "literal")
    return withinRange(count.text, Number(count.text), least, role, count.span, values);
  const entity = resolve(
    values.scope,
    count.name,
    ["let"],
    `${role} is a whole number, or a \`let\` that has one`,
  );
  if (entity === null) return null;
  const value = values.lets[entity.index];
  if (value === undefined || value === null) return null;
  const related = [{ span: entity.span, message: `"${count.name.text}" gets its value here` }];
  if (value.radius !== 0 || value.value.d !== 1n) {
    const shown =
      value.radius === 0 ? showNumber(value) : `${showNumber(value)}, known to double accuracy only`;
    values.scope.report(
      "count_not_whole",
      count.span,
      `${role} is a whole number, and "${count.name.text}" is ${shown}`,
      {
        related,
        data: { name: count.name.text, value: toDouble(value) },
      },
    );
    return null;
  }
  const text = `"${count.name.text}", which is ${showNumber(value)}`;
  return withinRange(text, toDouble(value), least, role, count.span, values, related);
}

/** The value of a count in a pattern, written as digits. */
export function readDigits(digits: string, role: string, span: Span, values: Values): number | null {
  return withinRange(digits, Number(digits), 0, role, span, values);
}

function withinRange(
  text: string,
  value: number,
  least: number,
  role: string,
  span: Span,
  values: Values,
  related: NonNullable<More["related"]> = [],
): number | null {
  if (value >= least && value <= MOST_TRIALS) return value;
  const shown = text.length > 40 ? `a number of ${text.length} digits` : text;
  const limit = value < least ? `at least ${least}` : `at most ${MOST_TRIALS.toLocaleString("en-US")}`;
  values.scope.report("count_out_of_range", span, `${role} is ${limit}, not ${shown}`, {
    related,
    data: { value: Number.isFinite(value) ? value : null, least, most: MOST_TRIALS },
  });
  return null;
}
