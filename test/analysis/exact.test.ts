// The exact mean against whole-number elimination of the test's own and against mathjs; mathjs as a witness of the
// doubles.

import Fraction from "fraction.js";
import { create, fractionDependencies, lusolveDependencies } from "mathjs";
import { describe, expect, test } from "vitest";
import { exactColumns, exactLetters } from "../../compiler/analysis/exact-columns.ts";
import { prepareRunLengths } from "../../compiler/analysis/run-lengths.ts";
import type { LetterModel } from "../../compiler/policy.ts";
import { exactMoments } from "../oracle/exact-chain.ts";
import {
  plain,
  probabilitiesOf,
  randomMachine,
  randomNumbers,
  run,
  scan,
  separatePairs,
  weakRun,
  words,
} from "./machines.ts";

const math = create({ ...fractionDependencies, ...lusolveDependencies });
const anyOutput = () => true;

function exactLengths(automaton: Parameters<typeof plain>[0], weights: readonly bigint[]) {
  const whole = weights.reduce((a, b) => a + b, 0n);
  const exact = weights.map((weight) => new Fraction(weight, whole));
  return prepareRunLengths(automaton, anyOutput).under({ ...probabilitiesOf(weights), exact });
}

describe("exact means", () => {
  test("150 random machines: equal to Bareiss elimination", () => {
    const random = randomNumbers(51);
    for (let i = 0; i < 150; i++) {
      const { automaton, weights } = randomMachine(random, 10, random());
      const { n, d } = exactMoments(plain(automaton, -1), weights).means[0]!;
      const found = exactLengths(automaton, weights).exactMean();
      expect(found?.equals(new Fraction(n, d)), `machine ${i}`).toBe(true);
    }
  });

  test.each([
    ["8 in a row at 1/10", run(8), [1n, 9n], "111111110"],
    ["2 of 3 at 1/10", scan(2, 3), [1n, 9n], "1190/19"],
    ["20 separate pairs", separatePairs(20), [1n, 9n], "2200"],
  ] as const)("%s", (_name, automaton, weights, text) => {
    expect(exactLengths(automaton, weights).exactMean()?.toFraction()).toBe(text);
  });

  test("6 of 12 in hundredths (792 states) agrees with the double to its bound", () => {
    const lengths = exactLengths(scan(6, 12), [7n, 93n]);
    const exact = lengths.exactMean()!;
    const digits = new Fraction(exact.n * 10n ** 25n, exact.d).floor();
    expect(Math.abs(lengths.mean() / (Number(digits.n) / 1e25) - 1)).toBeLessThan(
      lengths.relativeErrorBound()! + 3e-16,
    );
  });

  test("a prime that divides a pivot is passed over", () => {
    // 33554393 is the first prime tried, and here the common denominator: what leaves a place without a loop.
    const automaton = words(3, [[0], [1, 1]]);
    const weights = [1_000_003n, 2_000_003n, 33_554_393n - 3_000_006n];
    const { n, d } = exactMoments(plain(automaton, -1), weights).means[0]!;
    expect(exactLengths(automaton, weights).exactMean()?.equals(new Fraction(n, d))).toBe(true);
  });

  test("unasked: no exact probabilities, an infinite mean, too much work", () => {
    expect(
      prepareRunLengths(run(3), anyOutput)
        .under(probabilitiesOf([1n, 1n]))
        .exactMean(),
    ).toBeNull();
    const trap = {
      states: 2,
      columns: 2,
      next: Int32Array.of(0, 1, 1, 1),
      output: Int32Array.of(1, 0, 0, 0),
    };
    expect(exactLengths(trap, [1n, 1n]).exactMean()).toBeNull();
    expect(exactLengths(scan(4, 40), [1n, 99n]).exactMean()).toBeNull();
  });
});

describe("exact column probabilities", () => {
  const model = (...texts: string[]): LetterModel => ({
    kind: "mass",
    probabilities: texts.map((text) => ({ value: new Fraction(text), radius: 0 })),
  });

  test("products over the alphabets, the first varying slowest, added up by column", () => {
    const laws = [exactLetters(model("1/3", "2/3")), exactLetters(model("0.1", "0.2", "0.7"))];
    const columns = exactColumns(laws, Int32Array.of(0, 1, 1, 2, 0, 1), 3)!;
    // Column 0: 1/3 of 0.1 and 2/3 of 0.2; column 2: 2/3 of 0.1.
    expect(columns.map((column) => column.toFraction())).toEqual(["1/6", "23/30", "1/15"]);
  });

  test("none where a law is not exact", () => {
    const inexact: LetterModel = {
      kind: "mass",
      probabilities: [{ value: new Fraction("0.3"), radius: 1e-20 }],
    };
    expect(exactLetters(inexact)).toBeNull();
    expect(exactColumns([exactLetters(model("1")), null], Int32Array.of(0), 1)).toBeNull();
    expect(exactColumns([exactLetters(model("1"))], new Int32Array(5000), 1)).toBeNull();
  });
});

describe("mathjs as a witness", () => {
  /** Mean from state 0 by mathjs's dense solver on exact fractions. */
  function witness(automaton: Parameters<typeof plain>[0], weights: readonly bigint[]): Fraction {
    const { states, columns, next, output } = automaton;
    const whole = weights.reduce((a, b) => a + b, 0n);
    const rows = Array.from({ length: states }, (_, i) =>
      Array.from({ length: states }, (_, j) => {
        let n = i === j ? whole : 0n;
        for (let column = 0; column < columns; column++)
          if (output[i * columns + column] === 0 && next[i * columns + column] === j) n -= weights[column]!;
        return math.fraction(n, whole);
      }),
    );
    const ones = rows.map(() => [math.fraction(1n, 1n)]);
    const solution = math.lusolve(rows as never, ones as never) as unknown as {
      n: bigint;
      d: bigint;
      s: bigint;
    }[][];
    const { s, n, d } = solution[0]![0]!;
    return new Fraction(s * n, d);
  }

  test.each([
    ["4 in a row", run(4), [1n, 3n]],
    ["3 of 5", scan(3, 5), [1n, 4n]],
    ["weak run of 3, gap 2", weakRun(3, 2), [1n, 2n, 4n]],
    ["4 separate pairs", separatePairs(4), [1n, 9n]],
  ] as const)("%s", (_name, automaton, weights) => {
    const lengths = exactLengths(automaton, weights);
    const theirs = witness(automaton, weights);
    expect(lengths.exactMean()?.equals(theirs)).toBe(true);
    expect(lengths.mean() / theirs.valueOf()).toBeCloseTo(1, 13);
  });

  test("25 random machines", () => {
    const random = randomNumbers(52);
    for (let i = 0; i < 25; i++) {
      const { automaton, weights } = randomMachine(random, 6, 0.5 * random());
      expect(exactLengths(automaton, weights).exactMean()?.equals(witness(automaton, weights))).toBe(true);
    }
  });
});
