/**
 * Every form of condition, alone and inside others, on the letters a, b and c: the table over which machine and twin are
 * compared on all strings. The failures assigned to a and to c are b; `pair` and `twice` are rules.
 */
import {
  and,
  andThen,
  asSet,
  choice,
  except,
  not,
  or,
  overlapping,
  pattern,
  policy,
  row,
  rule,
  run,
  scan,
  separate,
  set,
  signal,
  times,
  unless,
  weak,
} from "../oracle/build.ts";
import type { Condition, Policy } from "../oracle/policy.ts";

const any = times(0, null, "any");

export const FORMS: readonly Condition[] = [
  set("a"),
  set("a|b"),
  set(except("any", "b")),
  run(1, "a"),
  run(2, "a|c"),
  run(4, "a"),

  weak(3, "a", 1),
  weak(3, "a", 2),
  weak(2, "a|c", 1),
  weak(4, "c", 1),
  weak(2, "a", 0),
  weak(1, "a", 3),
  weak(3, "a", 1, "c"),
  weak(3, "a", 2, "b|c"),

  scan(1, 3, "a"),
  scan(2, 3, "a"),
  scan(3, 4, "a"),
  scan(3, 5, "a"),
  scan(2, 6, "a|b"),
  scan(3, 3, "a"),

  pattern("abab"),
  pattern(row("a", times(2, 3, "b"))),
  pattern(row("a", times(1, null, "b"), "a")),
  pattern(row(choice("a", row("b", "b")), "c")),
  pattern(row(times(0, 2, "a"), "b", "any", "a|b")),
  pattern(times(2, 2, row("a", times(0, 1, "c")))),
  pattern(row("a", any, "b", any, "c")),
  pattern(times(2, null, choice(row("a", "b"), "c"))),
  pattern(row(times(1, null, times(0, 1, "a")), "b")),

  separate(1, run(2, "a")),
  separate(3, set("a")),
  separate(2, weak(2, "a", 1)),
  separate(2, scan(2, 3, "a")),
  separate(2, pattern("aba")),
  separate(2, separate(2, set("a|c"))),
  separate(2, andThen(set("a"), set("b"))),
  separate(2, or(run(2, "a"), run(2, "b"))),
  separate(2, and(set("a"), not(pattern("ba")))),
  overlapping(1, pattern("aa")),
  overlapping(2, pattern("aba")),
  overlapping(3, scan(2, 3, "a")),
  overlapping(2, weak(2, "a", 1)),
  overlapping(2, separate(2, set("a"))),
  separate(2, overlapping(2, run(2, "a"))),
  overlapping(2, unless(set("a"), set("b"), 1)),

  andThen(set("a"), set("b")),
  andThen(run(2, "a"), run(2, "a")),
  andThen(set("a"), run(2, "b"), 3),
  andThen(set("a"), set("a"), 1),
  andThen(set("a"), separate(2, set("b"))),
  andThen(set("a"), overlapping(2, pattern("bb")), 5),
  andThen(andThen(set("a"), set("b"), 2), set("c"), 2),
  andThen(set("a"), andThen(set("b"), set("c"), 1), 4),
  andThen(set("a"), weak(2, "c", 1)),
  andThen(scan(2, 3, "a"), scan(2, 3, "c"), 4),
  andThen(set("a"), unless(set("b"), set("c"), 2)),

  unless(set("a"), set("b"), 1),
  unless(set("a"), set("b"), 3),
  unless(set("a"), run(2, "b"), 3),
  unless(run(2, "a"), andThen(set("b"), set("c")), 3),
  unless(unless(set("a"), set("b"), 1), set("c"), 1),
  unless(set("a"), separate(2, set("b")), 3),
  unless(andThen(set("a"), set("b")), set("c"), 2),

  and(set("a"), pattern(row("b", "any"))),
  and(scan(2, 3, "a"), scan(2, 4, "a|b")),
  or(run(2, "a"), run(3, "b")),
  or(weak(2, "a", 1), andThen(set("b"), set("c"), 2)),
  and(set("a"), not(pattern("ba"))),
  and(not(run(2, "a")), scan(2, 3, "a")),
  not(or(not(set("a")), pattern(row("b", any, "a")))),
  not(not(weak(2, "a", 1))),

  rule("pair"),
  rule("twice"),
  separate(2, rule("pair")),
  andThen(rule("pair"), rule("twice")),
  and(rule("pair"), not(rule("twice"))),
];

/** The condition watched in one of three ways; with `restart` it is another signal that clears it. */
export function watched(condition: Condition, response: "own" | "continue" | "restart"): Policy {
  const signals =
    response === "restart"
      ? [signal(condition, { response: "continue" }), signal(pattern("acb"), { name: "r", response })]
      : [signal(condition, { response })];
  return policy("abc", signals, {
    assigns: [{ from: asSet("a|c"), to: asSet("b") }],
    rules: [
      { name: "pair", condition: run(2, "a") },
      { name: "twice", condition: andThen(rule("pair"), rule("pair"), 3) },
    ],
  });
}
