/**
 * Cycle iteration: Gauss-Seidel sweeps, in the order of the places, on y = c + Q' y for one class of a chain, Q'
 * being the moves within the class with those to the anchor left out. Only non-negative numbers are added where the
 * costs are non-negative. Every ninth sweep the last change is extrapolated (Aitken); that needs no proof, since
 * whatever comes out is certified afterwards (certificate.ts).
 *
 * Cost: one sweep looks at each move once; 5 to 60 sweeps for chains whose cycles are short.
 * Source: Stewart (1994), *Introduction to the Numerical Solution of Markov Chains*, 3.2 and 3.3.
 */
import type { Chain } from "./chain.ts";
import { type Contraction, carryCosts, readKept, spreadValues } from "./contraction.ts";

export type SweepLimits = {
  readonly most: number;
  /** Stop when no value seems further than ten times this from its limit, relative to itself. */
  readonly change: number;
};

/** As near as rounding lets the sweeps come. */
export const TO_THE_LAST: SweepLimits = { most: 200_000, change: 1e-14 };

const CYCLE = 9;
/** Changes this small are rounding. */
const NOISE = 4e-16;
/** An extrapolation beyond this many times the last change is held back. */
const LONGEST_STEP = 1e6;

/**
 * Solves y = c + Q' y for one or two costs at once on the class of the rows; costs and results are by place of the
 * chain. What stands in `intos` is the first guess. Returns the number of sweeps.
 */
export function solveBySweeps(
  chain: Chain,
  rows: Contraction,
  costs: readonly Float64Array[],
  intos: readonly Float64Array[],
  limits: SweepLimits,
): number {
  const lanes = costs.length === 2 ? 2 : 1;
  const carried = carryCosts(rows, costs);
  const values = new Float64Array(carried.length);
  for (let lane = 0; lane < lanes; lane++) readKept(rows, intos[lane]!, values, lanes, lane);
  const sweeps = sweep(rows, carried, values, lanes, limits);
  for (let lane = 0; lane < lanes; lane++)
    spreadValues(chain, rows, values, lanes, lane, costs[lane]!, intos[lane]!);
  return sweeps;
}

/**
 * Sweeps `lanes` systems at once, 1 or 2: values and costs of one kept place stand side by side; costs are divided by
 * what leaves the place. `values` is the first guess and becomes the result. Returns the number of sweeps.
 */
function sweep(
  rows: Contraction,
  scaled: Float64Array,
  values: Float64Array,
  lanes: 1 | 2,
  limits: SweepLimits,
): number {
  const once = lanes === 2 ? sweepTwo : sweepOne;
  const before = new Float64Array(values.length);
  // For an extrapolation: the change of the sweep before.
  const change = new Float64Array(values.length);
  let done = 0;
  while (done < limits.most) {
    const phase = done % CYCLE;
    const measured = done >= limits.most - 1 || done === 1 || phase >= CYCLE - 2;
    if (measured) before.set(values);
    once(rows, scaled, values);
    done++;
    if (!measured) continue;
    const largest = largestChange(before, values);
    if (largest <= NOISE) break;
    if (phase === CYCLE - 2) for (let i = 0; i < change.length; i++) change[i] = values[i]! - before[i]!;
    if (phase !== CYCLE - 1) continue;
    let factor = 1;
    for (let lane = 0; lane < lanes; lane++) {
      const further = stepFurther(change, before, values, lanes, lane);
      factor = Math.max(factor, further);
      if (largest * further > 10 * limits.change) extrapolate(further, before, values, lanes, lane);
    }
    if (largest <= limits.change && largest * factor <= 10 * limits.change) break;
  }
  return done;
}

function sweepOne(rows: Contraction, cost: Float64Array, values: Float64Array): void {
  const { rowStart, target, share } = rows;
  const size = rowStart.length - 1;
  let m = 0;
  for (let i = 0; i < size; i++) {
    let sum = cost[i]!;
    for (const to = rowStart[i + 1]!; m < to; m++) sum += share[m]! * values[target[m]!]!;
    values[i] = sum;
  }
}

function sweepTwo(rows: Contraction, cost: Float64Array, values: Float64Array): void {
  const { rowStart, target, share } = rows;
  const size = rowStart.length - 1;
  let m = 0;
  for (let i = 0; i < size; i++) {
    let one = cost[2 * i]!;
    let two = cost[2 * i + 1]!;
    for (const to = rowStart[i + 1]!; m < to; m++) {
      const probability = share[m]!;
      const at = 2 * target[m]!;
      one += probability * values[at]!;
      two += probability * values[at + 1]!;
    }
    values[2 * i] = one;
    values[2 * i + 1] = two;
  }
}

/** The largest change of a value, relative to itself. */
function largestChange(before: Float64Array, values: Float64Array): number {
  let largest = 0;
  for (let i = 0; i < before.length; i++) {
    const value = values[i]!;
    const change = Math.abs(value - before[i]!);
    if (change > largest * Math.abs(value)) largest = change / Math.abs(value);
  }
  return largest;
}

/**
 * How many times the last change is still to come in one lane, if each change is the same multiple of the one before:
 * the multiple that fits the last two best, each relative to the value. 0 where no such multiple is below 1.
 */
function stepFurther(
  earlier: Float64Array,
  before: Float64Array,
  values: Float64Array,
  lanes: number,
  lane: number,
): number {
  let [product, square] = [0, 0];
  for (let i = lane; i < values.length; i += lanes) {
    const value = values[i]!;
    if (value === 0) continue;
    const old = earlier[i]! / value;
    product += old * ((value - before[i]!) / value);
    square += old * old;
  }
  const ratio = product / square;
  return ratio > 0 && ratio < 1 ? Math.min(ratio / (1 - ratio), LONGEST_STEP) : 0;
}

/** Adds `further` times the last change to one lane; what would pass 0 stays. */
function extrapolate(
  further: number,
  before: Float64Array,
  values: Float64Array,
  lanes: number,
  lane: number,
): void {
  for (let i = lane; i < values.length; i += lanes) {
    const value = values[i]!;
    const next = value + further * (value - before[i]!);
    if (next > 0 || value <= 0) values[i] = next;
  }
}
