// P(T <= n) and quantiles against exact path counts.

import Fraction from "fraction.js";
import { describe, expect, test } from "vitest";
import {
  fillChain,
  findSkeleton,
  markTransitions,
  shapeChain,
  usableColumns,
} from "../../compiler/analysis/chain.ts";
import { beginLaw, exitedWithin } from "../../compiler/analysis/law.ts";
import { prepareRunLengths, type RunLengths } from "../../compiler/analysis/run-lengths.ts";
import type { Automaton } from "../../compiler/machine/automaton.ts";
import { exactLaw, type Ratio, ratioOfDouble, toNumber } from "../oracle/exact-chain.ts";
import {
  blockRun,
  eitherRun,
  explore,
  plain,
  probabilitiesOf,
  randomMachine,
  randomNumbers,
  run,
  scan,
  separatePairs,
  withLockout,
} from "./machines.ts";

const anyOutput = () => true;
const half = new Fraction(1n, 2n);

function lengthsOf(automaton: Automaton, weights: readonly bigint[], exact = false): RunLengths {
  const whole = weights.reduce((a, b) => a + b, 0n);
  const fractions = exact ? { exact: weights.map((weight) => new Fraction(weight, whole)) } : {};
  return prepareRunLengths(automaton, anyOutput).under({ ...probabilitiesOf(weights), ...fractions });
}

/** -1, 0, 1 as the double lies below, at or above the fraction. */
function compare(x: number, { n, d }: Ratio): number {
  const { n: a, d: b } = ratioOfDouble(x);
  const difference = a * d - n * b;
  return difference < 0n ? -1 : difference > 0n ? 1 : 0;
}

function expectLaw(lengths: RunLengths, law: readonly Ratio[], points: Iterable<number>, width: number) {
  for (const n of points) {
    const exact = law[n]!;
    const { value, low, high } = lengths.signalled(n);
    expect(compare(low, exact), `n ${n}: low ${low}`).toBeLessThanOrEqual(0);
    expect(compare(high, exact), `n ${n}: high ${high}`).toBeGreaterThanOrEqual(0);
    expect(low <= value && value <= high).toBe(true);
    expect(high - low).toBeLessThanOrEqual(width * high);
  }
}

/** The smallest n with law[n] >= q. */
function exactQuantile(law: readonly Ratio[], q: Fraction): number {
  return law.findIndex(({ n, d }) => n * q.d >= q.n * d);
}

describe("against exact path counts", () => {
  test("300 random machines, n = 0 to 60: small probabilities keep their digits", () => {
    const random = randomNumbers(21);
    for (let i = 0; i < 300; i++) {
      const { automaton, weights } = randomMachine(random, 9, random());
      const law = exactLaw(plain(automaton, -1), weights, 60);
      expectLaw(lengthsOf(automaton, weights), law, law.keys(), 1e-12);
    }
  });

  test.each([
    ["5 in a row", run(5), [3n, 5n], 1500],
    ["4 of 7", scan(4, 7), [1n, 3n], 800],
    ["6 or 3 in a row", eitherRun(6, 3), [7n, 9n], 1500],
    ["3 in a row in blocks of 12", blockRun(3, 12), [1n, 3n], 900],
    ["5 separate pairs", separatePairs(5), [1n, 3n], 900],
  ] as const)("%s, far beyond where the bracket closes", (_name, automaton, weights, most) => {
    const law = exactLaw(plain(automaton, -1), weights, most);
    const lengths = lengthsOf(automaton, weights);
    expectLaw(lengths, law, law.keys(), 1e-11);
    for (const q of ["0.001", "0.05", "0.25", "0.5", "0.75", "0.9"]) {
      const exact = exactQuantile(law, new Fraction(q));
      if (exact >= 0) expect(lengths.quantile(new Fraction(q))).toEqual({ low: exact, high: exact });
    }
  });

  test("the other signal rests for 40 trials: the law goes through it", () => {
    const automaton = withLockout(3, 40);
    const weights = [2n, 1n, 1n];
    const law = exactLaw(plain(automaton, 1), weights, 300);
    const lengths = prepareRunLengths(automaton, (output) => (output & 1) !== 0).under(
      probabilitiesOf(weights),
    );
    expectLaw(lengths, law, law.keys(), 1e-11);
  });
});

