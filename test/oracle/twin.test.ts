// The twin's signals, clears, missing trials and blocks: tables from the language reference, worked by hand.
import { describe, expect, test } from "vitest";
import {
  and,
  andThen,
  asSet,
  meet,
  not,
  or,
  pattern,
  policy,
  row,
  rows,
  rule,
  run,
  set,
  signal,
  unless,
  weak,
} from "./build.ts";
import type { Policy, Row } from "./policy.ts";
import { policyText } from "./text.ts";
import { answers } from "./twin.ts";

/** A mark for each row: x where the signal is raised. */
function marksOf(of: Policy, name: string, stream: readonly Row[]): string {
  return answers(of, stream)
    .map(({ raised }) => (raised.includes(name) ? "x" : "."))
    .join("");
}

describe("the example of the language reference", () => {
  const swing = pattern(row("high", "low", "high", "low"));
  const fill: Policy = {
    ...policy("", [
      signal(or(rule("heavy"), rule("light")), { name: "stop", response: "restart" }),
      signal(rule("swing"), { name: "look", quiet: { kind: "for", count: 20 } }),
    ]),
    alphabets: [{ name: "fill", kind: "zones", letters: ["low", "mid", "high"], missingAs: null }],
    assigns: [
      { from: asSet("high"), to: asSet("mid") },
      { from: asSet("low"), to: asSet("mid") },
    ],
    rules: [
      { name: "heavy", condition: weak(3, "high", 1) },
      { name: "light", condition: weak(2, "low", 1) },
      { name: "swing", condition: swing },
    ],
    missing: "break",
  };
  const trials = (text: string): readonly Row[] =>
    text.split(" ").flatMap((word, index, words): readonly Row[] => {
      if (/^\d+$/.test(word)) return [];
      const times = /^\d+$/.test(words[index - 1] ?? "") ? Number(words[index - 1]) : 1;
      return Array.from({ length: times }, () => [word === "?" ? null : word]);
    });

  test.each([
    // The two of the reference.
    ["high mid 2 high", "stop", "...x"],
    ["high 2 mid 2 high", "stop", "....."],
    ["low mid low", "stop", "..x"],
    ["low 2 mid low", "stop", "...."],
    ["high low high low", "look", "...x"],
    ["high low high low high low high low", "look", "...x...."],
    // `stop` restarts `look` too.
    ["high low low high low", "look", "....."],
    ["high mid ? 2 high", "stop", "....."],
    ["5 high", "stop", "..x.."],
  ])("%s: %s %s", (text, name, marked) => {
    expect(marksOf(fill, name, trials(text))).toBe(marked);
  });

  test("after a quiet of 20 trials it watches again, from clear memory", () => {
    const four = "high low high low";
    expect(marksOf(fill, "look", trials(`${four} 20 mid ${four}`)).lastIndexOf("x")).toBe(27);
    expect(marksOf(fill, "look", trials(`${four} 19 mid high low high low`)).lastIndexOf("x")).toBe(3);
  });

  test("its text", () => {
    expect(policyText(fill).split("\n")).toContain("signal stop when heavy or light restart");
  });
});

const s = (condition: Parameters<typeof signal>[0], more: Parameters<typeof signal>[1] = {}) =>
  signal(condition, { name: "s", ...more });
const r = (condition: Parameters<typeof signal>[0], more: Parameters<typeof signal>[1] = {}) =>
  signal(condition, { name: "r", ...more });
const quietFor = (count: number) => ({ quiet: { kind: "for" as const, count } });
const quietUntil = (condition: Parameters<typeof signal>[0]) => ({
  quiet: { kind: "until" as const, condition },
});
const LOST = [{ name: "x", kind: "zones" as const, letters: ["a", "b"], missingAs: "lost" }];
const AS_B = [{ name: "x", kind: "zones" as const, letters: ["a", "b"], missingAs: "b" }];

