/**
 * What a computed solution of a class is worth, whoever computed it: relative error bounds from residuals.
 *
 * note [cycle certificate]
 * Q' is Q within the class without the moves to the anchor r; l_i the own sum of all moves but the loop, l_r = 1;
 * c > 0 the cost of a visit, e >= 0 the gain (what ends the cycles); N = (diag(l) - Q')^-1 >= 0; h = Nc, g = Ne;
 * the anchor's value is x_r = h_r / g_r.
 * For ANY h~, with residual s = c + Q'h~ - l h~: h~ - h = -N s, hence |h~ - h| <= N|s| <= d_h N c = d_h h with
 * d_h = max |s_i| / c_i.
 * For ANY g~ >= 0 likewise |g~_r - g_r| <= d_g (N g~)_r with d_g = max |s_i| / g~_i; and for ANY v >= 0 that
 * leaves g~ + Q'v - l v <= eta g~ with eta < 1, N g~ <= v / (1 - eta). So e_g = d_g v_r / ((1 - eta) g~_r) bounds
 * |g~_r - g_r| / g~_r, and d_h + e_g (1 + d_h) the relative error of h~_r / g~_r.
 * The other places, x_r given: as for g, with costs c_i + q_ir x_r.
 * Residuals are computed in floating point; with w moves in a row they are wrong by at most k = (w + 4) u times the
 * sum of the sizes, which is added to each.
 *
 * Where g~_i = 0 the residuals must vanish. Underflow is not covered: values below 1e-270 are refused.
 */
import type { Chain } from "./chain.ts";
import { UNIT } from "./double-double.ts";

/** The two systems of a cycle and the vector that weighs the second, all by place. */
export type CycleSolution = {
  /** Cost of a cycle from here to the anchor, or out. */
  readonly cycleCost: Float64Array;
  /** Gain of the same. */
  readonly cycleGain: Float64Array;
  /** Roughly N cycleGain. */
  readonly gainWeight: Float64Array;
};

/** Values below this are not certified: their products would lose digits. */
export const SMALLEST = 1e-270;
/** Covers the rounding of the bounds' own arithmetic. */
const OUTWARD = 1 + 1e-9;

/** The relative error of evaluating one residual, in units of the sizes added. */
function residualError(chain: Chain): number {
  return (chain.shape.widestRow + 4) * UNIT * OUTWARD;
}

/**
 * A bound of the relative error of cycleCost[anchor] / cycleGain[anchor] for class k, or null where none can be
 * proven. `cost` (positive) and `gain` (not negative) are by place.
 */
export function certifyCycle(
  chain: Chain,
  k: number,
  cost: Float64Array,
  gain: Float64Array,
  solution: CycleSolution,
): number | null {
  const { classStart, rowStart, rowAnchor, target } = chain.shape;
  const { move, out } = chain;
  const { cycleCost: h, cycleGain: g, gainWeight: v } = solution;
  const anchor = classStart[k + 1]! - 1;
  const error = residualError(chain);
  let [costError, gainError, excess, sizes] = [0, 0, 0, 0];
  for (let i = classStart[k]!; i <= anchor; i++) {
    let sumCost = cost[i]!;
    let sumGain = gain[i]!;
    let sumWeight = g[i]!;
    for (let m = rowStart[i]!, to = rowAnchor[i]!; m < to; m++) {
      const probability = move[m]!;
      const j = target[m]!;
      sumCost += probability * h[j]!;
      sumGain += probability * g[j]!;
      sumWeight += probability * v[j]!;
    }
    const leaving = i === anchor ? 1 : out[i]!;
    const lostCost = leaving * h[i]!;
    const lostGain = leaving * g[i]!;
    const lostWeight = leaving * v[i]!;
    costError = Math.max(costError, (Math.abs(sumCost - lostCost) + error * (sumCost + lostCost)) / cost[i]!);
    if (g[i]! >= SMALLEST) {
      gainError = Math.max(gainError, (Math.abs(sumGain - lostGain) + error * (sumGain + lostGain)) / g[i]!);
      excess = Math.max(excess, (sumWeight - lostWeight + error * (sumWeight + lostWeight)) / g[i]!);
    } else if (g[i] !== 0 || sumGain !== 0 || sumWeight !== 0) return null;
    sizes += h[i]! + g[i]! + v[i]!;
    if (v[i]! < 0 || h[i]! < 0) return null;
  }
  return boundRatio(costError, gainError, excess, v[anchor]!, g[anchor]!, sizes);
}

/** The relative error of the ratio from its parts; null unless proven. */
export function boundRatio(
  costError: number,
  gainError: number,
  excess: number,
  weight: number,
  gain: number,
  sizes: number,
): number | null {
  if (!(excess < 1) || !Number.isFinite(sizes) || !(gain >= SMALLEST)) return null;
  const share = (gainError * weight) / ((1 - excess) * gain);
  const bound = (costError + share * (1 + costError)) * OUTWARD;
  return bound < 1 ? bound : null;
}

/**
 * Bounds of the relative errors of `values` at the places of class k other than the anchor, given the anchor's, into
 * `bounds`; `weight` is roughly N values. False, and nothing proven, where a bound is 1 or more.
 */
export function certifyOthers(
  chain: Chain,
  k: number,
  cost: Float64Array,
  values: Float64Array,
  weight: Float64Array,
  bounds: Float64Array,
): boolean {
  const { classStart, rowStart, rowAnchor, rowLeave, target } = chain.shape;
  const { move, out } = chain;
  const first = classStart[k]!;
  const anchor = classStart[k + 1]! - 1;
  const error = residualError(chain);
  let [worst, excess, sizes] = [0, 0, 0];
  for (let i = first; i < anchor; i++) {
    let sum = cost[i]!;
    let sumWeight = values[i]!;
    for (let m = rowStart[i]!, to = rowLeave[i]!; m < to; m++) {
      sum += move[m]! * values[target[m]!]!;
      if (m < rowAnchor[i]!) sumWeight += move[m]! * weight[target[m]!]!;
    }
    const lost = out[i]! * values[i]!;
    const lostWeight = out[i]! * weight[i]!;
    worst = Math.max(worst, (Math.abs(sum - lost) + error * (sum + lost)) / values[i]!);
    excess = Math.max(excess, (sumWeight - lostWeight + error * (sumWeight + lostWeight)) / values[i]!);
    sizes += values[i]! + weight[i]!;
    if (!(values[i]! >= SMALLEST) || !(weight[i]! >= 0)) return false;
  }
  return boundOthers(first, anchor, worst, excess, sizes, values, weight, bounds);
}

/** The bound of each place from the common parts. */
export function boundOthers(
  first: number,
  anchor: number,
  worst: number,
  excess: number,
  sizes: number,
  values: Float64Array,
  weight: Float64Array,
  bounds: Float64Array,
): boolean {
  if (!(excess < 1) || !Number.isFinite(sizes)) return false;
  const factor = (worst / (1 - excess)) * OUTWARD;
  for (let i = first; i < anchor; i++) if (!((factor * weight[i]!) / values[i]! < 0.5)) return false;
  for (let i = first; i < anchor; i++) {
    // The difference is bounded relative to the computed value; the error is meant relative to the true one.
    const bound = (factor * weight[i]!) / values[i]!;
    bounds[i] = bound / (1 - bound);
  }
  return true;
}
