// Long cycles, not long means, strain the bound: it stays at or below 1e-12, and holds. And machines of many states.

import { describe, expect, test } from "vitest";
import { countRaises, raiseRate } from "../../compiler/analysis/raise-counts.ts";
import { prepareRunLengths, type RunLengths } from "../../compiler/analysis/run-lengths.ts";
import type { Automaton } from "../../compiler/machine/automaton.ts";
import { exactLaw, type Ratio, relativeError } from "../oracle/exact-chain.ts";
import {
  blockRun,
  explore,
  plain,
  probabilitiesOf,
  run,
  scan,
  separatePairs,
  withLockout,
} from "./machines.ts";

function lengthsOf(automaton: Automaton, weights: readonly bigint[], mask = 1): RunLengths {
  return prepareRunLengths(automaton, (output) => (output & mask) !== 0).under(probabilitiesOf(weights));
}

function expectMean(lengths: RunLengths, exact: Ratio) {
  const bound = lengths.relativeErrorBound()!;
  expect(bound).toBeLessThanOrEqual(1e-12);
  expect(relativeError(lengths.mean(), exact)).toBeLessThanOrEqual(bound);
}

/** Mean and variance of the wait for k in a row, from Feller XIII.7, at a : b. */
function feller(k: number, a: bigint, b: bigint): { mean: Ratio; variance: Ratio } {
  const [c, n] = [a + b, BigInt(k)];
  const variance = c ** (2n * n + 1n) - (2n * n + 1n) * b * a ** n * c ** n - a ** (2n * n + 1n);
  return {
    mean: { n: c * (c ** n - a ** n), d: b * a ** n },
    variance: { n: variance * c, d: b * b * a ** (2n * n) },
  };
}

describe("long cycles", () => {
  test("2,000 in a row at 0.999", () => {
    const lengths = lengthsOf(run(2000), [999n, 1n]);
    const exact = feller(2000, 999n, 1n);
    expectMean(lengths, exact.mean);
    expect(lengths.relativeErrorBound()).toBeLessThan(1e-15);
    expect(relativeError(lengths.standardDeviation() ** 2, exact.variance)).toBeLessThan(1e-10);
  });

  test("5,000 in a row at 0.9999, too many for elimination", () => {
    const lengths = lengthsOf(run(5000), [9999n, 1n]);
    const exact = feller(5000, 9999n, 1n);
    expectMean(lengths, exact.mean);
    expect(relativeError(lengths.standardDeviation() ** 2, exact.variance)).toBeLessThan(1e-10);
  });

  test.each([5000, 300])("a signal that rests for %i trials: how often it comes", (quiet) => {
    const automaton = withLockout(2, quiet);
    const weights = [5n, 1n, 94n];
    expectMean(lengthsOf(automaton, weights, 1), { n: 105n * 100n, d: 25n });
    expectMean(lengthsOf(automaton, weights, 2), { n: 100n, d: 1n });
    const rate = raiseRate(automaton, (output) => (output & 2) !== 0, probabilitiesOf(weights));
    expect(relativeError(rate.value, { n: 1n, d: 100n + BigInt(quiet) })).toBeLessThan(1e-12);
    // Renewals at mean distance m: n / m - 1 < mean number < n / m + 1.
    const count = countRaises(automaton, (output) => (output & 2) !== 0, probabilitiesOf(weights), 1e7);
    expect(count.high - count.low).toBeLessThan(1.1);
    expect(Math.abs(count.value - 1e7 / (100 + quiet))).toBeLessThan(1);
    expect(rate.high - rate.low).toBeLessThan(1e-12 * rate.value);
  });

  test.each([5000, 300])("two in a row, counted only in the %i trials after a start", (window) => {
    // Column 1 starts the window; a window without a signal ends in waiting again.
    const automaton = explore("0 0", 3, (state, column) => {
      const [rest, held] = state.split(" ").map(Number) as [number, number];
      if (rest === 0) return [column === 1 ? `${window} 0` : "0 0", 0];
      if (column === 0 && held === 1) return ["0 0", 1];
      return [rest === 1 ? "0 0" : `${rest - 1} ${column === 0 ? 1 : 0}`, 0];
    });
    const weights = [1n, 4n, 995n];
    const law = exactLaw(plain(run(2)), [1n, 999n], window);
    const { n: ended, d: whole } = law[window]!;
    // A cycle: 250 trials of waiting, then the window or less; it ends in a signal with chance ended / whole.
    let sum = 250n * whole;
    for (const { n, d } of law.slice(0, window)) sum += ((d - n) * whole) / d;
    expectMean(lengthsOf(automaton, weights), { n: sum, d: ended });
  });

  test("two in a row in blocks of 500", () => {
    const automaton = blockRun(2, 500);
    const weights = [1n, 199n];
    // Every block begins anew: mean = sum of P(T > t) over a block, over the chance of a signal in one.
    const law = exactLaw(plain(automaton), weights, 500);
    const { n: ended, d: whole } = law[500]!;
    let sum = 0n;
    for (const { n, d } of law.slice(0, 500)) sum += ((d - n) * whole) / d;
    expectMean(lengthsOf(automaton, weights), { n: sum, d: ended });
  });

  test.each([2, 50, 500])("%i separate pairs", (n) => {
    const lengths = lengthsOf(separatePairs(n), [1n, 9n]);
    expectMean(lengths, { n: BigInt(n) * 110n, d: 1n });
    const { variance } = feller(2, 1n, 9n);
    expect(
      relativeError(lengths.standardDeviation() ** 2, { n: BigInt(n) * variance.n, d: variance.d }),
    ).toBeLessThan(1e-11);
  });

  test.each([3n, 12n, 18n])("nearly certain: five in a row, a miss of 1e-%i", (power) => {
    const lengths = lengthsOf(run(5), [10n ** power - 1n, 1n]);
    const exact = feller(5, 10n ** power - 1n, 1n);
    expectMean(lengths, exact.mean);
    expect(relativeError(lengths.standardDeviation() ** 2, exact.variance)).toBeLessThan(1e-10);
  });

  test("means of 1e20 and 1e60", () => {
    for (const k of [20, 60]) {
      const lengths = lengthsOf(run(k), [1n, 9n]);
      expectMean(lengths, feller(k, 1n, 9n).mean);
      expect(relativeError(lengths.standardDeviation() ** 2, feller(k, 1n, 9n).variance)).toBeLessThan(1e-10);
    }
  });

  test("where nothing can be proven no bound is given", () => {
    const lengths = lengthsOf(run(300), [1n, 9n]);
    expect(lengths.relativeErrorBound()).toBeNull();
  });
});