describe("a bracket taken before it closes", () => {
  test("200 random machines, after 0 to 20 steps: the interval is wide, and holds the law", () => {
    const random = randomNumbers(22);
    let open = 0;
    for (let i = 0; i < 200; i++) {
      const { automaton, weights } = randomMachine(random, 7, 0.7 * random());
      const law = exactLaw(plain(automaton, -1), weights, 60);
      const skeleton = findSkeleton(
        automaton,
        markTransitions(automaton),
        true,
        Int32Array.of(0),
        usableColumns(probabilitiesOf(weights)),
      );
      const chain = fillChain(shapeChain(skeleton, skeleton.classes.entry), probabilitiesOf(weights));
      const start = { places: Int32Array.of(chain.shape.placeOf[0]!), weights: Float64Array.of(1) };
      const cut = beginLaw(chain, start, new Uint8Array(chain.shape.size), Math.floor(20 * random()));
      for (const n of [20, 21, 22, 23, 24, 25, 30, 45, 60]) {
        const { low, high } = exitedWithin(cut, n);
        expect(compare(low, law[n]!)).toBeLessThanOrEqual(0);
        expect(compare(high, law[n]!)).toBeGreaterThanOrEqual(0);
        if (high - low > 1e-6 * high) open++;
      }
    }
    expect(open).toBeGreaterThan(500);
  });
});

describe("far out", () => {
  const single: Automaton = { states: 1, columns: 2, next: Int32Array.of(0, 0), output: Int32Array.of(1, 0) };

  test.each([
    [370n, 257],
    [10n ** 6n, 693147],
    [10n ** 9n, 693147181],
    // ln 2 / -ln(1 - 1e-14) = 69314718055994.18.
    [10n ** 14n, 69314718055995],
  ])("one in %i: the median is %i", (c, median) => {
    expect(lengthsOf(single, [1n, c - 1n]).quantile(half)).toEqual({ low: median, high: median });
  });

  test("one in 1e15: P(T <= n) up to n = 1e16", () => {
    const lengths = lengthsOf(single, [1n, 10n ** 15n - 1n]);
    for (const n of [1, 10, 1e6, 1e12, 1e15, 1e16]) {
      const exact = -Math.expm1(n * Math.log1p(-1e-15));
      const { low, high, value } = lengths.signalled(n);
      expect(Math.abs(value / exact - 1)).toBeLessThan(1e-13);
      expect(low).toBeLessThanOrEqual(exact * (1 + 1e-15));
      expect(high).toBeGreaterThanOrEqual(exact * (1 - 1e-15));
    }
    // ln 2 / -ln(1 - 1e-15) = 693147180559944.96.
    const { low, high } = lengths.quantile(half);
    expect(low).toBeLessThanOrEqual(693147180559945);
    expect(high).toBeGreaterThanOrEqual(693147180559945);
    expect(high - low).toBeLessThan(20);
  });

  test("fourteen in a row at 1/10: the median of 7.7e13 is one whole number", () => {
    const { low, high } = lengthsOf(run(14), [1n, 9n]).quantile(half);
    expect(high).toBe(low);
    expect(low / (111111111111110 * Math.LN2)).toBeCloseTo(1, 9);
  });

  test("what double precision leaves open is an interval, and it is narrow", () => {
    // 792 places: too many for powers of the matrix.
    const lengths = lengthsOf(scan(6, 12), [1n, 10n ** 4n - 1n]);
    const { low, high } = lengths.quantile(half);
    expect(lengths.mean()).toBeGreaterThan(1e18);
    expect(high).toBeGreaterThan(low);
    expect((high - low) / low).toBeLessThan(1e-11);
  });
});

