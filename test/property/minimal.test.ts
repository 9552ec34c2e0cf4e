// The machine is the smallest there is: table filling merges nothing, and where the futures tried suffice, the twin's own
// count of residuals equals its number of states. It is numbered breadth-first, and what is said otherwise is the same.
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Case, randomCase, seed, shrinkingLimited } from "../oracle/arbitrary.ts";
import {
  and,
  andThen,
  not,
  or,
  pattern,
  policy,
  row,
  run,
  scan,
  set,
  signal,
  times,
  weak,
} from "../oracle/build.ts";
import type { Condition, Policy } from "../oracle/policy.ts";
import { residuals, rowsOf } from "../oracle/residuals.ts";
import { minimalStates } from "../oracle/table-filling.ts";
import { conditionText, policyText } from "../oracle/text.ts";
import { FORMS, watched } from "./forms.ts";
import { type Ours, ours } from "./ours.ts";

function compiled(of: Policy): Ours {
  const made = ours(policyText(of));
  if (made === null) throw new Error(`too many states\n${policyText(of)}`);
  return made;
}

/** The machine over the policy's rows, a broken trial being the last of them. */
function tables(
  { machine, follow }: Ours,
  of: Policy,
): { next: number[]; output: string[]; symbols: number } {
  const symbols = rowsOf(of);
  const next: number[] = [];
  const output: string[] = [];
  for (let state = 0; state < machine.states; state++)
    for (const symbol of symbols) {
      const found = follow(state, symbol);
      next.push(found.state);
      output.push(found.raised.join("+"));
    }
  return { next, output, symbols: symbols.length };
}

/** The states in the order in which a breadth-first search meets them. */
function breadthFirst(next: readonly number[], symbols: number): readonly number[] {
  const met = [0];
  for (const state of met)
    for (let symbol = 0; symbol < symbols; symbol++) {
      const target = next[state * symbols + symbol]!;
      if (!met.includes(target)) met.push(target);
    }
  return met;
}

function checkMinimal(of: Policy, machine: Ours): void {
  const { next, output, symbols } = tables(machine, of);
  const states = machine.machine.states;
  const text = policyText(of);
  expect(minimalStates(next, output, symbols), text).toBe(states);
  expect(breadthFirst(next, symbols), text).toEqual(Array.from({ length: states }, (_, state) => state));
}

describe("minimal and numbered breadth-first", () => {
  test("every form, watched in three ways", () => {
    for (const condition of FORMS)
      for (const response of ["own", "continue", "restart"] as const) {
        const of = watched(condition, response);
        checkMinimal(of, compiled(of));
        const broken = { ...of, missing: "break" as const };
        checkMinimal(broken, compiled(broken));
      }
  });

  test("no trial is broken where every missing value has a letter", () => {
    const alphabets = [{ name: "x", kind: "zones" as const, letters: ["a", "b"], missingAs: "lost" }];
    // Both count every other a; only a broken trial could bring them out of step.
    const quiet = { kind: "until" as const, condition: set("a") };
    const odd = signal(set("a"), { name: "odd", quiet });
    const of = policy("", [odd, signal(andThen(set("a"), set("a")), { name: "even" })], { alphabets });
    checkMinimal({ ...of, missing: "break" }, compiled({ ...of, missing: "break" }));
  });

  test("random policies", () => {
    let checked = 0;
    const check = ({ policy: of }: Case): void => {
      const machine = ours(policyText(of), 20_000);
      if (machine === null || machine.machine.states > 150) return;
      checkMinimal(of, machine);
      checked++;
    };
    fc.assert(fc.property(randomCase(1, 1), shrinkingLimited(check)), { seed: seed(), numRuns: 150 });
    expect(checked).toBeGreaterThan(100);
  });
});

