/**
 * The conditional long-run state: the limit of the law of the state after t steps given no exit until then, averaged
 * over the phases where the chain is periodic (each place in a block counts the same). In: an automaton, what ends a
 * run, column probabilities. Out: the law over the states, with a proven interval for the average of any function of
 * the state.
 *
 * note [long-run bracket]
 * Forwards from the start, normalised each period, until the masses settle. For a positive
 * function f of the state let u_j = Q^j 1 and w_j = Q^j f: the average of f after t + j steps, given no exit until
 * then, is a weighted mean of w_j / u_j over the places (of the phase of t), for every t; so is its limit. Backwards
 * the ratios close in on each other as the law forgets where it was.
 *
 * A limit that is only crept up to like 1/t (stages that follow one another with equal rates) is of no use, and
 * refused.
 * Source: quasi-stationary laws, Darroch & Seneta (1965), J. Appl. Probab. 2:88.
 */
import type { Automaton } from "../machine/automaton.ts";
import { type Chain, fillChain, findSkeleton, markTransitions, shapeChain, usableColumns } from "./chain.ts";
import { type DoubleDoubles, UNIT } from "./double-double.ts";
import { findPhases, type Phases } from "./period.ts";
import type { StateLaw } from "./state-law.ts";
import { stepBack, stepForth } from "./steps.ts";
import { type KindOf, viewOf } from "./view.ts";

/** Looks at moves that finding one limit may take, and steps. */
const MOST_WORK = 6e8;
const MOST_STEPS = 2e6;
/** The masses have settled when they change by less than this in a period, all together. */
const SETTLED = 4e-15;
/** A change this small that no longer shrinks is rounding. */
const ROUNDING = 1e-12;

/**
 * The conditional long-run state from the start for runs that end at the first event `kindOf` makes of an output, or
 * why there is none. States are those of `viewOf(automaton, kindOf)`.
 */
export function longRunLaw(
  automaton: Automaton,
  kindOf: KindOf,
  probabilities: DoubleDoubles,
): { readonly law: StateLaw } | { readonly reason: string } {
  const view = viewOf(automaton, kindOf);
  const skeleton = findSkeleton(
    view,
    markTransitions(view),
    true,
    Int32Array.of(0),
    usableColumns(probabilities),
  );
  // No class is solved here: any anchors do.
  const shape = shapeChain(skeleton, skeleton.classes.entry);
  const chain = fillChain(shape, probabilities);
  const start = shape.placeOf[0]!;
  const phases = findPhases(shape, Int32Array.of(start));
  const masses = settle(chain, start, phases.period);
  if (typeof masses === "string") return { reason: masses };
  const law = { states: shape.stateOf, weights: masses };
  return { law: { ...law, bracket: (values) => bracketAverage(chain, phases, values) } };
}

/** The settled masses by place, averaged over a period; or why they do not settle. */
function settle(chain: Chain, start: number, period: number): Float64Array | string {
  const { size } = chain.shape;
  let masses = new Float64Array(size);
  let following = new Float64Array(size);
  masses[start] = 1;
  const before = masses.slice();
  const most = Math.min(MOST_STEPS, Math.max(4 * period + 2000, MOST_WORK / (chain.move.length + size)));
  let lastChange = Number.POSITIVE_INFINITY;
  for (let steps = 0; steps < most; ) {
    for (let j = 0; j < period; j++, steps++) {
      stepForth(chain, masses, following);
      if (!normalise(following)) return "a signal is certain within a limited number of trials";
      [masses, following] = [following, masses];
    }
    let change = 0;
    for (let i = 0; i < size; i++) change += Math.abs(masses[i]! - before[i]!);
    if (change <= SETTLED || (change <= ROUNDING && change >= lastChange))
      return averageOfPeriod(chain, masses, period);
    lastChange = change;
    before.set(masses);
  }
  return "the state settles too slowly for its limit to be of use";
}

/** Scales to sum 1; false where nothing is left. */
function normalise(masses: Float64Array): boolean {
  let sum = 0;
  for (const mass of masses) sum += mass;
  if (!(sum > 0)) return false;
  for (let i = 0; i < masses.length; i++) masses[i]! /= sum;
  return true;
}

/** The mean of the normalised masses over a period from these on. */
function averageOfPeriod(chain: Chain, masses: Float64Array, period: number): Float64Array {
  let current = masses.slice();
  let following = new Float64Array(masses.length);
  const sums = new Float64Array(masses.length);
  for (let j = 0; j < period; j++) {
    for (let i = 0; i < sums.length; i++) sums[i]! += current[i]! / period;
    stepForth(chain, current, following);
    normalise(following);
    [current, following] = [following, current];
  }
  return sums;
}

/** See note [long-run bracket]; the mean over a period of the brackets of its steps. */
function bracketAverage(
  chain: Chain,
  { period, phaseOf }: Phases,
  values: Float64Array,
): { low: number; high: number } {
  const { size } = chain.shape;
  let pair = new Float64Array(2 * size);
  let spare = new Float64Array(2 * size);
  for (let i = 0; i < size; i++) {
    pair[2 * i] = 1;
    pair[2 * i + 1] = values[i]!;
  }
  const most = Math.min(MOST_STEPS, Math.max(2 * period, MOST_WORK / (2 * (chain.move.length + size))));
  let best = { low: 0, high: Number.POSITIVE_INFINITY };
  for (let steps = 0; steps < most; ) {
    const sums = { low: 0, high: 0 };
    for (let j = 0; j < period; j++, steps++) {
      const { low, high } = ratios(pair, phaseOf);
      const error = 2 * (steps + 2) * (chain.shape.widestRow + 3) * UNIT;
      sums.low += (low * (1 - error)) / period;
      sums.high += (high * (1 + error)) / period;
      stepBack(chain, pair, spare, 2);
      [pair, spare] = [spare, pair];
    }
    if (sums.high - sums.low < best.high - best.low) best = sums;
    // What rounding alone leaves open: more steps would not help.
    const error = 2 * (steps + 2) * (chain.shape.widestRow + 3) * UNIT;
    if (best.high - best.low <= 3 * error * best.high) return best;
    rescale(pair);
  }
  return best;
}

/** The least and the largest ratio over the places of phase 0 that may still be alive. */
function ratios(pair: Float64Array, phaseOf: Int32Array): { low: number; high: number } {
  let [low, high] = [Number.POSITIVE_INFINITY, 0];
  for (let i = 0; i < phaseOf.length; i++) {
    if (phaseOf[i] !== 0 || pair[2 * i] === 0) continue;
    const ratio = pair[2 * i]! < 1e-280 ? Number.NaN : pair[2 * i + 1]! / pair[2 * i]!;
    if (Number.isNaN(ratio)) return { low: 0, high: Number.POSITIVE_INFINITY };
    if (ratio < low) low = ratio;
    if (ratio > high) high = ratio;
  }
  return { low, high };
}

/** Keeps the numbers away from underflow; a power of two changes no digit. */
function rescale(pair: Float64Array): void {
  let largest = 0;
  for (let i = 0; i < pair.length; i += 2) if (pair[i]! > largest) largest = pair[i]!;
  if (largest > 1e-100 || largest === 0) return;
  const factor = 2 ** -Math.floor(Math.log2(largest));
  for (let i = 0; i < pair.length; i++) pair[i]! *= factor;
}
