/**
 * Variance of the number of steps until exit, as a sum of non-negative terms: each visit to a place adds the variance
 * of what the next step does to the mean that is left (law of total variance along the path; for martingale
 * differences these add up). In: a chain and the means by place. Out: the variances by place.
 *
 * Unlike E T^2 - (E T)^2 this keeps its digits when the steps are nearly certain. Its own noise is that of
 * differences of neighbouring means, squared, once a step; it matters for means beyond 1e18, where T is never nearly
 * certain and the second moment serves. Relative error about 1e-12.
 * Source: Kemeny & Snell (1960), *Finite Markov Chains*, 3.3.5, in the form of martingale differences.
 */
import type { Chain } from "./chain.ts";
import { UNIT } from "./double-double.ts";
import type { System } from "./solver.ts";
import { expectedTotals } from "./totals.ts";

/** Noise beyond this share of a variance is not put up with, where means are beyond `LARGE`. */
const TOLERANCE = 1e-12;
const LARGE = 1e15;

/** By place, the variance of the steps until exit; `steps` are the means, all finite. */
export function stepVariances(system: System, steps: Float64Array): Float64Array {
  const variances = expectedTotals(system, stepSpread(system.chain, steps));
  const largest = steps.reduce((a, b) => Math.max(a, b), 0);
  if (largest < LARGE) return variances;
  const noise = (8 * UNIT * largest) ** 2;
  let moments: Float64Array | null = null;
  for (let i = 0; i < steps.length; i++) {
    if (!(steps[i]! * noise > TOLERANCE * variances[i]!)) continue;
    // E T^2 = 2 (the expected total of the means along the path) - E T.
    moments ??= expectedTotals(system, steps);
    variances[i] = 2 * moments[i]! - steps[i]! - steps[i]! * steps[i]!;
  }
  return variances;
}

/** By place, the variance of 1 + the mean left after the next step. */
function stepSpread(chain: Chain, steps: Float64Array): Float64Array {
  const { size, rowStart, target } = chain.shape;
  const spread = new Float64Array(size);
  for (let i = 0; i < size; i++) {
    // After an exit nothing is left: 0 against the x - 1 expected. After a loop: x against x - 1.
    const left = steps[i]! - 1;
    let sum = chain.mark[i]! * left * left + chain.loop[i]!;
    for (let m = rowStart[i]!; m < rowStart[i + 1]!; m++) {
      const difference = steps[target[m]!]! - left;
      sum += chain.move[m]! * difference * difference;
    }
    spread[i] = sum;
  }
  return spread;
}
