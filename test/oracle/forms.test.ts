// The condition forms, one table: what the language reference says of each, worked by hand.
import { describe, expect, test } from "vitest";
import {
  and,
  andThen,
  choice,
  not,
  or,
  overlapping,
  pattern,
  policy,
  row,
  rows,
  rule,
  run,
  scan,
  separate,
  set,
  signal,
  times,
  unless,
  weak,
} from "./build.ts";
import { onSilence } from "./meaning.ts";
import type { Condition } from "./policy.ts";
import { conditionText } from "./text.ts";
import { answers } from "./twin.ts";

const ASSIGNED = {
  assigns: [
    { from: letter("a"), to: letter("b") },
    { from: letter("c"), to: letter("b") },
  ],
  rules: [
    { name: "pair", condition: run(2, "a") },
    { name: "twice", condition: andThen(rule("pair"), rule("pair")) },
  ],
};

function letter(name: string): { kind: "letter"; name: string } {
  return { kind: "letter", name };
}

/** A mark for each trial: x where the condition holds, nothing being cleared. */
function marks(condition: Condition, stream: string): string {
  const watched = policy("abc", [signal(condition, { response: "continue" })], ASSIGNED);
  return answers(watched, rows(stream))
    .map(({ raised }) => (raised.length > 0 ? "x" : "."))
    .join("");
}

