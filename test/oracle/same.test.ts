// Different words for the same thing: forms whose definitions make them equal, on random streams. And what the
// arbitrary promises of its policies.
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { randomCase, seed } from "./arbitrary.ts";
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
  run,
  scan,
  separate,
  set,
  signal,
  times,
  unless,
  weak,
} from "./build.ts";
import { assignedTo, isIn, lettersIn, onSilence } from "./meaning.ts";
import { type Condition, everyTrial, type Policy, type SetExpr } from "./policy.ts";
import { conditionText, policyText } from "./text.ts";
import { answers } from "./twin.ts";

const any = times(0, null, "any");

/** Pairs that hold at the same trials of every stream, nothing being cleared. */
const SAME: readonly (readonly [Condition, Condition])[] = [
  [run(3, "a"), pattern("aaa")],
  [run(3, "a"), weak(3, "a", 0, "b")],
  [run(3, "a"), scan(3, 3, "a")],
  [weak(3, "a", 2, "b"), pattern(row("a", times(0, 2, "b"), "a", times(0, 2, "b"), "a"))],
  [scan(2, 3, "a"), pattern(choice(row("a", "a"), row("a", "any", "a")))],
  [set("a|b"), or(set("a"), set("b"))],
  [andThen(set("a"), set("b")), pattern(row("a", any, "b"))],
  [andThen(set("a"), pattern("bc")), pattern(row("a", any, "b", "c"))],
  [andThen(set("a"), set("b"), 3), pattern(row("a", times(0, 2, "any"), "b"))],
  [andThen(andThen(set("a"), set("b")), set("c")), andThen(set("a"), andThen(set("b"), set("c")))],
  [unless(set("a"), set("b"), 2), pattern(row("a", "a|c", "a|c"))],
  [unless(set("a"), run(2, "b"), 2), and(pattern(row("a", "any", "any")), not(pattern("abb")))],
  [separate(1, set("a")), set("a")],
  [overlapping(3, set("a")), separate(3, set("a"))],
  [overlapping(1, pattern("aa")), separate(1, pattern("aa"))],
  [pattern(times(2, 3, "a|b")), pattern(choice(row("a|b", "a|b"), row("a|b", "a|b", "a|b")))],
  [not(not(run(2, "a"))), run(2, "a")],
  [not(or(not(set("a")), pattern("ba"))), and(set("a"), not(pattern("ba")))],
];

const holdsAt = (condition: Condition, stream: string): string =>
  answers(policy("abc", [signal(condition, { response: "continue" })]), rows(stream))
    .map(({ raised }) => (raised.length > 0 ? "x" : "."))
    .join("");

describe("two ways to say it", () => {
  test.each(SAME.map(([one, other]) => [conditionText(one), conditionText(other), one, other] as const))(
    "%s is %s",
    (_, __, one, other) => {
      const stream = fc.string({ unit: fc.constantFrom(..."abc"), maxLength: 24, size: "max" });
      fc.assert(
        fc.property(stream, (letters) => {
          expect(holdsAt(one, letters)).toBe(holdsAt(other, letters));
        }),
        { seed: seed(), numRuns: 60 },
      );
    },
  );
});

/** Every SET written in a policy, with its parts, and every condition with its parts. */
function parts(policy: Policy): { sets: SetExpr[]; conditions: Condition[] } {
  const sets: SetExpr[] = [];
  const conditions: Condition[] = [];
  const SET_KINDS = new Set(["letter", "group", "any", "union", "meet"]);
  const walk = (value: unknown): void => {
    if (typeof value !== "object" || value === null) return;
    const kind = (value as { kind?: unknown }).kind;
    if (SET_KINDS.has(kind as string) || kind === "except") sets.push(value as SetExpr);
    else if (typeof kind === "string") conditions.push(value as Condition);
    for (const part of Object.values(value)) walk(part);
  };
  walk(policy);
  return { sets, conditions };
}

describe("the random policies", () => {
  const cases = fc.sample(randomCase(4, 20), { seed: 1, numRuns: 300 });

  test("no SET is empty, no letter assigned twice or to itself", () => {
    for (const { policy: of } of cases) {
      const trials = everyTrial(of);
      for (const each of parts(of).sets) expect(trials.some((letters) => isIn(of, each, letters))).toBe(true);
      const assigned = of.assigns.flatMap(({ from }) => lettersIn(of, from));
      expect(new Set(assigned).size).toBe(assigned.length);
      for (const { from, to } of of.assigns)
        expect(trials.some((letters) => isIn(of, from, letters) && isIn(of, to, letters))).toBe(false);
    }
  });

  test("successes and failures are apart", () => {
    for (const { policy: of } of cases)
      for (const form of parts(of).conditions) {
        if (form.kind !== "weakRun") continue;
        const failures = form.failures ?? assignedTo(of, form.set);
        const both = everyTrial(of).some((each) => isIn(of, form.set, each) && isIn(of, failures, each));
        expect(both).toBe(false);
      }
  });

  test("nothing that must be no on silence is yes", () => {
    for (const { policy: of } of cases) {
      for (const { condition } of [...of.signals, ...of.rules]) expect(onSilence(of, condition)).toBe(false);
      for (const form of parts(of).conditions) {
        if (form.kind === "separate" || form.kind === "overlapping")
          expect(onSilence(of, form.operand)).toBe(false);
        if (form.kind === "then" || form.kind === "unless")
          expect(onSilence(of, form.left) || onSilence(of, form.right)).toBe(false);
      }
    }
  });

  test("every form, response and declaration occurs", () => {
    const texts = cases.map((each) => policyText(each.policy)).join("");
    const words =
      "zones letters group assign rule let restart continue separate overlapping then unless within and or not " +
      "gap except & | .. any skip break blocks before after for until lost1";
    for (const word of words.split(" ")) expect(texts).toContain(word);
    for (const form of ["gap \\d of", "\\d of \\d", "0\\.\\.\\d", "missing \\w: as"])
      expect(texts).toMatch(new RegExp(form));
  });

  test("they do raise signals", () => {
    const raising = cases.filter(({ policy: of, strings }) =>
      strings.some((stream) => answers(of, stream).some(({ raised }) => raised.length > 0)),
    );
    expect(raising.length).toBeGreaterThan(180);
  });
});
