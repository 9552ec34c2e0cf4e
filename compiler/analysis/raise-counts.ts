/**
 * How often outputs of a kind come: their mean number among the first n steps, and their share in the long run. In: an
 * automaton, the kind, column probabilities, where it begins. Out: values with intervals. Nothing is absorbing here: the
 * chain goes on through every output.
 *
 * Rate: in each closed class, gains of a cycle over steps of a cycle (see note [cycle certificate]), both sums of non-negative
 * terms; several closed classes count with the chance to end in each. Mean number: a_t = P^t s backwards, s the one-step
 * chance; for all later times the chance lies between the least and the largest a_M (of the phase), which close in on the rate;
 * beyond M the sum grows by that much a step.
 * Source: renewal reward theorem, Kemeny & Snell (1960), *Finite Markov Chains*, 6.1; the bracket as in note [hazard bracket].
 */
import type { Automaton } from "../machine/automaton.ts";
import { certifyCycle } from "./certificate.ts";
import { fillChain, markTransitions } from "./chain.ts";
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
import { expectedTotals } from "./totals.ts";
import { type KindOf, viewOf } from "./view.ts";

const MOST_WORK = 2e9;
const MOST_STEPS = 2e6;
/** Steps between two looks at the bracket. */
const STRIDE = 8;

/** Plans of the full chains, by view: they serve every choice of probabilities. */
const plansOf = new WeakMap<Automaton, Plans>();

/** The long-run share of steps with an event, as `kindOf` tells; the interval is proven, and 1e-12 wide or less for most chains. */
export function raiseRate(
  automaton: Automaton,
  kindOf: KindOf,
  probabilities: DoubleDoubles,
  start: StateLaw = certainState(0),
): Estimate {
  const { system, law, raise } = prepare(automaton, kindOf, probabilities, start);
  const rates = classRates(system, raise);
  return combineRates(system, law, rates);
}

/** The mean number of steps with an event among the first n (whole, >= 0). */
export function countRaises(
  automaton: Automaton,
  kindOf: KindOf,
  probabilities: DoubleDoubles,
  n: number,
  start: StateLaw = certainState(0),
): Estimate {
  const { system, law, raise } = prepare(automaton, kindOf, probabilities, start);
  const { chain } = system;
  const { period, phaseOf } = findPhases(chain.shape, law.places);
  const { size, widestRow } = chain.shape;
  const most = Math.min(MOST_STEPS, Math.max(2 * period + 2000, MOST_WORK / (chain.move.length + size)));
  let values = raise.slice();
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

type Prepared = { readonly system: System; readonly law: StartLaw; readonly raise: Float64Array };

function prepare(
  automaton: Automaton,
  kindOf: KindOf,
  probabilities: DoubleDoubles,
  start: StateLaw,
): Prepared {
  const view = viewOf(automaton, kindOf);
  const marks = markTransitions(view);
  const plans = plansOf.get(view) ?? keepPlans(view, marks, false, DEFAULT_OPTIONS);
  plansOf.set(view, plans);
  const plan = plans(probabilities, start.states);
  const chain = fillChain(plan.shape, probabilities);
  return { system: prepareSystem(plan, chain), law: placeLaw(plan.shape, start), raise: chain.mark };
}

/** By class: the rate where it is closed, with a bound of its relative error; null where it can be left. */
function classRates(system: System, raise: Float64Array): ({ value: number; bound: number | null } | null)[] {
  const { chain } = system;
  const { classStart, classCount, exitSet } = chain.shape;
  const rates: ({ value: number; bound: number | null } | null)[] = [];
  for (let k = 0; k < classCount; k++) {
    const first = classStart[k]!;
    const end = classStart[k + 1]!;
    let [leaves, raises] = [false, false];
    for (let i = first; i < end; i++) {
      if (exitSet[i] !== 0) leaves = true;
      if (raise[i] !== 0) raises = true;
    }
    if (leaves) rates.push(null);
    else if (!raises) rates.push({ value: 0, bound: 0 });
    else rates.push(closedRate(system, k, raise));
  }
  return rates;
}

function closedRate(system: System, k: number, raise: Float64Array): { value: number; bound: number | null } {
  const { chain } = system;
  const { size } = chain.shape;
  const first = chain.shape.classStart[k]!;
  const anchor = chain.shape.classStart[k + 1]! - 1;
  if (first === anchor) return { value: raise[anchor]!, bound: UNIT };
  const solver = system.solverOf(k);
  const ones = new Float64Array(size).fill(1);
  const cycleCost = ones.slice();
  const cycleGain = raise.slice();
  solver.solveCycles(ones, cycleCost, raise, cycleGain);
  const gainWeight = cycleGain.slice();
  solver.solveCycle(cycleGain, gainWeight, { most: 60, change: 0.01 });
  const bound = certifyCycle(chain, k, ones, raise, { cycleCost, cycleGain, gainWeight });
  return {
    value: cycleGain[anchor]! / cycleCost[anchor]!,
    bound: bound === null ? null : bound * (1 + 2 * bound) + 2 * UNIT,
  };
}

function combineRates(
  system: System,
  law: StartLaw,
  rates: readonly ({ value: number; bound: number | null } | null)[],
): Estimate {
  const closed = rates.flatMap((rate, k) => (rate ? [{ ...rate, k }] : []));
  let [value, bound] = [0, 0];
  for (const { value: rate, bound: own, k } of closed) {
    if (rate === 0) continue;
    const share = closed.length === 1 ? 1 : averageOver(law, endChances(system, k));
    value += rate * share;
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