/** Condition, trials, marks. */
const TABLE: readonly (readonly [Condition, string, string])[] = [
  [set("a"), "abca", "x..x"],
  [set("a|b"), "abca", "xx.x"],
  [set("any"), "abc", "xxx"],

  [run(1, "a"), "aba", "x.x"],
  [run(2, "a"), "aabaaa", ".x..xx"],
  [run(3, "a|b"), "abcabba", ".....xx"],

  [weak(3, "a", 1), "ababa", "....x"],
  [weak(3, "a", 1), "abbaa", "....."],
  [weak(3, "a", 1), "abaaa", "...xx"],
  [weak(3, "a", 1), "acaa", "...."],
  [weak(3, "a", 1), "aaba", "...x"],
  [weak(3, "a", 1), "aabba", "....."],
  [weak(3, "a", 2), "aabbabba", "....x..x"],
  [weak(2, "a", 0), "aabaa", ".x..x"],
  [weak(1, "a", 5), "abba", "x..x"],
  // Letters with one assignment may alternate.
  [weak(3, "a|c", 1), "abcba", "....x"],
  [weak(3, "a", 1, "b|c"), "acaba", "....x"],
  [weak(2, "b", 1, "c"), "bcbab", "..x.."],

  [scan(2, 3, "a"), "abba", "...."],
  [scan(2, 3, "a"), "abaab", "..xx."],
  [scan(2, 3, "a"), "aa", ".x"],
  [scan(1, 3, "a"), "abb", "x.."],
  [scan(3, 5, "a"), "abbaa", "....x"],
  [scan(3, 3, "a"), "aaaa", "..xx"],

  [pattern("aba"), "ababa", "..x.x"],
  [pattern(row("a", times(2, 3, "b"))), "abbbb", "..xx."],
  [pattern(row("a", times(1, null, "b"), "a")), "abbaba", "...x.x"],
  [pattern(row(choice("a", "b"), "c")), "acbcc", ".x.x."],
  [pattern(row(times(0, 1, "a"), "b")), "bab", "x.x"],
  [pattern(times(2, 2, row("a", "b"))), "ababab", "...x.x"],
  [pattern(row("a", times(0, null, "any"), "b")), "cacbb", "...xx"],
  [pattern(row(times(1, null, row(times(0, 1, "a"), times(0, 1, "b"))), "c")), "cabc", "x..x"],
  [pattern(row(times(3, 3, times(0, 1, "a")), "b")), "baaab", "x...x"],
  [pattern(choice(row("a"), row("b", "b"))), "abbb", "x.xx"],

  [separate(2, pattern("aa")), "aaaaaaaa", "...x...x"],
  [separate(3, set("a")), "aabaaaa", "...x..x"],
  [separate(1, run(2, "a")), "aaaaa", ".x.x."],
  [separate(2, separate(2, set("a"))), "aaaaaaaa", "...x...x"],
  // The scan is cleared too: its window starts short again.
  [separate(2, scan(2, 3, "a")), "aabaabaa", "....x..."],
  [overlapping(2, pattern("aa")), "aaaaaaaa", "..x..x.."],
  [overlapping(1, run(2, "a")), "aaaaa", ".x.x."],
  [overlapping(3, run(2, "a")), "aaaaaaaa", "...x...x"],
  [overlapping(2, scan(2, 3, "a")), "aababa", "...x.."],

  [andThen(set("a"), set("b")), "babb", "..xx"],
  [andThen(set("a"), run(2, "b")), "babbb", "...xx"],
  [andThen(set("a"), run(2, "b")), "bab", "..."],
  [andThen(set("a"), set("b"), 2), "abbb", ".xx."],
  [andThen(set("a"), set("b"), 2), "acab", "...x"],
  [andThen(set("a"), set("b"), 1), "acab", "...x"],
  [andThen(set("a"), set("a"), 1), "aaca", ".x.."],
  [andThen(run(2, "a"), run(2, "a")), "aaaaa", "...xx"],
  [andThen(run(2, "a"), set("a")), "aaa", "..x"],
  [andThen(set("a"), andThen(set("b"), set("c"))), "acbcabc", "...x..x"],
  [andThen(andThen(set("a"), set("b")), set("c")), "acbcc", "...xx"],
  [andThen(andThen(set("a"), set("b"), 1), set("c"), 1), "abcabac", "..x...."],
  // B is begun afresh: the second of its completions counts from there.
  [andThen(set("a"), separate(2, set("b"))), "babbb", "...x."],
  [andThen(set("a"), separate(2, set("b")), 3), "babbabb", "...x..x"],

  [unless(set("a"), set("b"), 2), "acc", "..x"],
  [unless(set("a"), set("b"), 2), "acb", "..."],
  [unless(set("a"), set("b"), 2), "aaaa", "..xx"],
  [unless(set("a"), set("b"), 1), "abac", "...x"],
  [unless(set("a"), run(2, "b"), 2), "abbabc", ".....x"],
  [unless(set("a"), run(2, "b"), 2), "babc", "...x"],
  [unless(run(2, "a"), set("a"), 1), "aaab", "...x"],

  [and(set("a"), pattern("ba")), "aaba", "...x"],
  [or(run(2, "a"), set("c")), "aacaa", ".xx.x"],
  [and(pattern(row("c", "any")), not(set("a"))), "cacbcc", "...x.x"],
  [and(set("a"), not(not(pattern("ba")))), "aaba", "...x"],
  [not(set("a")), "abc", ".xx"],

  [rule("pair"), "aaa", ".xx"],
  [rule("twice"), "aaaaa", "...xx"],
  [separate(2, rule("pair")), "aaaa", "...x"],
];

describe("every form of condition, by hand", () => {
  test.each(
    TABLE.map(([condition, stream, marked]) => [conditionText(condition), stream, marked, condition]),
  )("%s on %s: %s", (_, stream, marked, condition) => {
    expect(marks(condition as Condition, stream as string)).toBe(marked);
  });
});

describe("what a condition says of silence", () => {
  test.each([
    [set("a"), false],
    [not(set("a")), true],
    [and(set("a"), not(set("b"))), false],
    [or(set("a"), not(set("b"))), true],
    [not(or(not(set("a")), set("b"))), false],
    [unless(set("a"), set("b"), 2), false],
    [not(rule("pair")), true],
  ])("%#", (condition, answer) => {
    expect(onSilence(policy("abc", [], ASSIGNED), condition)).toBe(answer);
  });
});