describe("the twin's own count of what the future can tell apart", () => {
  const named = FORMS.map((condition) => [conditionText(condition), condition] as const);

  test.each(named)("%s", (_, condition) => {
    const of = watched(condition, "own");
    const { states } = compiled(of).machine;
    let told = 0;
    for (let depth = 1; depth <= 6 && told < states; depth++) told = residuals(of, depth).states;
    expect(told).toBe(states);
  });

  test("random policies need no fewer", () => {
    const check = ({ policy: of }: Case): void => {
      if (rowsOf(of).length > 5) return;
      const machine = ours(policyText(of), 20_000);
      if (machine === null || machine.machine.states > 60) return;
      expect(residuals(of, 3).states, policyText(of)).toBeLessThanOrEqual(machine.machine.states);
    };
    fc.assert(fc.property(randomCase(1, 1), shrinkingLimited(check)), { seed: seed(), numRuns: 150 });
  });
});

describe("the same said otherwise gives the same machine", () => {
  const any = times(0, null, "any");
  const pairs: readonly (readonly [Condition, Condition])[] = [
    [run(3, "a"), pattern("aaa")],
    [weak(3, "a", 1), pattern(row("a", times(0, 1, "b"), "a", times(0, 1, "b"), "a"))],
    [scan(2, 3, "a"), or(pattern("aa"), pattern(row("a", "any", "a")))],
    [andThen(run(2, "a"), pattern("cb")), pattern(row("a", "a", any, "c", "b"))],
    [and(run(2, "a"), not(pattern("bca"))), run(2, "a")],
    [not(or(not(run(2, "a|b")), pattern("ab"))), and(pattern(row("a|b", "a|b")), not(pattern("ab")))],
  ];

  test.each(pairs.map(([one, other]) => [conditionText(one), conditionText(other), one, other] as const))(
    "%s and %s",
    (_, __, one, other) => {
      for (const response of ["own", "continue", "restart"] as const) {
        const machines = [one, other].map((condition) => compiled(watched(condition, response)).machine);
        expect(machines[0]).toEqual(machines[1]);
      }
    },
  );

  test("a letter named by its group, a rule spelled out", () => {
    const group = { kind: "group" as const, name: "g" };
    const spelled = policy("ab", [signal(run(3, "a"))]);
    const named = {
      ...policy("ab", [signal({ kind: "rule", name: "three" })]),
      groups: [{ name: "g", set: { kind: "letter" as const, name: "a" } }],
      rules: [{ name: "three", condition: run(3, group) }],
    };
    expect(compiled(named).machine).toEqual(compiled(spelled).machine);
  });
});

describe("published sizes", () => {
  const zone = (k: number, m: number, sets: readonly [string, string]): Condition =>
    or(scan(k, m, sets[0]), scan(k, m, sets[1]));
  // From the lowest: beyond -3, to -2, to -1, to 0, and up again.
  const zones = (...conditions: Condition[]): Policy =>
    policy("abcdefgh", [signal(conditions.reduce((left, right) => or(left, right)))]);
  const c1 = { kind: "set" as const, set: { kind: "union" as const, members: [letter("a"), letter("h")] } };

  function letter(name: string): { kind: "letter"; name: string } {
    return { kind: "letter", name };
  }

  test("C1 and C2: 7; C1 to C4: 215 (Champ & Woodall 1987)", () => {
    const c2 = zone(2, 3, ["b", "g"]);
    const c3 = zone(4, 5, ["b|c", "f|g"]);
    const c4 = zone(8, 8, ["b|c|d", "e|f|g"]);
    expect(compiled(zones(c1, c2)).machine.states).toBe(7);
    expect(compiled(zones(c1, c2, c3, c4)).machine.states).toBe(215);
  });

  test("one-sided scans: C(m, k - 1)", () => {
    const size = (k: number, m: number) => compiled(policy("ab", [signal(scan(k, m, "a"))])).machine.states;
    expect([size(3, 4), size(3, 5), size(4, 8)]).toEqual([6, 10, 56]);
  });
});
