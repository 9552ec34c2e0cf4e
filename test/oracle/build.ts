/**
 * Short ways to write conditions and policies as data in tests. A string for a SET is a letter, or several with a bar
 * between (`"a|b"`); `"any"` is any. A string for a stream is one character a trial: the letter, or `?` for a missing one.
 */
import type { Condition, Count, Pattern, Policy, Row, SetExpr, Signal } from "./policy.ts";

type SetLike = SetExpr | string;

export function asSet(set: SetLike): SetExpr {
  if (typeof set !== "string") return set;
  if (set === "any") return { kind: "any" };
  const members = set.split("|").map((name): SetExpr => ({ kind: "letter", name }));
  return members.length === 1 ? members[0]! : { kind: "union", members };
}

export const meet = (left: SetLike, right: SetLike): SetExpr => ({
  kind: "meet",
  left: asSet(left),
  right: asSet(right),
});
export const except = (left: SetLike, right: SetLike): SetExpr => ({
  kind: "except",
  left: asSet(left),
  right: asSet(right),
});

export const set = (of: SetLike): Condition => ({ kind: "set", set: asSet(of) });
export const run = (count: Count, of: SetLike): Condition => ({ kind: "run", count, set: asSet(of) });
export const scan = (count: Count, window: Count, of: SetLike): Condition => ({
  kind: "scan",
  count,
  window,
  set: asSet(of),
});
export const weak = (count: Count, of: SetLike, gap: Count, failures: SetLike | null = null): Condition => ({
  kind: "weakRun",
  count,
  set: asSet(of),
  gap,
  failures: failures === null ? null : asSet(failures),
});
export const rule = (name: string): Condition => ({ kind: "rule", name });
export const separate = (count: Count, operand: Condition): Condition => ({
  kind: "separate",
  count,
  operand,
});
export const overlapping = (count: Count, operand: Condition): Condition => ({
  kind: "overlapping",
  count,
  operand,
});
/** `left then right`; a module that exports a `then` could not be imported. */
export const andThen = (left: Condition, right: Condition, within: Count | null = null): Condition => ({
  kind: "then",
  left,
  right,
  within,
});
export const unless = (left: Condition, right: Condition, within: Count): Condition => ({
  kind: "unless",
  left,
  right,
  within,
});
export const and = (left: Condition, right: Condition): Condition => ({ kind: "and", left, right });
export const or = (left: Condition, right: Condition): Condition => ({ kind: "or", left, right });
export const not = (operand: Condition): Condition => ({ kind: "not", operand });

type PatternLike = Pattern | string;
const asPattern = (pattern: PatternLike): Pattern =>
  typeof pattern === "string" ? { kind: "letters", set: asSet(pattern) } : pattern;
/** Items side by side. */
export const row = (...items: PatternLike[]): Pattern => ({ kind: "sequence", items: items.map(asPattern) });
export const choice = (...options: PatternLike[]): Pattern => ({
  kind: "choice",
  options: options.map(asPattern),
});
export const times = (least: number, most: number | null, item: PatternLike): Pattern => ({
  kind: "repeat",
  least,
  most,
  item: asPattern(item),
});
/** `"hlhl"`, a letter a character, or a pattern. */
export const pattern = (of: PatternLike): Condition => ({
  kind: "pattern",
  pattern: typeof of === "string" ? row(...of) : of,
});

export const signal = (condition: Condition, more: Partial<Omit<Signal, "condition">> = {}): Signal => ({
  name: "s",
  condition,
  response: "own",
  quiet: null,
  ...more,
});

/** A policy on one alphabet `x` of the letters given, a character each. */
export function policy(letters: string, signals: readonly Signal[], more: Partial<Policy> = {}): Policy {
  return {
    lets: [],
    alphabets: [{ name: "x", kind: "zones", letters: [...letters], missingAs: null }],
    groups: [],
    assigns: [],
    rules: [],
    signals,
    clearBefore: [],
    clearAfter: [],
    missing: "refuse",
    blocks: null,
    ...more,
  };
}

export const rows = (stream: string): readonly Row[] =>
  [...stream].map((letter) => [letter === "?" ? null : letter]);
