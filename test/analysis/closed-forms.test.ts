// Published values and closed forms. "From memory" says that the value was recalled and confirmed by an independent
// exact computation, not read in a copy of the source.

import Fraction from "fraction.js";
import { describe, expect, test } from "vitest";
import {
  chooseAnchors,
  fillChain,
  findSkeleton,
  markTransitions,
  shapeChain,
} from "../../compiler/analysis/chain.ts";
import { meanSteps } from "../../compiler/analysis/mean.ts";
import { prepareRunLengths } from "../../compiler/analysis/run-lengths.ts";
import { planShape, prepareSystem } from "../../compiler/analysis/solver.ts";
import type { Automaton } from "../../compiler/machine/automaton.ts";
import { exactLaw, type Ratio, relativeError } from "../oracle/exact-chain.ts";
import { eitherRun, plain, probabilitiesOf, rawScan, run, scan, words } from "./machines.ts";

const anyOutput = () => true;
const HALVES = [1n, 1n];

/** Runs end at any output; each output is a kind of its own. */
function lengthsOf(automaton: Automaton, weights: readonly bigint[]) {
  return prepareRunLengths(automaton, (output) => output).under(probabilitiesOf(weights));
}

/** Within the bound of an exact value. */
function expectMean(automaton: Automaton, weights: readonly bigint[], exact: Ratio) {
  const lengths = lengthsOf(automaton, weights);
  const bound = lengths.relativeErrorBound()!;
  expect(bound).toBeLessThanOrEqual(1e-12);
  expect(relativeError(lengths.mean(), exact)).toBeLessThanOrEqual(bound);
  return lengths;
}

const whole = (n: bigint): Ratio => ({ n, d: 1n });

describe("runs (Feller, An Introduction to Probability Theory vol. 1, XIII.7; from memory)", () => {
  // p = a / c, q = b / c. Mean (1 - p^k) / (q p^k); variance [1 - (2k+1) q p^k - p^(2k+1)] / (q^2 p^2k).
  const cases = [1, 2, 3, 6, 10, 20].flatMap((k) =>
    [
      [1n, 1n],
      [1n, 9n],
      [9n, 1n],
      [1n, 999n],
      [999n, 1n],
    ].map((weights) => ({ k, weights: weights as [bigint, bigint] })),
  );
  test.each(cases)("$k in a row at $weights", ({ k, weights: [a, b] }) => {
    const c = a + b;
    const n = BigInt(k);
    const lengths = expectMean(run(k), [a, b], { n: c * (c ** n - a ** n), d: b * a ** n });
    const variance = c ** (2n * n + 1n) - (2n * n + 1n) * b * a ** n * c ** n - a ** (2n * n + 1n);
    const sd = lengths.standardDeviation();
    expect(relativeError(sd * sd, { n: variance * c, d: b * b * a ** (2n * n) })).toBeLessThan(1e-11);
  });

  test.each([
    [1, 2n, 2n],
    [2, 6n, 22n],
    [3, 14n, 142n],
    [4, 30n, 734n],
    [5, 62n, 3390n],
    [6, 126n, null],
  ])("fair coin, %i in a row: mean %i, variance %i", (k, mean, variance) => {
    const lengths = expectMean(run(k), HALVES, whole(mean));
    if (variance !== null)
      expect(relativeError(lengths.standardDeviation() ** 2, whole(variance))).toBeLessThan(1e-12);
  });

  test.each([
    [2, 1.23606797, 1.44721359],
    [3, 1.08737802, 1.23683983],
    [4, 1.03758012, 1.13268577],
  ])("no run of %i heads in n tosses is near beta / alpha^(n+1) (seen)", (k, alpha, beta) => {
    const lengths = lengthsOf(run(k), HALVES);
    for (const n of [20, 30, 50])
      expect((1 - lengths.signalled(n).value) / (beta / alpha ** (n + 1))).toBeCloseTo(1, 6);
  });

  test("no two heads in ten tosses: 9/64 (seen)", () => {
    expect(1 - lengthsOf(run(2), HALVES).signalled(10).value).toBeCloseTo(9 / 64, 14);
  });
});

