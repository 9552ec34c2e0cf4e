/**
 * Mean cost until exit, for every place of an absorbing chain, with proven error bounds. In: a plan, a chain. Out: by
 * place, the mean number of steps until an exit and a bound of its relative error; infinite where the exit is not
 * certain.
 *
 * Class by class in reverse topological order. Within a class x_r = h_r / g_r at the anchor r (see note [cycle
 * certificate]), then the other places given that. Where a class leads to others, x = B + the solution with costs 1 +
 * sum q_ij (x_j - B), B the least value any of its exits has: what was found downstream then weighs as it should, and
 * errors do not pile up over many classes. The bound of a place: the largest downstream, plus the class's own times 1
 * - B / x, plus a rounding.
 *
 * Cost: two solutions a class, one certificate; two more where a place other than the anchor is asked for.
 * Source: the anchor's renewal equation, Kemeny & Snell (1960), *Finite Markov Chains*, 6.1; bounds proven here.
 */
import { type CycleSolution, certifyCycle, certifyOthers } from "./certificate.ts";
import type { Chain } from "./chain.ts";
import { type Accumulator, add, addProduct, type DoubleDoubles, UNIT, zeros } from "./double-double.ts";
import { refineOthers, refineRatio, weightExcess } from "./refinement.ts";
import type { ClassSolver, System } from "./solver.ts";

export type Means = {
  /** By place: mean steps until exit; Infinity where an exit is not certain. */
  readonly steps: Float64Array;
  /** By place: a bound of its relative error; NaN where none is proven. */
  readonly bound: Float64Array;
};

/** A class is refined when its own bound is larger than this. */
const REFINE_ABOVE = 4e-13;
/** What a printed bound may be at most before everything is refined. */
const LARGEST_BOUND = 1e-12;

/**
 * The means of all places, or with `needed` (a place) of that one and all it takes: the other places of the last
 * class are then NaN if it is the anchor.
 */
export function meanSteps(system: System, needed: number | null): Means {
  if (!system.options.refine) return solveMeans(system, needed, Number.POSITIVE_INFINITY);
  const means = solveMeans(system, needed, REFINE_ABOVE);
  const worst = needed === null ? means.bound.reduce((a, b) => Math.max(a, b), 0) : means.bound[needed]!;
  return worst > LARGEST_BOUND ? solveMeans(system, needed, 0) : means;
}

function solveMeans(system: System, needed: number | null, refineAbove: number): Means {
  const { size, classCount, classStart } = system.chain.shape;
  const means: Means = {
    steps: new Float64Array(size).fill(Number.NaN),
    bound: new Float64Array(size).fill(Number.NaN),
  };
  const work = workspace(system);
  for (let k = 0; k < classCount; k++) {
    const onlyAnchor = k === classCount - 1 && needed === classStart[k + 1]! - 1;
    solveClass(system, k, means, work, refineAbove, onlyAnchor);
  }
  return means;
}

type Workspace = {
  readonly cost: DoubleDoubles;
  readonly solution: CycleSolution;
  readonly values: Float64Array;
  readonly weight: Float64Array;
  readonly bounds: Float64Array;
};

function workspace({ chain, cycleGain }: System): Workspace {
  const vector = (): Float64Array => new Float64Array(chain.shape.size);
  return {
    cost: zeros(chain.shape.size),
    solution: { cycleCost: vector(), cycleGain, gainWeight: vector() },
    values: vector(),
    weight: vector(),
    bounds: vector(),
  };
}

function solveClass(
  system: System,
  k: number,
  means: Means,
  work: Workspace,
  refineAbove: number,
  onlyAnchor: boolean,
): void {
  const { chain } = system;
  const first = chain.shape.classStart[k]!;
  const anchor = chain.shape.classStart[k + 1]! - 1;
  const base = leastBeyond(chain, k, means);
  if (base.value === Number.POSITIVE_INFINITY) {
    means.steps.fill(Number.POSITIVE_INFINITY, first, anchor + 1);
    means.bound.fill(0, first, anchor + 1);
    return;
  }
  writeCosts(chain, first, anchor, means.steps, base.value, work.cost);
  const { values, bounds } = work;
  if (first === anchor) {
    // Cost over exit, each right to a rounding.
    values[anchor] = work.cost.high[anchor]! / chain.exit[anchor]!;
    bounds[anchor] = 4 * UNIT;
  } else {
    const solver = system.solverOf(k);
    const ratio = solveAnchor(system, solver, work, refineAbove);
    values[anchor] = ratio.value;
    bounds[anchor] = ratio.bound ?? Number.NaN;
    if (!onlyAnchor) solveRest(solver, work, refineAbove);
  }
  for (let i = onlyAnchor ? anchor : first; i <= anchor; i++) {
    means.steps[i] = base.value + values[i]!;
    means.bound[i] = combineBounds(base, values[i]!, bounds[i]!);
  }
}

/** The bound of base + value, the base exact but for its own bound, `own` that of the value. */
function combineBounds(base: { value: number; bound: number }, value: number, own: number): number {
  if (base.value === 0 && base.bound === 0) return own;
  const largest = value / (1 - own);
  const share = own * (largest / (base.value + largest));
  return (share + base.bound + share * base.bound + UNIT) * (1 + 1e-9);
}

/**
 * The least value among the places class k can go to next, 0 if it can exit at once, and the worst of their bounds.
 * Infinite when some next place is, or when there is none.
 */