/** What it shows, the policy, a stream, and the marks of signal s. */
const TABLE: readonly (readonly [string, Policy, string, string])[] = [
  ["a raise clears its own memory", policy("ab", [s(run(2, "a"))]), "aaaaa", ".x.x."],
  ["continue clears nothing", policy("ab", [s(run(2, "a"), { response: "continue" })]), "aaaa", ".xxx"],
  [
    "the raise of another signal does not",
    policy("ab", [s(run(3, "a")), r(run(2, "a"))]),
    "aaaaaa",
    "..x..x",
  ],
  [
    "unless that one restarts",
    policy("ab", [s(run(3, "a")), r(run(2, "a"), { response: "restart" })]),
    "aaaaaa",
    "......",
  ],
  [
    "a restart at the same trial comes before nothing: both are raised",
    policy("ab", [s(run(2, "a"), { response: "continue" }), r(run(2, "a"), { response: "restart" })]),
    "aaaa",
    ".x.x",
  ],

  ["quiet for two trials", policy("ab", [s(set("a"), quietFor(2))]), "aaaaaaa", "x..x..x"],
  ["it watches from clear memory", policy("ab", [s(run(2, "a"), quietFor(1))]), "aaaaaa", ".x..x."],
  [
    "quiet clears even with continue",
    policy("ab", [s(run(2, "a"), { response: "continue", ...quietFor(1) })]),
    "aaaaaa",
    ".x..x.",
  ],
  ["quiet until b", policy("ab", [s(set("a"), quietUntil(set("b")))]), "aaabab", "x...x."],
  ["the condition begins afresh", policy("ab", [s(set("b"), quietUntil(run(2, "b")))]), "bbbb", "x..x"],
  ["it may be the same condition", policy("ab", [s(set("a"), quietUntil(set("a")))]), "aaa", "x.x"],
  [
    "quiet until a condition that holds on silence",
    policy("ab", [s(set("a"), quietUntil(not(set("a"))))]),
    "aabaa",
    "x..x.",
  ],
  [
    "restart ends the quiet of another",
    policy("ab", [s(set("b"), quietFor(3)), r(set("a"), { response: "restart", ...quietFor(1) })]),
    "bab",
    "x.x",
  ],
  [
    "but not one that begins at the same trial",
    policy("ab", [s(set("a"), quietFor(2)), r(set("a"), { response: "restart" })]),
    "ab",
    "x.",
  ],
  [
    "a restarting signal's own quiet stands",
    policy("ab", [s(set("a"), { response: "restart", ...quietFor(2) })]),
    "aaaa",
    "x..x",
  ],
  [
    "a restart after both began quiet at one trial",
    policy("ab", [s(set("a"), quietFor(5)), r(set("a"), { response: "restart", ...quietFor(2) })]),
    "aaaaa",
    "x...x",
  ],

  ["clear before", policy("ab", [s(pattern("ba"))], { clearBefore: [asSet("a")] }), "baba", "...."],
  ["the trial itself is read", policy("ab", [s(pattern("ab"))], { clearBefore: [asSet("a")] }), "aab", "..x"],
  ["and may raise", policy("ab", [s(set("a"))], { clearBefore: [asSet("a")] }), "aba", "x.x"],
  [
    "quiet times end",
    policy("abc", [s(set("a"), quietFor(3))], { clearBefore: [asSet("c")] }),
    "aacaa",
    "x..x.",
  ],
  ["clear after", policy("ab", [s(pattern("aba"))], { clearAfter: [set("b")] }), "abaaba", "......"],
  ["the raise of that trial stands", policy("ab", [s(set("b"))], { clearAfter: [set("b")] }), "bab", "x.x"],
  [
    "a quiet time just begun ends",
    policy("ab", [s(set("b"), quietFor(3))], { clearAfter: [set("b")] }),
    "bbb",
    "xxx",
  ],
  [
    "its own memory clears: the second pair is trials 3 and 4",
    policy("ab", [s(pattern("aa"), { response: "continue" })], { clearAfter: [run(2, "a")] }),
    "aaaaaa",
    ".x.x.x",
  ],
  [
    "a restart clears the memory of clear after",
    policy("abc", [s(pattern("ac")), r(set("b"), { response: "restart" })], {
      clearAfter: [andThen(set("a"), set("a"))],
    }),
    "abac",
    "...x",
  ],

  [
    "a block's edge clears",
    policy("ab", [s(run(2, "a"), { response: "continue" })], { blocks: 3 }),
    "aaaaaa",
    ".xx.xx",
  ],
  ["but not quiet times", policy("ab", [s(set("a"), quietFor(3))], { blocks: 2 }), "aaaaa", "x...x"],
  [
    "what a quiet waits for does begin again: not at 2 and 3, but at 3 and 4",
    policy("abc", [s(set("a|c"), quietUntil(run(2, "b")))], { blocks: 2 }),
    "abbcbba",
    "x.....x",
  ],
  [
    "restart keeps the place",
    policy("ab", [s(run(2, "a")), r(set("b"), { response: "restart" })], { blocks: 3 }),
    "abaaa",
    "....x",
  ],
  [
    "clear before does not",
    policy("ab", [s(run(2, "a"))], { blocks: 3, clearBefore: [asSet("b")] }),
    "abaaa",
    "...x.",
  ],
  [
    "nor does clear after",
    policy("ab", [s(run(2, "a"))], { blocks: 3, clearAfter: [set("b")] }),
    "abaaa",
    "...x.",
  ],

  ["refuse: the detector stays as it was", policy("ab", [s(run(2, "a"))]), "a??a", "...x"],
  ["skip: the same", policy("ab", [s(run(2, "a"))], { missing: "skip" }), "a??a", "...x"],
  ["break: memory clears", policy("ab", [s(run(2, "a"))], { missing: "break" }), "a?aa", "...x"],
  ["refuse: quiet does not count it", policy("ab", [s(set("a"), quietFor(2))]), "a??aaa", "x....x"],
  ["break: quiet does", policy("ab", [s(set("a"), quietFor(2))], { missing: "break" }), "a??a", "x..x"],
  [
    "break: what a quiet waits for begins afresh",
    policy("ab", [s(set("a"), quietUntil(run(2, "b")))], { missing: "break" }),
    "ab?baba",
    "x......",
  ],
  [
    "break takes a place in the block",
    policy("ab", [s(run(2, "a"))], { missing: "break", blocks: 2 }),
    "?aaa",
    "...x",
  ],
  ["missing as a letter there is", policy("ab", [s(pattern("ab"))], { alphabets: AS_B }), "a?ab", ".x.x"],
  [
    "missing as one more letter",
    policy("ab", [s(run(2, "lost"))], { alphabets: LOST, missing: "break" }),
    "a??b?a?",
    "..x....",
  ],
];