describe("words of a fair coin (Feller XIII.8; Li 1980; Graham, Knuth & Patashnik 8.4; from memory)", () => {
  test.each([
    ["HH", 6n],
    ["HT", 4n],
    ["HHH", 14n],
    ["HHT", 8n],
    ["HTH", 10n],
    ["HHTT", 16n],
    ["HTHT", 20n],
    ["HHTTHH", 70n],
    ["HHHHHH", 126n],
  ])("%s: %i", (word, mean) => {
    expectMean(words(2, [coins(word)]), HALVES, whole(mean));
  });

  function coins(word: string): number[] {
    return [...word].map((letter) => (letter === "H" ? 0 : 1));
  }

  test.each([
    // OEIS A238644; Penney (1969), J. Recreational Math. 2:241; Guibas & Odlyzko (1981), J. Comb. Theory A 30:183
    // (seen).
    ["THTH", "HTHH", 9n, 14n],
    ["HTT", "TTT", 7n, 8n],
    ["THH", "HHT", 3n, 4n],
  ])("%s before %s with chance %i/%i", (first, second, n, d) => {
    const lengths = lengthsOf(words(2, [coins(first), coins(second)]), HALVES);
    expect(
      relativeError(
        lengths.endsIn((output) => output === 1),
        { n, d },
      ),
    ).toBeLessThan(1e-14);
    expect(
      relativeError(
        lengths.endsIn((output) => output === 2),
        { n: d - n, d },
      ),
    ).toBeLessThan(1e-14);
    expect(lengths.endsIn(anyOutput)).toBeCloseTo(1, 14);
  });

  test("ABRACADABRA over 26 letters: 3670344487444778 (Li 1980, Ann. Probab. 8:1171; seen)", () => {
    const word = [..."ABRACADABRA"].map((letter) => letter.charCodeAt(0) - 65);
    const weights = new Array<bigint>(26).fill(1n);
    const lengths = expectMean(words(26, [word]), weights, whole(3670344487444778n));
    const exact = weights.map(() => new Fraction(1n, 26n));
    const exactly = prepareRunLengths(words(26, [word]), anyOutput).under({
      ...probabilitiesOf(weights),
      exact,
    });
    expect(exactly.exactMean()?.toFraction()).toBe("3670344487444778");
    expect(lengths.mean()).toBeCloseTo(3670344487444778, -2);
  });
});

describe("sooner of r successes or s failures (Feller XIII.8; from memory)", () => {
  test.each([
    [2, 3, 2n, 1n],
    [5, 4, 1n, 1n],
    [12, 2, 9n, 1n],
    [1500, 9, 999n, 1n],
  ])("%i successes or %i failures at %i : %i", (r, s, a, b) => {
    const c = a + b;
    const [pr, qs] = [a ** BigInt(r), b ** BigInt(s)];
    const [cr, cs] = [c ** BigInt(r), c ** BigInt(s)];
    // (1 - p^r)(1 - q^s) / (p^r q + p q^s - p^r q^s), all over c^(r+s+1).
    const n = (cr - pr) * (cs - qs) * c;
    const d = pr * cs * b + a * qs * cr - pr * qs * c;
    const lengths = expectMean(eitherRun(r, s), [a, b], { n, d });
    // Success run first: p^(r-1) (1 - q^s) / (p^(r-1) + q^(s-1) - p^(r-1) q^(s-1)).
    const [p1, q1] = [a ** BigInt(r - 1), b ** BigInt(s - 1)];
    const [c1, c2] = [c ** BigInt(r - 1), c ** BigInt(s - 1)];
    const first = { n: p1 * (cs - qs) * c2, d: cs * (p1 * c2 + q1 * c1 - p1 * q1) };
    expect(
      relativeError(
        lengths.endsIn((output) => output === 1),
        first,
      ),
    ).toBeLessThan(1e-12);
  });

  test("p = 2/3, two successes or three failures: 65/19, success first 52/57", () => {
    const lengths = expectMean(eitherRun(2, 3), [2n, 1n], { n: 65n, d: 19n });
    expect(
      relativeError(
        lengths.endsIn((output) => output === 1),
        { n: 52n, d: 57n },
      ),
    ).toBeLessThan(1e-14);
  });
});

