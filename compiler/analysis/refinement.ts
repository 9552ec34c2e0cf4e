/**
 * Residuals in double-double: the certificate of certificate.ts evaluated with 2^-101 in place of 2^-53, and the
 * solution improved by what the residuals say, until the bound is small. In: a class's solver, costs and gains in
 * double-double, a solution in double. Out: the anchor's value (or the others') and a bound of its relative error.
 *
 * Needed where cycles are long (`2000 a`, a lockout of 5,000 trials): there already the rounding of the probabilities
 * costs cycle length times u. One or two steps reach 1e-26; the double printed is then right to its last place.
 * Source: iterative refinement, Wilkinson (1963), *Rounding Errors in Algebraic Processes*; see note [cycle
 * certificate].
 */
import { divide } from "../chance/double-double.ts";
import { boundOthers, boundRatio, type CycleSolution, SMALLEST } from "./certificate.ts";
import {
  type Accumulator,
  add,
  addProduct,
  DOUBLE_DOUBLE_UNIT,
  type DoubleDoubles,
  UNIT,
} from "./double-double.ts";
import type { ClassSolver } from "./solver.ts";
import type { SweepLimits } from "./sweeps.ts";

/** A value and a bound of its relative error; no bound where none is proven. */
export type Certified = { readonly value: number; readonly bound: number | null };

const MOST_STEPS = 8;
/** Residuals this small leave nothing in a double to improve. */
const GOAL = 2 ** -70;
/** A correction need only be good for some digits. */
const CORRECTION: SweepLimits = { most: 2000, change: 1e-4 };

type Residuals = {
  /** By place, the residual rounded to a double. */
  readonly rest: Float64Array;
  /** The largest of |residual| plus its own error over the scale. */
  worst: number;
};

/**
 * The residuals base + Q' y - l y of class k, with the largest against `scale` (by place). With `withAnchor` the
 * moves to the anchor count and the anchor's own row does not.
 */
function residuals(
  solver: ClassSolver,
  base: DoubleDoubles,
  values: DoubleDoubles,
  scale: Float64Array,
  withAnchor: boolean,
  into: Residuals,
): void {
  const { chain, first, anchor } = solver;
  const { rowStart, rowAnchor, rowLeave, target, moveSet, outSet, widestRow } = chain.shape;
  const { high, low } = chain.setSums;
  const error = (widestRow + 8) * DOUBLE_DOUBLE_UNIT;
  const sum: Accumulator = new Float64Array(2);
  const last = withAnchor ? anchor - 1 : anchor;
  into.worst = 0;
  for (let i = first; i <= last; i++) {
    sum[0] = base.high[i]!;
    sum[1] = base.low[i]!;
    for (let m = rowStart[i]!, to = withAnchor ? rowLeave[i]! : rowAnchor[i]!; m < to; m++) {
      const set = moveSet[m]!;
      const j = target[m]!;
      addProduct(sum, high[set]!, low[set]!, values.high[j]!, values.low[j]!);
    }
    const gained = sum[0]!;
    if (i === anchor) add(sum, -values.high[i]!, -values.low[i]!);
    else addProduct(sum, -high[outSet[i]!]!, -low[outSet[i]!]!, values.high[i]!, values.low[i]!);
    const rest = sum[0]!;
    into.rest[i] = rest;
    if (scale[i] === 0 && rest === 0 && gained === 0) continue;
    into.worst = Math.max(into.worst, (Math.abs(rest) + error * (2 * gained + Math.abs(rest))) / scale[i]!);
  }
}

/** Adds N rest to the values, on the class. */
function correct(solver: ClassSolver, values: DoubleDoubles, rest: Float64Array, withAnchor: boolean): void {
  const { first, anchor } = solver;
  const step = new Float64Array(anchor + 1);
  if (withAnchor) solver.solveOthers(rest, step, CORRECTION);
  else solver.solveCycle(rest, step, CORRECTION);
  const sum: Accumulator = new Float64Array(2);
  for (let i = first; i <= (withAnchor ? anchor - 1 : anchor); i++) {
    sum[0] = values.high[i]!;
    sum[1] = values.low[i]!;
    add(sum, step[i]!, 0);
    values.high[i] = sum[0]!;
    values.low[i] = sum[1]!;
  }
}

