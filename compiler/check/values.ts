/**
 * What the names in an expression are worth, and the judgement of every result: whether it may be kept.
 * In: quantities. Out: the same, or null once the reason was reported.
 */
import { type Span, spanText } from "../../grammar/span.ts";
import type { Expression } from "../../grammar/tree.ts";
import type { Quantity } from "../policy.ts";
import { showNumber } from "./figures.ts";
import { sizeOf, sizeText } from "./literals.ts";
import type { Scope } from "./scope.ts";

export type Values = {
  readonly scope: Scope;
  /** By index; null for one whose fault was reported. */
  readonly lets: readonly (Quantity | null)[];
  /** By name, inside the laws of a process, null for one whose fault was reported; no map elsewhere. */
  readonly parameters: ReadonlyMap<string, Quantity | null> | null;
};

/** A result when its size may be kept. */
export function kept(value: Quantity | null, expression: Expression, values: Values): Quantity | null {
  if (value === null) return null;
  const size = Number.isFinite(value.radius) ? sizeOf(value.value) : "large";
  if (size === "fits" || (size === "small" && value.radius > 0)) return value;
  values.scope.report("number_too_large", expression.span, `${shorten(expression)} ${sizeText(size)}`);
  return null;
}

/** The text of an expression in quotes, cut when long. */
export function shorten(expression: { readonly span: Span }): string {
  const text = spanText(expression.span).replace(/\s+/g, " ");
  return `"${text.length <= 40 ? text : `${text.slice(0, 37)}…`}"`;
}

/** A value with the text that made it: `"mu - 3", which is -1`, or just `-1` where it was written so. */
export function showValue(expression: { readonly span: Span }, value: Quantity): string {
  const [text, shown] = [spanText(expression.span), showNumber(value)];
  return text === shown ? shown : `${shorten(expression)}, which is ${shown}`;
}
