// Means and their proven bounds against exact whole-number elimination, on random machines and every state of them.

import { describe, expect, test } from "vitest";
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
import { planShape, prepareSystem, type SolverOptions } from "../../compiler/analysis/solver.ts";
import { TO_THE_LAST } from "../../compiler/analysis/sweeps.ts";
import { stepVariances } from "../../compiler/analysis/variance.ts";
import { exactMoments, relativeError, toNumber } from "../oracle/exact-chain.ts";
import {
  plain,
  probabilitiesOf,
  type RandomCase,
  randomMachine,
  randomNumbers,
  run,
  scan,
  weakRun,
} from "./machines.ts";

const SWEEPS: SolverOptions = { elimination: false, limits: TO_THE_LAST, refine: true };
const ELIMINATION: SolverOptions = { elimination: true, limits: TO_THE_LAST, refine: true };
const MACHINES = 270;

/** Means, bounds and variances of all places, with the state of each. */
function solve({ automaton, weights }: RandomCase, options: SolverOptions) {
  const marks = markTransitions(automaton);
  const probabilities = probabilitiesOf(weights);
  const usable = usableColumns(probabilities);
  const skeleton = findSkeleton(automaton, marks, true, Int32Array.of(0), usable);
  // Sweeps want anchors that are often visited; elimination is content with any.
  const even = new Float64Array(automaton.columns).fill(1);
  const anchors = chooseAnchors(skeleton, options.elimination ? even : probabilities.high);
  const shape = shapeChain(skeleton, anchors);
  const system = prepareSystem(planShape(shape, options), fillChain(shape, probabilities), options);
  const means = meanSteps(system, null);
  return { shape, means, variances: stepVariances(system, means.steps) };
}

/** Random machines, the later ones with rare letters, so that means reach beyond 1e15. */
function cases(seed: number, count: number): RandomCase[] {
  const random = randomNumbers(seed);
  return Array.from({ length: count }, (_, i) => randomMachine(random, 11, ((3 * i) / count) % 1));
}

describe.each([
  ["elimination", ELIMINATION],
  ["sweeps", SWEEPS],
] as const)("mean run lengths by %s", (_name, options) => {
  const found = cases(20_260_729, MACHINES).map((one) => ({
    ...solve(one, options),
    exact: exactMoments(plain(one.automaton, -1), one.weights),
  }));

  test(`${MACHINES} random machines, every state: the bound holds and is at most 1e-12`, () => {
    let [values, largest] = [0, 0];
    for (const { shape, means, exact } of found) {
      for (let place = 0; place < shape.size; place++) {
        const error = relativeError(means.steps[place]!, exact.means[shape.stateOf[place]!]!);
        expect(means.bound[place]).toBeLessThanOrEqual(1e-12);
        expect(error).toBeLessThanOrEqual(means.bound[place]!);
        largest = Math.max(largest, means.steps[place]!);
        values++;
      }
    }
    expect(values).toBeGreaterThan(1000);
    expect(largest).toBeGreaterThan(1e15);
  });

  test("the same: variances to 1e-10", () => {
    for (const { shape, variances, exact } of found)
      for (let place = 0; place < shape.size; place++) {
        const variance = exact.variances[shape.stateOf[place]!]!;
        expect(relativeError(variances[place]!, variance), `${toNumber(variance)}`).toBeLessThan(1e-10);
      }
  });
});

test.each([
  ["5 of 11 at 1/10", scan(5, 11), [1n, 9n]],
  ["5 of 11 at 1/2", scan(5, 11), [1n, 1n]],
  ["weak run of 6, gap 8", weakRun(6, 8), [1n, 5n, 2n]],
  ["40 in a row", run(40), [9n, 1n]],
] as const)("%s: sweeps and elimination agree in every answer", (_name, automaton, weights) => {
  const [one, other] = [SWEEPS, ELIMINATION].map((options) =>
    prepareRunLengths(automaton, () => true, options).under(probabilitiesOf(weights)),
  );
  const bounds = one!.relativeErrorBound()! + other!.relativeErrorBound()!;
  expect(bounds).toBeLessThan(1e-12);
  expect(Math.abs(one!.mean() / other!.mean() - 1)).toBeLessThanOrEqual(bounds);
  expect(one!.standardDeviation() / other!.standardDeviation()).toBeCloseTo(1, 12);
  expect(one!.endsIn(() => true)).toBeCloseTo(1, 12);
});

test("equal questions have equal answers, to the last bit, whatever was asked before", () => {
  const random = randomNumbers(61);
  for (let i = 0; i < 40; i++) {
    const { automaton, weights } = randomMachine(random, 9, random());
    const other = weights.map((weight, column) => (column === 1 ? weight * 7n : weight));
    const solver = prepareRunLengths(automaton, () => true);
    solver.under(probabilitiesOf(other)).standardDeviation();
    const [warm, fresh] = [solver, prepareRunLengths(automaton, () => true)].map((one) =>
      one.under(probabilitiesOf(weights)),
    );
    expect(warm!.mean()).toBe(fresh!.mean());
    expect(warm!.relativeErrorBound()).toBe(fresh!.relativeErrorBound());
    expect(warm!.standardDeviation()).toBe(fresh!.standardDeviation());
    expect(warm!.signalled(50)).toEqual(fresh!.signalled(50));
  }
});

test("a mistake of ours is said to be one", () => {
  const { automaton } = randomMachine(randomNumbers(62), 5, 0);
  const short = { high: new Float64Array(1), low: new Float64Array(1) };
  expect(() => prepareRunLengths(automaton, () => true).under(short)).toThrow(/bug in Tocsin/);
  const none = new Uint8Array(1);
  expect(() => findSkeleton(automaton, none, true, Int32Array.of(0), Int32Array.of(0))).toThrow(
    /bug in Tocsin/,
  );
});
