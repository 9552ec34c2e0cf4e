// The a posteriori bound: it holds for whatever is called a solution, or is not given.

import { describe, expect, test } from "vitest";
import { type CycleSolution, certifyCycle, certifyOthers } from "../../compiler/analysis/certificate.ts";
import {
  chooseAnchors,
  fillChain,
  findSkeleton,
  markTransitions,
  shapeChain,
  usableColumns,
} from "../../compiler/analysis/chain.ts";
import { meanSteps } from "../../compiler/analysis/mean.ts";
import { prepareRunLengths } from "../../compiler/analysis/run-lengths.ts";
import { planShape, prepareSystem } from "../../compiler/analysis/solver.ts";
import { exactMoments, relativeError } from "../oracle/exact-chain.ts";
import { plain, probabilitiesOf, type RandomCase, randomMachine, randomNumbers } from "./machines.ts";

function chainOf({ automaton, weights }: RandomCase) {
  const marks = markTransitions(automaton);
  const probabilities = probabilitiesOf(weights);
  const usable = usableColumns(probabilities);
  const skeleton = findSkeleton(automaton, marks, true, Int32Array.of(0), usable);
  return fillChain(shapeChain(skeleton, chooseAnchors(skeleton, probabilities.high)), probabilities);
}

describe("a solver stopped early", () => {
  test("1,000 random machines: the bound covers the true error, or none is given", () => {
    const random = randomNumbers(11);
    let [given, refused, tight] = [0, 0, Number.POSITIVE_INFINITY];
    for (let i = 0; i < 1000; i++) {
      const one = randomMachine(random, 9, random());
      const limits = { most: 1 + Math.floor(random() * 12), change: 0 };
      const run = prepareRunLengths(one.automaton, () => true, { elimination: false, limits, refine: false });
      const lengths = run.under(probabilitiesOf(one.weights));
      const bound = lengths.relativeErrorBound();
      if (bound === null) {
        refused++;
        continue;
      }
      const error = relativeError(
        lengths.mean(),
        exactMoments(plain(one.automaton, -1), one.weights).means[0]!,
      );
      expect(error).toBeLessThanOrEqual(bound);
      if (error > 1e-13) tight = Math.min(tight, bound / error);
      given++;
    }
    // Both happen, and the bound is no idle exaggeration.
    expect(given).toBeGreaterThan(500);
    expect(refused).toBeGreaterThan(10);
    expect(tight).toBeLessThan(10);
  });
});

describe("a disturbed solution", () => {
  /** Noise from 1e-15 to 3 %, everywhere or in one place, as a whole or at random. */
  function disturb(values: Float64Array, random: () => number): Float64Array {
    const size = 10 ** (-15 + 13.5 * random());
    const [everywhere, common, chosen] = [
      random() < 0.5,
      2 * random() - 1,
      Math.floor(random() * values.length),
    ];
    return values.map((value, i) => {
      if (!everywhere && i !== chosen) return value;
      return value * (1 + size * (random() < 0.5 ? common : 2 * random() - 1));
    });
  }

  test("4,000 of them: the anchor's bound holds or is refused", () => {
    const random = randomNumbers(12);
    let [given, refused] = [0, 0];
    while (given + refused < 4000) {
      const one = randomMachine(random, 8, random());
      const chain = chainOf(one);
      if (chain.shape.classCount > 1 || chain.shape.size < 2) continue;
      const { size } = chain.shape;
      const system = prepareSystem(planShape(chain.shape), chain);
      const solver = system.solverOf(0);
      const ones = new Float64Array(size).fill(1);
      const solution: CycleSolution = {
        cycleCost: new Float64Array(size),
        cycleGain: new Float64Array(size),
        gainWeight: new Float64Array(size),
      };
      solver.solveCycles(ones, solution.cycleCost, chain.exit, solution.cycleGain);
      solver.solveCycle(solution.cycleGain, solution.gainWeight);
      const exact = exactMoments(plain(one.automaton, -1), one.weights).means[
        chain.shape.stateOf[size - 1]!
      ]!;
      for (let round = 0; round < 20; round++) {
        const disturbed = {
          cycleCost: disturb(solution.cycleCost, random),
          cycleGain: disturb(solution.cycleGain, random),
          gainWeight: disturb(solution.gainWeight, random),
        };
        const bound = certifyCycle(chain, 0, ones, chain.exit, disturbed);
        if (bound === null) refused++;
        else {
          given++;
          const value = disturbed.cycleCost[size - 1]! / disturbed.cycleGain[size - 1]!;
          expect(relativeError(value, exact)).toBeLessThanOrEqual(bound + 2 ** -52);
        }
      }
    }
    expect(given).toBeGreaterThan(3000);
  });

  test("2,000 of them: the bounds of the other places hold or are refused", () => {
    const random = randomNumbers(13);
    let [given, refused] = [0, 0];
    while (given + refused < 2000) {
      const one = randomMachine(random, 8, random());
      const chain = chainOf(one);
      if (chain.shape.classCount > 1 || chain.shape.size < 2) continue;
      const { size, stateOf } = chain.shape;
      const system = prepareSystem(planShape(chain.shape), chain);
      const { steps } = meanSteps(system, null);
      const weight = new Float64Array(size);
      system.solverOf(0).solveCycle(steps, weight);
      const exact = exactMoments(plain(one.automaton, -1), one.weights).means;
      for (let round = 0; round < 20; round++) {
        const values = disturb(steps, random);
        values[size - 1] = steps[size - 1]!;
        const bounds = new Float64Array(size);
        if (!certifyOthers(chain, 0, new Float64Array(size).fill(1), values, weight, bounds)) {
          refused++;
          continue;
        }
        given++;
        // The anchor's own error (a few u) comes on top.
        for (let i = 0; i < size - 1; i++)
          expect(relativeError(values[i]!, exact[stateOf[i]!]!)).toBeLessThanOrEqual(bounds[i]! + 3e-15);
      }
    }
    expect(given).toBeGreaterThan(1500);
  });

  test("what is not a number, negative or vanished is refused", () => {
    const one = randomMachine(randomNumbers(14), 8, 0.2);
    const chain = chainOf(one);
    const { size } = chain.shape;
    const ones = new Float64Array(size).fill(1);
    for (const bad of [Number.NaN, Number.POSITIVE_INFINITY, -1, 1e-300]) {
      const vector = new Float64Array(size).fill(bad);
      const solution = { cycleCost: ones.slice(), cycleGain: ones.slice(), gainWeight: ones.slice() };
      for (const part of ["cycleCost", "cycleGain", "gainWeight"] as const) {
        if (bad === 1e-300 && part !== "cycleGain") continue;
        const bound = certifyCycle(chain, 0, ones, chain.exit, { ...solution, [part]: vector });
        expect(bound, `${part} ${bad}`).toBeNull();
      }
    }
  });
});