/** Refines until the largest residual, against the scale, no longer shrinks; the last one. */
function refine(
  solver: ClassSolver,
  base: DoubleDoubles,
  values: DoubleDoubles,
  scale: Float64Array,
  withAnchor: boolean,
  goal: number,
): number {
  const found: Residuals = { rest: new Float64Array(solver.anchor + 1), worst: 0 };
  residuals(solver, base, values, scale, withAnchor, found);
  let worst = found.worst;
  for (let step = 0; step < MOST_STEPS && worst > goal; step++) {
    correct(solver, values, found.rest, withAnchor);
    residuals(solver, base, values, scale, withAnchor, found);
    if (!(found.worst < worst / 2)) return Math.min(found.worst, worst);
    worst = found.worst;
  }
  return worst;
}

/** By place of the class, the high parts as they are and low parts 0. */
function widen(values: Float64Array): DoubleDoubles {
  return { high: values.slice(), low: new Float64Array(values.length) };
}

/**
 * The anchor's value cycleCost / cycleGain of class k, refined. `cost` and `gain` are by place; the gain's weight in
 * `solution` may be rough. Relative error bound about 2 u.
 */
export function refineRatio(
  solver: ClassSolver,
  cost: DoubleDoubles,
  gain: DoubleDoubles,
  solution: CycleSolution,
): Certified {
  const { first, anchor } = solver;
  const { gainWeight } = solution;
  const h = widen(solution.cycleCost.subarray(0, anchor + 1));
  const g = widen(solution.cycleGain.subarray(0, anchor + 1));
  const costError = refine(solver, cost, h, cost.high, false, GOAL);
  // Any positive scale will do; the unrefined gain is one, and what its weight belongs to.
  const scale = solution.cycleGain;
  const weight = gainWeight[anchor]!;
  const gainError = refine(solver, gain, g, scale, false, GOAL / Math.max(1, weight / scale[anchor]!));
  const excess = weightExcess(solver, scale, gainWeight, false);
  const ratio = divide(
    { high: h.high[anchor]!, low: h.low[anchor]! },
    { high: g.high[anchor]!, low: g.low[anchor]! },
  ).high;
  let sizes = 0;
  for (let i = first; i <= anchor; i++) {
    sizes += h.high[i]! + g.high[i]! + gainWeight[i]!;
    if (!(gainWeight[i]! >= 0) || !(scale[i]! >= SMALLEST || scale[i] === 0))
      return { value: ratio, bound: null };
  }
  const bound = boundRatio(costError, gainError, excess, weight, g.high[anchor]!, sizes);
  return { value: ratio, bound: bound === null ? null : bound + UNIT };
}

/** The least eta for which values + Q' weight - l weight <= eta values on the class. */
export function weightExcess(
  solver: ClassSolver,
  values: Float64Array,
  weight: Float64Array,
  withoutAnchor: boolean,
): number {
  const { chain, first, anchor } = solver;
  const { rowStart, rowAnchor, target, widestRow } = chain.shape;
  const error = (widestRow + 8) * UNIT;
  let excess = 0;
  for (let i = first; i <= (withoutAnchor ? anchor - 1 : anchor); i++) {
    let sum = values[i]!;
    for (let m = rowStart[i]!, to = rowAnchor[i]!; m < to; m++) sum += chain.move[m]! * weight[target[m]!]!;
    const lost = (i === anchor ? 1 : chain.out[i]!) * weight[i]!;
    if (values[i] === 0) {
      if (sum !== 0) return Number.POSITIVE_INFINITY;
      continue;
    }
    excess = Math.max(excess, (sum - lost + error * (sum + lost)) / values[i]!);
  }
  return excess;
}

/**
 * The values of the places of class k other than the anchor, whose value stands in `values`, refined in place; bounds
 * of their relative errors, the anchor's taken as exact, go into `bounds`. False where nothing is proven.
 */
export function refineOthers(
  solver: ClassSolver,
  cost: DoubleDoubles,
  values: Float64Array,
  weight: Float64Array,
  bounds: Float64Array,
): boolean {
  const { first, anchor } = solver;
  const wide = widen(values.subarray(0, anchor + 1));
  const scale = values.slice(0, anchor + 1);
  const worst = refine(solver, cost, wide, scale, true, GOAL);
  const excess = weightExcess(solver, scale, weight, true);
  let sizes = 0;
  for (let i = first; i < anchor; i++) {
    sizes += wide.high[i]! + weight[i]!;
    if (!(weight[i]! >= 0) || !(scale[i]! >= SMALLEST)) return false;
  }
  if (!boundOthers(first, anchor, worst, excess, sizes, wide.high, weight, bounds)) return false;
  for (let i = first; i < anchor; i++) {
    values[i] = wide.high[i]!;
    bounds[i]! += UNIT;
  }
  return true;
}