function leastBeyond(chain: Chain, k: number, { steps, bound }: Means): { value: number; bound: number } {
  const { classStart, rowStart, rowLeave, target, exitSet, markSet } = chain.shape;
  let [least, worst, any] = [Number.POSITIVE_INFINITY, 0, false];
  if (chain.shape.classCount === 1) return { value: chain.shape.markSet.some(isSet) ? 0 : least, bound: 0 };
  for (let i = classStart[k]!; i < classStart[k + 1]!; i++) {
    if (exitSet[i] !== 0) any = true;
    if (markSet[i] !== 0) least = 0;
    for (let m = rowLeave[i]!; m < rowStart[i + 1]!; m++) {
      const j = target[m]!;
      if (steps[j] === Number.POSITIVE_INFINITY) return { value: Number.POSITIVE_INFINITY, bound: 0 };
      least = Math.min(least, steps[j]!);
      worst = Math.max(worst, bound[j]!);
    }
  }
  return { value: any ? least : Number.POSITIVE_INFINITY, bound: worst };
}

function isSet(set: number): boolean {
  return set !== 0;
}

/** cost = 1 + sum over the moves to earlier classes of q (x - base). */
function writeCosts(
  chain: Chain,
  first: number,
  anchor: number,
  steps: Float64Array,
  base: number,
  cost: DoubleDoubles,
): void {
  const { rowStart, rowLeave, target, moveSet, classCount } = chain.shape;
  const { high, low } = chain.setSums;
  cost.high.fill(1, first, anchor + 1);
  cost.low.fill(0, first, anchor + 1);
  if (classCount === 1) return;
  const sum: Accumulator = new Float64Array(2);
  const difference: Accumulator = new Float64Array(2);
  for (let i = first; i <= anchor; i++) {
    if (rowLeave[i] === rowStart[i + 1]) continue;
    sum[0] = 1;
    sum[1] = 0;
    for (let m = rowLeave[i]!; m < rowStart[i + 1]!; m++) {
      difference[0] = steps[target[m]!]!;
      difference[1] = 0;
      add(difference, -base, 0);
      addProduct(sum, high[moveSet[m]!]!, low[moveSet[m]!]!, difference[0]!, difference[1]!);
    }
    cost.high[i] = sum[0]!;
    cost.low[i] = sum[1]!;
  }
}

/** The anchor's value, with a bound; refined if the plain bound is large. */
function solveAnchor(
  system: System,
  solver: ClassSolver,
  work: Workspace,
  refineAbove: number,
): { value: number; bound: number | null } {
  const { chain, k, first, anchor } = solver;
  const { cycleCost, cycleGain, gainWeight } = work.solution;
  cycleCost.set(work.cost.high.subarray(first, anchor + 1), first);
  if (system.gainKnown[k] === 1) {
    solver.solveCycle(work.cost.high, cycleCost);
  } else {
    cycleGain.set(chain.exit.subarray(first, anchor + 1), first);
    solver.solveCycles(work.cost.high, cycleCost, chain.exit, cycleGain);
    system.gainKnown[k] = 1;
  }
  weigh(solver, cycleGain, gainWeight, false);
  const value = cycleCost[anchor]! / cycleGain[anchor]!;
  const plain = certifyCycle(chain, k, work.cost.high, chain.exit, work.solution);
  const bound = plain === null ? null : plain + 2 * UNIT;
  if (refineAbove === Number.POSITIVE_INFINITY || (bound !== null && bound <= refineAbove))
    return { value, bound };
  const refined = refineRatio(solver, work.cost, gains(solver), work.solution);
  return refined.bound !== null && (bound === null || refined.bound < bound) ? refined : { value, bound };
}

/** The gains (what leaves the class) by place, in double-double. */
function gains(solver: ClassSolver): DoubleDoubles {
  const { chain, first, anchor } = solver;
  const gain = zeros(anchor + 1);
  for (let i = first; i <= anchor; i++) {
    gain.high[i] = chain.setSums.high[chain.shape.exitSet[i]!]!;
    gain.low[i] = chain.setSums.low[chain.shape.exitSet[i]!]!;
  }
  return gain;
}

/** weight = roughly N values, good enough to serve the certificate; `withoutAnchor` leaves the anchor's row out. */
function weigh(
  solver: ClassSolver,
  values: Float64Array,
  weight: Float64Array,
  withoutAnchor: boolean,
): void {
  const { first, anchor } = solver;
  weight.set(values.subarray(first, anchor + 1), first);
  const cost = values;
  for (let round = 0; round < 8; round++) {
    solver.solveCycle(cost, weight, { most: 12, change: 0.01 });
    if (weightExcess(solver, values, weight, withoutAnchor) < 0.3) return;
  }
}

/** The places other than the anchor, given its value, with bounds that include the anchor's. */
function solveRest(solver: ClassSolver, work: Workspace, refineAbove: number): void {
  const { chain, k, first, anchor } = solver;
  const { values, bounds, weight, solution, cost } = work;
  const anchorValue = values[anchor]!;
  for (let i = first; i < anchor; i++)
    values[i] = solution.cycleCost[i]! + Math.max(0, 1 - solution.cycleGain[i]!) * anchorValue;
  solver.solveOthers(cost.high, values);
  weigh(solver, values, weight, true);
  let proven = certifyOthers(chain, k, cost.high, values, weight, bounds);
  let worst = 0;
  for (let i = first; i < anchor; i++) worst = Math.max(worst, bounds[i]!);
  if (refineAbove < Number.POSITIVE_INFINITY && (!proven || worst > refineAbove))
    proven = refineOthers(solver, cost, values, weight, bounds) || proven;
  const own = bounds[anchor]!;
  for (let i = first; i < anchor; i++)
    bounds[i] = proven ? (bounds[i]! + own + bounds[i]! * own) * (1 + 1e-9) : Number.NaN;
}
