// The twin against values others have printed: word counts, waits, races and numbers of states.
import { describe, expect, test } from "vitest";
import { pattern, policy, rows, run, scan, set, signal } from "./build.ts";
import { chanceFirst, meanTrials } from "./chain.ts";
import type { Condition, Policy } from "./policy.ts";
import { residuals } from "./residuals.ts";
import { simulate } from "./simulate.ts";
import { forEveryString } from "./twin.ts";

const watch = (letters: string, condition: Condition): Policy =>
  policy(letters, [signal(condition, { response: "continue" })]);

/** How many words of a and b of each length 1…longest do without the condition. */
function wordsWithout(condition: Condition, longest: number): readonly number[] {
  const without = new Array<number>(longest).fill(0);
  forEveryString(watch("ab", condition), rows("ab"), longest, (_, given) => {
    const first = given.findIndex(({ raised }) => raised.length > 0);
    // A word of length n stands for 2^(longest − n) of full length.
    for (let n = 1; n <= longest; n++) if (first === -1 || first >= n) without[n - 1]! += 2 ** (n - longest);
  });
  return without;
}

describe("words of two letters", () => {
  test("with no run of five: 2^n less OEIS A050233", () => {
    const lacking = [0, 0, 0, 0, 1, 3, 8, 20, 48, 112, 255, 571, 1262];
    expect(wordsWithout(run(5, "a"), 13)).toEqual(lacking.map((words, index) => 2 ** (index + 1) - words));
  });

  test("with no 3-of-4 scan: OEIS A118647", () => {
    expect(wordsWithout(scan(3, 4, "a"), 13)).toEqual([
      2, 4, 7, 11, 19, 33, 57, 97, 166, 285, 489, 838, 1436,
    ]);
  });

  test("with no 3-of-5 scan: OEIS A120118", () => {
    expect(wordsWithout(scan(3, 5, "a"), 13)).toEqual([2, 4, 7, 11, 16, 26, 43, 71, 116, 186, 300, 487, 792]);
  });

  test("no run of two heads in ten tosses: 9/64 (Feller, An Introduction to Probability Theory, XIII.7)", () => {
    expect(wordsWithout(run(2, "a"), 10)[9]! / 1024).toBe(9 / 64);
  });
});

describe("waits of a fair coin (Feller XIII.8; Graham, Knuth & Patashnik 8.4; from memory)", () => {
  test.each([
    ["aa", 6],
    ["ab", 4],
    ["aaa", 14],
    ["aab", 8],
    ["aba", 10],
    ["aabb", 16],
    ["abab", 20],
    ["aabbaa", 70],
    ["aaaaaa", 126],
  ])("%s: %d trials", (word, wait) => {
    const machine = residuals(policy("ab", [signal(pattern(word))]), word.length);
    expect(machine.states).toBe(word.length);
    expect(meanTrials(machine, [0.5, 0.5])).toBeCloseTo(wait, 9);
  });

  test("the first run of k: 2, 6, 14, 30, 62 (Feller XIII.7)", () => {
    const waits = [1, 2, 3, 4, 5].map((k) =>
      meanTrials(residuals(policy("ab", [signal(run(k, "a"))]), k), [0.5, 0.5]),
    );
    for (const [index, wait] of [2, 6, 14, 30, 62].entries()) expect(waits[index]).toBeCloseTo(wait, 9);
  });

  test("2 of m: 14/3 and 30/7 (Greenberg 1970, Technometrics 12:627)", () => {
    const wait = (m: number, chance: number) =>
      meanTrials(residuals(policy("ab", [signal(scan(2, m, "a"))]), m), [chance, 1 - chance]);
    expect(wait(3, 0.5)).toBeCloseTo(14 / 3, 9);
    expect(wait(4, 0.5)).toBeCloseTo(30 / 7, 9);
    expect(wait(3, 0.1)).toBeCloseTo(1190 / 19, 9);
  });
});

describe("races", () => {
  const race = (one: Condition, other: Condition): Policy =>
    policy("ab", [signal(one, { name: "one" }), signal(other, { name: "other", response: "restart" })]);

  test.each([
    ["baba", "abaa", 9 / 14],
    ["abb", "bbb", 7 / 8],
    ["baa", "aab", 3 / 4],
  ])("%s before %s (OEIS A238644; Penney 1969)", (one, other, chance) => {
    const machine = residuals(race(pattern(one), pattern(other)), 5);
    expect(chanceFirst(machine, [0.5, 0.5], "one")).toBeCloseTo(chance, 9);
  });

  test("two successes before three failures, p = 2/3: 65/19 trials, 52/57 (Feller XIII.8)", () => {
    const machine = residuals(race(run(2, "a"), run(3, "b")), 4);
    expect(meanTrials(machine, [2 / 3, 1 / 3])).toBeCloseTo(65 / 19, 9);
    expect(chanceFirst(machine, [2 / 3, 1 / 3], "one")).toBeCloseTo(52 / 57, 9);
  });
});

describe("numbers of states", () => {
  test.each([
    [3, 4, 6],
    [3, 5, 10],
    [2, 4, 4],
  ])("a one-sided %d-of-%d scan: %d", (k, m, states) => {
    expect(residuals(policy("ab", [signal(scan(k, m, "a"))]), m).states).toBe(states);
  });

  test.each([2, 3, 4])("an a and then any %d letters: 2^n (Aho, Sethi & Ullman, ex. 3.25)", (n) => {
    // There an acceptor that remembers n letters; here a machine that raises on the letter after them.
    const any = { kind: "letters" as const, set: { kind: "any" as const } };
    const a = { kind: "letters" as const, set: { kind: "letter" as const, name: "a" } };
    const items = [a, ...new Array(n).fill(any)];
    const condition: Condition = { kind: "pattern", pattern: { kind: "sequence", items } };
    expect(residuals(watch("ab", condition), n + 1).states).toBe(2 ** n);
  });

  test("C1 and C2 of the zone tests: 7 (Champ & Woodall 1987)", () => {
    // Beyond 3 (x), between 2 and 3 on either side (b, d), the others (o).
    const zones = policy("xbod", [
      signal({
        kind: "or",
        left: set("x"),
        right: { kind: "or", left: scan(2, 3, "b"), right: scan(2, 3, "d") },
      }),
    ]);
    expect(residuals(zones, 3).states).toBe(7);
  });
});

describe("simulated run lengths", () => {
  test("agree with the exact mean within four standard errors", () => {
    const of = policy("ab", [signal(run(3, "a"))]);
    const { meanTrials: mean, standardError } = simulate(of, [0.5, 0.5], "s", { runs: 4000, seed: 7 });
    expect(Math.abs(mean - 14)).toBeLessThan(4 * standardError);
    expect(standardError).toBeLessThan(0.3);
  });

  test("the same seed gives the same runs", () => {
    const of = policy("ab", [signal(scan(2, 3, "a"))]);
    const options = { runs: 200, seed: 11 };
    expect(simulate(of, [0.2, 0.8], "any", options)).toEqual(simulate(of, [0.2, 0.8], "any", options));
  });

  test("a signal that does not come is said", () => {
    const of = policy("ab", [signal(run(3, "a"))]);
    expect(() => simulate(of, [0, 1], "s", { runs: 1, seed: 1, longest: 50 })).toThrow("no signal");
  });
});
