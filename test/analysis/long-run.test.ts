// The conditional long-run state against plain iteration of a dense matrix, and run lengths that begin from it.

import erfc from "@stdlib/math-base-special-erfc";
import { describe, expect, test } from "vitest";
import { longRunLaw } from "../../compiler/analysis/long-run.ts";
import { prepareRunLengths, type StateLaw } from "../../compiler/analysis/run-lengths.ts";
import type { Automaton } from "../../compiler/machine/automaton.ts";
import { exactMoments, toNumber } from "../oracle/exact-chain.ts";
import {
  blockRun,
  plain,
  probabilitiesOf,
  randomMachine,
  randomNumbers,
  run,
  scan,
  separatePairs,
  zoneTests,
} from "./machines.ts";

const anyOutput = () => true;

function lawUnder(automaton: Automaton, weights: readonly bigint[]): StateLaw {
  const found = longRunLaw(automaton, anyOutput, probabilitiesOf(weights));
  if (!("law" in found)) throw new Error(found.reason);
  return found.law;
}

/** By state: the law after `trials` trials without a raise, averaged over the last `period`. */
function iterated(
  automaton: Automaton,
  weights: readonly bigint[],
  trials: number,
  period: number,
): number[] {
  const whole = Number(weights.reduce((a, b) => a + b, 0n));
  const { states, columns, next, output } = automaton;
  let masses: number[] = Array.from({ length: states }, (_, state) => (state === 0 ? 1 : 0));
  const sums = new Array<number>(states).fill(0);
  for (let t = 1; t <= trials; t++) {
    const following = new Array<number>(states).fill(0);
    for (let at = 0; at < next.length; at++)
      if (output[at] === 0)
        following[next[at]!]! += (masses[Math.floor(at / columns)]! * Number(weights[at % columns]!)) / whole;
    const sum = following.reduce((a, b) => a + b, 0);
    masses = following.map((mass) => mass / sum);
    if (t > trials - period) for (let i = 0; i < states; i++) sums[i]! += masses[i]! / period;
  }
  return sums;
}

function byState(law: StateLaw, states: number): number[] {
  const masses = new Array<number>(states).fill(0);
  for (const [i, state] of law.states.entries()) masses[state] = law.weights[i]!;
  return masses;
}

describe("the law", () => {
  test.each([
    ["4 in a row", run(4), [1n, 2n], 1],
    ["3 of 6", scan(3, 6), [1n, 7n], 1],
    ["3 in a row in blocks of 10", blockRun(3, 10), [1n, 1n], 10],
  ] as const)("%s", (_name, automaton, weights, period) => {
    const ours = byState(lawUnder(automaton, weights), automaton.states);
    const theirs = iterated(automaton, weights, 2000, period);
    for (const [state, mass] of theirs.entries()) expect(ours[state]).toBeCloseTo(mass, 12);
    expect(ours.reduce((a, b) => a + b, 0)).toBeCloseTo(1, 13);
  });

  test("random machines, run lengths under other probabilities, with a proven bound", () => {
    const random = randomNumbers(31);
    let bounded = 0;
    for (let i = 0; i < 60; i++) {
      const { automaton, weights } = randomMachine(random, 8, 0);
      const found = longRunLaw(automaton, anyOutput, probabilitiesOf(weights));
      if (!("law" in found)) continue;
      const then = weights.map((weight, column) => (column === 0 ? weight / 3n : weight));
      const lengths = prepareRunLengths(automaton, anyOutput).under(probabilitiesOf(then), found.law);
      const { means, variances } = exactMoments(plain(automaton, -1), then);
      const masses = iterated(automaton, weights, 20_000, 2520);
      const mean = masses.reduce((sum, mass, state) => sum + mass * toNumber(means[state]!), 0);
      const variance = masses.reduce(
        (sum, mass, state) =>
          sum + mass * (toNumber(variances[state]!) + (toNumber(means[state]!) - mean) ** 2),
        0,
      );
      expect(lengths.mean() / mean).toBeCloseTo(1, 9);
      expect(lengths.standardDeviation() / Math.sqrt(variance)).toBeCloseTo(1, 8);
      const bound = lengths.relativeErrorBound();
      if (bound === null || bound > 1e-9) continue;
      bounded++;
      expect(Math.abs(lengths.mean() / mean - 1)).toBeLessThan(bound + 1e-12);
    }
    expect(bounded).toBeGreaterThan(30);
  });

  test("the law of the run length from it: geometric at once", () => {
    // From the long-run state the hazard is constant under the same process.
    const weights = [1n, 2n];
    const law = lawUnder(run(4), weights);
    const lengths = prepareRunLengths(run(4), anyOutput).under(probabilitiesOf(weights), law);
    const once = lengths.signalled(1).value;
    for (const n of [2, 7, 40, 400])
      expect(lengths.signalled(n).value / -Math.expm1(n * Math.log1p(-once))).toBeCloseTo(1, 11);
    expect(lengths.mean() * once).toBeCloseTo(1, 12);
  });
});