describe("two of m (Greenberg 1970, Technometrics 12:627; from memory)", () => {
  test.each([
    [3, 1n, 1n, 14n, 3n],
    [4, 1n, 1n, 30n, 7n],
    [3, 1n, 9n, 1190n, 19n],
  ])("2 of %i at %i : %i: %i/%i", (m, a, b, n, d) => {
    expectMean(scan(2, m), [a, b], { n, d });
    expectMean(rawScan(2, m), [a, b], { n, d });
  });

  test.each([5, 20, 200])("2 of %i, rare: (1/p)(1 + 1/(1 - q^(m-1)))", (m) => {
    const [a, b, c] = [1n, 9_999_999n, 10_000_000n];
    const power = BigInt(m - 1);
    const loss = c ** power - b ** power;
    expectMean(scan(2, m), [a, b], { n: c * (loss + c ** power), d: a * loss });
  });
});

describe("words without a run or scan (OEIS; seen)", () => {
  const counted = (automaton: Automaton, most: number) =>
    exactLaw(plain(automaton, -1), HALVES, most).map(({ n, d }) => d - n);
  const ours = (automaton: Automaton, n: number) =>
    2 ** n * (1 - lengthsOf(automaton, HALVES).signalled(n).value);

  test("run of five: A050233", () => {
    const missing = [0, 0, 0, 0, 1, 3, 8, 20, 48, 112, 255, 571, 1262, 2760, 5984, 12880];
    for (const [i, lost] of missing.entries())
      expect(2 ** (i + 1) * lengthsOf(run(5), HALVES).signalled(i + 1).value).toBeCloseTo(lost, 8);
  });

  test.each([
    ["3 of 4: A118647", 4, [2, 4, 7, 11, 19, 33, 57, 97, 166, 285, 489, 838, 1436, 2462, 4221, 7236]],
    ["3 of 5: A120118", 5, [2, 4, 7, 11, 16, 26, 43, 71, 116, 186, 300, 487, 792, 1287]],
  ])("%s", (_name, m, list) => {
    const exact = counted(rawScan(3, m), list.length);
    for (const [i, count] of list.entries()) {
      expect(exact[i + 1]).toBe(BigInt(count));
      expect(ours(scan(3, m), i + 1)).toBeCloseTo(count, 8);
    }
  });
});

describe("limits in closed form", () => {
  test.each([1.7814, 3, 6, 8])(
    "two of two beyond %f on one side: (1 + p) / (2 p^2) (Klein 2000, JQT 32:427; from memory)",
    (z) => {
      // Any p will do: the form is what is tried. p as a fraction of 10^20.
      const p = BigInt(Math.round(1e20 * Math.exp((-z * z) / 2) * 0.3)) + 1n;
      const c = 10n ** 20n;
      const twoSided = words(3, [
        [0, 0],
        [1, 1],
      ]);
      expectMean(twoSided, [p, p, c - 2n * p], { n: (c + p) * c, d: 2n * p * p });
    },
  );

  test("two in succession outside, either side: (1 + P) / P^2 (Derman & Ross 1997; from memory)", () => {
    const [p, c] = [27n, 1000n];
    expectMean(run(2), [p, c - p], { n: (c + p) * c, d: p * p });
  });

  test("absorbing walk 0…4: 3, 4, 3 steps (Grinstead & Snell, ex. 11.13–11.15; seen)", () => {
    const walk: Automaton = {
      states: 3,
      columns: 2,
      next: Int32Array.of(1, 1, 0, 2, 1, 1),
      output: Int32Array.of(1, 0, 0, 0, 0, 1),
    };
    const marks = markTransitions(walk);
    const skeleton = findSkeleton(walk, marks, true, Int32Array.of(0), Int32Array.of(0, 1));
    const shape = shapeChain(skeleton, chooseAnchors(skeleton, Float64Array.of(1, 1)));
    const { steps } = meanSteps(
      prepareSystem(planShape(shape), fillChain(shape, probabilitiesOf(HALVES))),
      null,
    );
    expect([0, 1, 2].map((state) => steps[shape.placeOf[state]!])).toEqual([3, 4, 3]);
  });
});
