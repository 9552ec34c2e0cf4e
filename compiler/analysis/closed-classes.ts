/**
 * What a chain does in the long run: its closed classes, the share of steps each spends on gains, and how far from
 * that share a start is ahead. In: a system whose marked transitions go on like any other. Out: rates with proven
 * bounds, advances.
 *
 * Rate of a class: gains of a cycle over steps of a cycle (see note [cycle certificate]), both sums of non-negative
 * terms; where cycles are long it is refined like a mean. Advance of a place: gains until the anchor less what the
 * rate would give for the steps until then; so that the mean gains of n steps from i are n rate + advance_i - E
 * advance(where it then is).
 * Source: renewal reward theorem, Kemeny & Snell (1960), *Finite Markov Chains*, 6.1; Howard (1960), *Dynamic
 * Programming and Markov Processes*, ch. 4, for the relative values here called advances.
 */
import { type CycleSolution, certifyCycle } from "./certificate.ts";
import type { DoubleDoubles } from "./double-double.ts";
import { UNIT, zeros } from "./double-double.ts";
import { refineRatio } from "./refinement.ts";
import type { ClassSolver, System } from "./solver.ts";
import { averageOver, type Estimate, type StartLaw } from "./state-law.ts";
import { expectedTotals } from "./totals.ts";

export type ClosedClass = {
  readonly k: number;
  /** Gains a step in the long run. */
  readonly rate: number;
  /** A bound of its relative error; null where none is proven. */
  readonly bound: number | null;
  /** By place of the chain, for the places of the class: see the head of this file. */
  readonly advances: Float64Array;
  /** More than any advance is wrong by. */
  readonly advanceError: number;
};

/**
 * The error of an advance, relative to the sizes it is the difference of; solutions are right to 1e-13 and better.
 */
const ADVANCE_ACCURACY = 1e-11;

/** A rate is refined when its plain bound is larger than this. */
const REFINE_ABOVE = 4e-13;

/** The closed classes of the chain, gains being its marks. */
export function findClosedClasses(system: System): ClosedClass[] {
  const { classStart, classCount, exitSet, markSet } = system.chain.shape;
  const closed: ClosedClass[] = [];
  for (let k = 0; k < classCount; k++) {
    const places = [classStart[k]!, classStart[k + 1]!] as const;
    if (exitSet.subarray(...places).some((set) => set !== 0)) continue;
    const gains = markSet.subarray(...places).some((set) => set !== 0);
    closed.push(gains ? solveClosed(system, k) : idle(system, k));
  }
  return closed;
}

/** A closed class without gains. */
function idle({ chain }: System, k: number): ClosedClass {
  return { k, rate: 0, bound: 0, advances: new Float64Array(chain.shape.size), advanceError: 0 };
}

function solveClosed(system: System, k: number): ClosedClass {
  const { chain } = system;
  const { size, classStart } = chain.shape;
  const first = classStart[k]!;
  const anchor = classStart[k + 1]! - 1;
  const advances = new Float64Array(size);
  if (first === anchor) return { k, rate: chain.mark[anchor]!, bound: UNIT, advances, advanceError: 0 };
  const solver = system.solverOf(k);
  const ones = new Float64Array(size).fill(1);
  const solution: CycleSolution = {
    cycleCost: ones.slice(),
    cycleGain: chain.mark.slice(),
    gainWeight: chain.mark.slice(),
  };
  const { cycleCost, cycleGain, gainWeight } = solution;
  solver.solveCycles(ones, cycleCost, chain.mark, cycleGain);
  solver.solveCycle(cycleGain, gainWeight, { most: 60, change: 0.01 });
  const plain = certifyCycle(chain, k, ones, chain.mark, solution);
  const own = {
    value: cycleCost[anchor]! / cycleGain[anchor]!,
    bound: plain === null ? null : plain + 2 * UNIT,
  };
  const wanting = own.bound === null || own.bound > REFINE_ABOVE;
  const refined = wanting
    ? refineRatio(solver, { high: ones, low: zeros(size).low }, marks(solver), solution)
    : own;
  const steps = refined.bound === null ? own : refined;
  const rate = 1 / steps.value;
  let largest = 0;
  for (let i = first; i < anchor; i++) {
    advances[i] = cycleGain[i]! - rate * cycleCost[i]!;
    largest = Math.max(largest, cycleGain[i]! + rate * cycleCost[i]!);
  }
  const bound = steps.bound === null ? null : steps.bound * (1 + 2 * steps.bound) + UNIT;
  return { k, rate, bound, advances, advanceError: ADVANCE_ACCURACY * largest };
}

/** The marks by place, in double-double. */
function marks({ chain, anchor }: ClassSolver): DoubleDoubles {
  const { high, low } = chain.setSums;
  const sets = chain.shape.markSet.subarray(0, anchor + 1);
  return {
    high: Float64Array.from(sets, (set) => high[set]!),
    low: Float64Array.from(sets, (set) => low[set]!),
  };
}

/** The long-run gains a step from a start: the classes' rates by the chance to end in each. */
export function combineRates(system: System, law: StartLaw, closed: readonly ClosedClass[]): Estimate {
  let [value, bound] = [0, 0];
  for (const { rate, bound: own, k } of closed) {
    if (rate === 0) continue;
    const share = closed.length === 1 ? 1 : averageOver(law, endChances(system, k));
    value += rate * share;
    // The chances to end in a class are right to about 1e-13.
    bound = Math.max(bound, (own ?? Number.POSITIVE_INFINITY) + (closed.length === 1 ? 0 : 1e-12));
  }
  return { value, low: value * Math.max(0, 1 - bound), high: Math.min(1, value * (1 + bound)) };
}

/** By place, the chance to end in closed class k. */
function endChances(system: System, k: number): Float64Array {
  const { chain } = system;
  const { size, classStart, rowLeave, rowStart, target } = chain.shape;
  const first = classStart[k]!;
  const end = classStart[k + 1]!;
  const cost = new Float64Array(size);
  for (let i = 0; i < size; i++)
    for (let m = rowLeave[i]!; m < rowStart[i + 1]!; m++)
      if (target[m]! >= first && target[m]! < end) cost[i]! += chain.move[m]!;
  const chances = expectedTotals(system, cost);
  chances.fill(1, first, end);
  return chances;
}
