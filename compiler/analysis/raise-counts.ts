/**
 * How often events come: their mean number among the first n steps, and their share in the long run. In: an
 * automaton, what an event is, column probabilities, where it begins. Out: values with intervals. Nothing is
 * absorbing here: the chain goes on through every event.
 *
 * Mean number: a_t = P^t s backwards, s the one-step chance; for all later times the chance lies between the least
 * and the largest a_M (of the phase), which close in on the rate; beyond M the sum grows by that much a step (as in
 * note [hazard bracket]). Chains that mix slowly are bounded by their advances too: n rate + a start's advance less
 * one between the least and the largest (closed-classes.ts); the narrower of the two intervals counts.
 */
import type { Automaton } from "../machine/automaton.ts";
import { type Chain, fillChain, markTransitions } from "./chain.ts";
import { combineRates, findClosedClasses } from "./closed-classes.ts";
import { type DoubleDoubles, UNIT } from "./double-double.ts";
import { findPhases } from "./period.ts";
import { keepPlans, type Plans } from "./plans.ts";
import { DEFAULT_OPTIONS, prepareSystem, type System } from "./solver.ts";
import {
  averageOver,
  certainState,
  type Estimate,
  placeLaw,
  type StartLaw,
  type StateLaw,
} from "./state-law.ts";
import { stepBack } from "./steps.ts";
import { type KindOf, viewOf } from "./view.ts";

/** Looks at moves that one number may take, and steps. */
const MOST_WORK = 5e8;
const MOST_STEPS = 2e6;
/** Steps between two looks at the bracket. */
const STRIDE = 8;
/** An interval this narrow, relative to its value, needs no better one. */
const NARROW = 1e-12;

/** Plans of the full chains, by view: they serve every choice of probabilities. */
const plansOf = new WeakMap<Automaton, Plans>();

/**
 * The long-run share of steps with an event, as `kindOf` tells. The interval is proven where all states end in one
 * closed class (with several, right to 1e-12), and 1e-12 wide or less for most chains.
 */
export function raiseRate(
  automaton: Automaton,
  kindOf: KindOf,
  probabilities: DoubleDoubles,
  start: StateLaw = certainState(0),
): Estimate {
  const { system, law } = prepare(automaton, kindOf, probabilities, start);
  return combineRates(system, law, findClosedClasses(system));
}

/** The mean number of steps with an event among the first n (whole, >= 0), with a proven interval. */
export function countRaises(
  automaton: Automaton,
  kindOf: KindOf,
  probabilities: DoubleDoubles,
  n: number,
  start: StateLaw = certainState(0),
): Estimate {
  const { system, law } = prepare(automaton, kindOf, probabilities, start);
  const far = countByAdvances(system, law, n);
  if (far.high - far.low <= NARROW * far.low) return far;
  const near = countBySteps(system.chain, law, n);
  const low = Math.max(far.low, near.low);
  const high = Math.max(low, Math.min(far.high, near.high));
  return { value: low + (high - low) / 2, low, high };
}

type Prepared = { readonly system: System; readonly law: StartLaw };

function prepare(
  automaton: Automaton,
  kindOf: KindOf,
  probabilities: DoubleDoubles,
  start: StateLaw,
): Prepared {
  const view = viewOf(automaton, kindOf);
  const plans = plansOf.get(view) ?? keepPlans(view, markTransitions(view), false, DEFAULT_OPTIONS);
  plansOf.set(view, plans);
  const plan = plans(probabilities, start.states);
  const system = prepareSystem(plan, fillChain(plan.shape, probabilities));
  return { system, law: placeLaw(plan.shape, start) };
}

/**
 * The number by the rate and the advances; from nothing to all where the law does not begin in the one closed class.
 */
function countByAdvances(system: System, law: StartLaw, n: number): Estimate {
  const { classStart } = system.chain.shape;
  const closed = findClosedClasses(system);
  const only = closed[0];
  const unknown = { value: n / 2, low: 0, high: n };
  if (closed.length !== 1 || !only || only.bound === null) return unknown;
  const [first, end] = [classStart[only.k]!, classStart[only.k + 1]!];
  if (law.places.some((place, s) => law.weights[s] !== 0 && (place < first || place >= end))) return unknown;
  let [least, largest] = [0, 0];
  for (let i = first; i < end; i++) {
    least = Math.min(least, only.advances[i]!);
    largest = Math.max(largest, only.advances[i]!);
  }
  const slack = 2 * only.advanceError;
  const base = averageOver(law, only.advances);
  const low = Math.max(0, n * only.rate * (1 - only.bound - 2 * UNIT) + base - largest - slack);
  const high = Math.min(n, n * only.rate * (1 + only.bound + 2 * UNIT) + base - least + slack);
  return { value: low + (high - low) / 2, low, high };
}

/** The number step by step, until the bracket closes or the work is too much. */
function countBySteps(chain: Chain, law: StartLaw, n: number): Estimate {
  const { period, phaseOf } = findPhases(chain.shape, law.places);
  const { size, widestRow } = chain.shape;
  const most = Math.min(MOST_STEPS, Math.max(2 * period + 2000, MOST_WORK / (chain.move.length + size)));
  let values = chain.mark.slice();
  let spare = new Float64Array(size);
  let [sum, low, high, steps, window] = [0, 0, 0, 0, 0];
  const errorAt = (t: number): number => (t + 3) * (widestRow + 4) * UNIT;
  for (; steps < n; steps++) {
    if (window === 0 && steps % Math.max(STRIDE, period) === 0) {
      const now = spread(values, phaseOf, law, period);
      if (steps >= most || now.high - now.low <= errorAt(steps) * now.high) window = period;
    }
    if (window > 0) {
      // From here on every step of this phase adds between the least and the largest.
      const bracket = spread(values, phaseOf, law, period);
      const times = Math.ceil((n - steps) / period);
      low += times * bracket.low;
      high += times * bracket.high;
      if (--window === 0) break;
    } else {
      sum += averageOver(law, values);
    }
    stepBack(chain, values, spare, 1);
    [values, spare] = [spare, values];
  }
  const error = errorAt(steps);
  const whole = { low: (sum + low) * (1 - error), high: (sum + high) * (1 + error) };
  return { value: whole.low + (whole.high - whole.low) / 2, ...whole };
}

/** The weighted least and largest value over the phases the law begins in. */
function spread(
  values: Float64Array,
  phaseOf: Int32Array,
  law: StartLaw,
  period: number,
): { low: number; high: number } {
  const least = new Float64Array(period).fill(Number.POSITIVE_INFINITY);
  const largest = new Float64Array(period);
  for (let i = 0; i < values.length; i++) {
    const phase = phaseOf[i]!;
    if (values[i]! < least[phase]!) least[phase] = values[i]!;
    if (values[i]! > largest[phase]!) largest[phase] = values[i]!;
  }
  const bounds = { low: 0, high: 0 };
  for (let s = 0; s < law.places.length; s++) {
    const phase = phaseOf[law.places[s]!]!;
    if (law.weights[s] === 0) continue;
    bounds.low += law.weights[s]! * least[phase]!;
    bounds.high += law.weights[s]! * largest[phase]!;
  }
  return bounds;
}