describe("zone tests (Champ & Woodall 1987, Technometrics 29:393, Table 1; from memory)", () => {
  /** The upper tail of the standard normal law. */
  const tail = (z: number) => erfc(z / Math.SQRT2) / 2;
  /** Letters cut at -3 … 3, the mean shifted by d. */
  function letters(d: number) {
    const cuts = [-3, -2, -1, 0, 1, 2, 3];
    const high = Float64Array.from({ length: 8 }, (_, i) => {
      if (i === 0) return tail(3 + d);
      if (i === 7) return tail(3 - d);
      const [low, up] = [cuts[i - 1]! - d, cuts[i]! - d];
      return low >= 0 ? tail(low) - tail(up) : tail(-up) - tail(-low);
    });
    return { high, low: new Float64Array(8) };
  }

  test.each([
    [0, 370.4, 225.44, 152.73, 91.75],
    [0.4, 200.08, 104.46, 59.76, 36.61],
    [0.8, 71.55, 33.12, 21.07, 13.25],
    [1, 43.89, 20.01, 14.58, 9.22],
    [1.4, 18.25, 8.69, 8.6, 5.42],
    [2, 6.3, 3.65, 4.89, 3.13],
    [3, 2.0, 1.68, 1.99, 1.67],
  ])("shift %f", (d, c1, c12, c14, all) => {
    const mean = (tests: Parameters<typeof zoneTests>[0]) =>
      prepareRunLengths(zoneTests(tests), anyOutput).under(letters(d)).mean();
    const near = (value: number, printed: number) => expect(Math.abs(value - printed)).toBeLessThan(0.0101);
    near(mean(["C1"]), c1);
    near(mean(["C1", "C2"]), c12);
    near(mean(["C1", "C4"]), c14);
    near(mean(["C1", "C2", "C3", "C4"]), all);
  });

  test("all four in control: 91.751 from the start, 88.617 in the long run (own computation of the maintainers)", () => {
    const automaton = zoneTests(["C1", "C2", "C3", "C4"]);
    const solver = prepareRunLengths(automaton, anyOutput);
    const found = longRunLaw(automaton, anyOutput, letters(0));
    if (!("law" in found)) throw new Error(found.reason);
    expect(solver.under(letters(0)).mean()).toBeCloseTo(91.751, 2);
    const after = solver.under(letters(0), found.law);
    expect(after.mean()).toBeCloseTo(88.617, 3);
    expect(after.relativeErrorBound()).toBeLessThan(1e-11);
  });
});

describe("no usable limit", () => {
  test("stages in a row: all mass creeps to the last", () => {
    const found = longRunLaw(separatePairs(3), anyOutput, probabilitiesOf([1n, 9n]));
    expect("reason" in found && found.reason).toMatch(/too slowly/);
  });

  test("a signal at every trial", () => {
    const found = longRunLaw(run(1), anyOutput, probabilitiesOf([1n, 0n]));
    expect("reason" in found && found.reason).toMatch(/certain/);
  });
});