describe("many states", () => {
  /** The mean by another road: the sum of P(T > t), the tail geometric. */
  function meanFromLaw(lengths: RunLengths, until: number): number {
    const alive = (n: number) => 1 - lengths.signalled(n).value;
    let sum = 0;
    for (let t = 0; t < until; t++) sum += alive(t);
    const hazard = 1 - alive(until + 1) / alive(until);
    return sum + alive(until) / hazard;
  }

  test("8 of 20 (77,520 states)", () => {
    const automaton = scan(8, 20);
    expect(automaton.states).toBe(77_520);
    for (const weights of [
      [1n, 9n],
      [1n, 1n],
    ]) {
      const lengths = lengthsOf(automaton, weights);
      expect(lengths.relativeErrorBound()).toBeLessThan(1e-12);
      expect(lengths.mean() / meanFromLaw(lengths, 200)).toBeCloseTo(1, 9);
    }
    expect(lengthsOf(automaton, [1n, 9n]).standardDeviation()).toBeGreaterThan(9000);
  });

  test("8 of 22 (170,544 states) at 1/100: 1.0e11 trials", () => {
    const automaton = scan(8, 22);
    expect(automaton.states).toBe(170_544);
    const lengths = lengthsOf(automaton, [1n, 99n]);
    expect(lengths.relativeErrorBound()).toBeLessThan(1e-12);
    expect(lengths.mean() / 1e11).toBeCloseTo(1, 1);
  });

  test("a path of 200,000 states does not overflow any stack", () => {
    const lengths = lengthsOf(run(200_000), [10n ** 9n - 1n, 1n]);
    // (p^-k - 1) / q, to a few roundings.
    const mean = Math.expm1(-200_000 * Math.log1p(-1e-9)) / 1e-9;
    expect(lengths.relativeErrorBound()).toBeLessThanOrEqual(1e-12);
    expect(Math.abs(lengths.mean() / mean - 1)).toBeLessThan(1e-13);
  });
});