describe("signals and memory, by hand", () => {
  test.each(TABLE)("%s", (_, of, stream, marked) => {
    expect(marksOf(of, "s", rows(stream))).toBe(marked);
  });

  test("several alphabets: both at once, and a trial missing as a whole", () => {
    const two: Policy = {
      ...policy("", [s(run(2, meet("hot", "wet")))]),
      alphabets: [
        { name: "heat", kind: "zones", letters: ["cold", "hot"], missingAs: null },
        { name: "rain", kind: "letters", letters: ["dry", "wet"], missingAs: null },
      ],
      missing: "break",
    };
    const stream: Row[] = [
      ["hot", "wet"],
      ["hot", null],
      ["hot", "wet"],
      ["cold", "wet"],
      ["hot", "wet"],
      ["hot", "wet"],
    ];
    expect(marksOf(two, "s", stream)).toBe(".....x");
  });

  test("trials are numbered without those refused, with those broken", () => {
    const numbers = (missing: Policy["missing"]) =>
      answers(policy("ab", [s(set("a"))], { missing }), rows("a?ab")).map(({ trial }) => trial);
    expect(numbers("refuse")).toEqual([1, null, 2, 3]);
    expect(numbers("break")).toEqual([1, 2, 3, 4]);
  });
});

describe("why, by hand", () => {
  const rules = [
    { name: "heavy", condition: weak(3, "a", 1, "b") },
    { name: "pair", condition: run(2, "a") },
    { name: "calm", condition: unless(set("a"), set("c"), 2) },
  ];
  const last = (condition: Parameters<typeof signal>[0], stream: string) =>
    answers(policy("abc", [s(condition, { response: "continue" })], { rules }), rows(stream)).at(-1)!.because;

  test.each([
    [rule("heavy"), "abaa", [{ rule: "heavy", trials: [1, 4] }]],
    // The shortest string, not the earliest.
    [rule("heavy"), "abaaa", [{ rule: "heavy", trials: [3, 5] }]],
    [
      or(rule("heavy"), rule("pair")),
      "abaa",
      [
        { rule: "heavy", trials: [1, 4] },
        { rule: "pair", trials: [3, 4] },
      ],
    ],
    [or(rule("heavy"), rule("pair")), "aa", [{ rule: "pair", trials: [1, 2] }]],
    [and(rule("pair"), not(rule("heavy"))), "caa", [{ rule: "pair", trials: [2, 3] }]],
    // not (not pair or heavy) is pair and not heavy.
    [not(or(not(rule("pair")), rule("heavy"))), "caa", [{ rule: "pair", trials: [2, 3] }]],
    [
      and(set("a"), not(and(not(rule("pair")), rule("heavy")))),
      "caa",
      [
        { rule: "a", trials: [3, 3] },
        { rule: "pair", trials: [2, 3] },
      ],
    ],
    [rule("calm"), "abb", [{ rule: "calm", trials: [1, 3] }]],
    [andThen(set("a"), set("b")), "aabb", [{ rule: "a then b", trials: [2, 4] }]],
  ])("%#", (condition, stream, because) => {
    expect(last(condition, stream)).toEqual(because);
  });

  test("only since memory was clear", () => {
    const of = policy("ab", [s(pattern("ba"))], { missing: "break" });
    expect(answers(of, rows("b?ba")).at(-1)!.because).toEqual([{ rule: "[b a]", trials: [3, 4] }]);
  });
});