describe("ties", () => {
  test("P(T <= n) = q exactly is decided by whole numbers", () => {
    // Two heads in a row: P(T <= 4) = 1/2.
    expect(lengthsOf(run(2), [1n, 1n], true).quantile(half)).toEqual({ low: 4, high: 4 });
    // One in ten: P(T <= 3) = 0.271.
    const single = run(1);
    expect(lengthsOf(single, [1n, 9n], true).quantile(new Fraction("0.271"))).toEqual({ low: 3, high: 3 });
    expect(lengthsOf(single, [1n, 9n], true).quantile(new Fraction("0.2710000000000001"))).toEqual({
      low: 4,
      high: 4,
    });
  });

  test("8 of 20 at 1/2: P(T <= 15) = 1/2", () => {
    expect(lengthsOf(scan(8, 20), [1n, 1n], true).quantile(half)).toEqual({ low: 15, high: 15 });
  });

  test("without exact probabilities a tie stays open", () => {
    expect(lengthsOf(run(1), [1n, 9n]).quantile(new Fraction("0.271"))).toEqual({ low: 3, high: 4 });
  });
});

describe("runs that may never end", () => {
  /** Column 0 raises, column 1 goes on, column 2 leads to where nothing raises. */
  const trap: Automaton = {
    states: 3,
    columns: 3,
    next: Int32Array.of(0, 1, 2, 0, 0, 2, 2, 2, 2),
    output: Int32Array.of(1, 0, 0, 1, 0, 0, 0, 0, 0),
  };

  test("mean, chance and law", () => {
    const lengths = lengthsOf(trap, [1n, 1n, 2n], true);
    expect(lengths.mean()).toBe(Number.POSITIVE_INFINITY);
    expect(lengths.relativeErrorBound()).toBeNull();
    expect(lengths.standardDeviation()).toBe(Number.POSITIVE_INFINITY);
    expect(lengths.everProbability()).toBeCloseTo(1 / 3, 15);
    expect(lengths.neverProbability()).toBeCloseTo(2 / 3, 15);
    expectLaw(lengths, exactLaw(plain(trap, -1), [1n, 1n, 2n], 400), [0, 1, 2, 3, 10, 50, 400], 1e-12);
    expect(lengths.quantile(new Fraction("0.25"))).toEqual({ low: 1, high: 1 });
    expect(lengths.quantile(new Fraction("0.33"))).toEqual({ low: 4, high: 4 });
    expect(lengths.quantile(half)).toEqual({ low: Number.POSITIVE_INFINITY, high: Number.POSITIVE_INFINITY });
  });

  test("a chance of 1e-12 never to end keeps its digits", () => {
    const lengths = lengthsOf(trap, [10n ** 12n - 1n, 0n, 1n]);
    expect(lengths.neverProbability() / 1e-12).toBeCloseTo(1, 14);
    expect(lengths.mean()).toBe(Number.POSITIVE_INFINITY);
  });

  test("impossible letters do not count: certain, or impossible", () => {
    expect(lengthsOf(trap, [1n, 1n, 0n]).mean()).toBeCloseTo(2, 14);
    const never = lengthsOf(trap, [0n, 1n, 1n]);
    expect(never.mean()).toBe(Number.POSITIVE_INFINITY);
    expect(never.everProbability()).toBe(0);
    expect(never.neverProbability()).toBe(1);
    expect(never.signalled(1e6)).toEqual({ value: 0, low: 0, high: 0 });
    expect(never.quantile(half).low).toBe(Number.POSITIVE_INFINITY);
  });

  test("a run that is certain at a certain trial", () => {
    const count = explore("0", 1, (state) => (state === "9" ? ["0", 1] : [String(Number(state) + 1), 0]));
    const lengths = lengthsOf(count, [1n]);
    expect(lengths.mean()).toBe(10);
    expect(lengths.standardDeviation()).toBe(0);
    expect(lengths.signalled(9).high).toBe(0);
    expect(lengths.signalled(10).value).toBeCloseTo(1, 14);
    expect(lengths.quantile(half)).toEqual({ low: 10, high: 10 });
    expect(toNumber(exactLaw(plain(count, -1), [1n], 10)[10]!)).toBe(1);
  });
});
