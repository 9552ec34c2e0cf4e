/**
 * The room's face: what there is to know of the number of trials until a machine's output first satisfies a
 * predicate. In: an automaton, the predicate, column probabilities, where the machine begins. Out: mean with a proven
 * bound, standard deviation, the chance that it ever happens, the law, quantiles; each found when first asked for and
 * then kept.
 *
 * `prepareRunLengths` is for one machine and predicate; its shapes, orders and compiled eliminations serve every
 * choice of probabilities, so that a sweep of a process costs little more than its arithmetic.
 */
import type Fraction from "fraction.js";
import { InternalError } from "../../grammar/internal-error.ts";
import type { Automaton } from "../machine/automaton.ts";
import { fillChain, type Marks, markTransitions } from "./chain.ts";
import { type DoubleDoubles, UNIT } from "./double-double.ts";
import { exitsOfKind, findHopeless, intoHopeless, isCertain } from "./endings.ts";
import { exactMean } from "./exact-mean.ts";
import { beginLaw } from "./law.ts";
import { type Means, meanSteps } from "./mean.ts";
import { keepPlans } from "./plans.ts";
import { type Distribution, distributionOf, type Quantile } from "./quantile.ts";
import { DEFAULT_OPTIONS, type Plan, prepareSystem, type SolverOptions, type System } from "./solver.ts";
import {
  averageOver,
  certainState,
  type Estimate,
  placeLaw,
  type StartLaw,
  type StateLaw,
} from "./state-law.ts";
import { expectedTotals } from "./totals.ts";
import { stepVariances } from "./variance.ts";
import { type KindOf, viewOf } from "./view.ts";

export type { Quantile } from "./quantile.ts";
export type { Estimate, StateLaw } from "./state-law.ts";

/** By column, not negative, adding up to 1: as double-doubles, and exactly where they are fractions known exactly. */
export type ColumnProbabilities = DoubleDoubles & { readonly exact?: readonly Fraction[] | null };

export type RunLengths = {
  /** Mean run length in trials; Infinity where the signal is not certain. */
  readonly mean: () => number;
  /**
   * A proven bound of the mean's relative error for the probabilities as given (and, from a long-run law, for that
   * law); null where none is proven or the mean is infinite.
   */
  readonly relativeErrorBound: () => number | null;
  /**
   * The mean as an exact fraction; null unless the probabilities are exact, the start is one state and the work is
   * small.
   */
  readonly exactMean: () => Fraction | null;
  /** Standard deviation in trials, right to 1e-10; Infinity where the signal is not certain. */
  readonly standardDeviation: () => number;
  /** The chance that it ever happens; exactly 1 where that is certain, exactly 0 where it is impossible. */
  readonly everProbability: () => number;
  /** The chance that it never does, with relative accuracy of its own. */
  readonly neverProbability: () => number;
  /** P(T <= n) for a whole n >= 0, with an interval that holds it. */
  readonly signalled: (n: number) => Estimate;
  /** The smallest n with P(T <= n) >= q, 0 < q <= 1; Infinity where the probability never comes to q. */
  readonly quantile: (q: Fraction) => Quantile;
  /** The chance that it happens, the first time with an event of the kind; right to about 1e-13 relative. */
  readonly endsIn: (isKind: (kind: number) => boolean) => number;
};

export type RunLengthSolver = {
  /** The run lengths under the probabilities, from the start or from a law over the states. */
  readonly under: (probabilities: ColumnProbabilities, start?: StateLaw) => RunLengths;
};

/**
 * A solver for runs that end at the first event: the first transition whose output `kindOf` makes one of. States, in
 * the law a run begins from, are those of `viewOf(automaton, kindOf)`.
 */
export function prepareRunLengths(
  automaton: Automaton,
  kindOf: KindOf,
  options: SolverOptions = DEFAULT_OPTIONS,
): RunLengthSolver {
  const view = viewOf(automaton, kindOf);
  const marks = markTransitions(view);
  const planFor = keepPlans(view, marks, true, options);
  const under = (probabilities: ColumnProbabilities, start: StateLaw = certainState(0)): RunLengths => {
    if (probabilities.high.length !== automaton.columns)
      throw new InternalError("a probability a column is due");
    const plan = planFor(probabilities, start.states);
    return describe({ automaton: view, marks, plan, probabilities, start, options });
  };
  return { under };
}

type Question = {
  readonly automaton: Automaton;
  readonly marks: Marks;
  readonly plan: Plan;
  readonly probabilities: ColumnProbabilities;
  readonly start: StateLaw;
  readonly options: SolverOptions;
};

/** Keeps the value of its first call. */
function once<T>(find: () => T): () => T {
  let found: { readonly value: T } | null = null;
  return () => {
    found ??= { value: find() };
    return found.value;
  };
}

function describe({ automaton, marks, plan, probabilities, start, options }: Question): RunLengths {
  const chain = fillChain(plan.shape, probabilities);
  const law = placeLaw(plan.shape, start);
  const single = law.places.length === 1 ? law.places[0]! : null;
  const exact = probabilities.exact ?? null;
  const system = prepareSystem(plan, chain, options);
  const hopeless = once(() => findHopeless(chain));
  const certain = once(() => isCertain(chain, hopeless(), law));
  const means = once(() => meanSteps(system, single));
  // The standard deviation needs the means of all places; the mean of one place is cheaper alone.
  const allMeans = once(() => (single === null ? means() : meanSteps(system, null)));
  const average = once(() => averageMean(means(), law, start));
  const distribution = once(
    (): Distribution => distributionOf(beginLaw(chain, law, hopeless()), law, exact, single),
  );
  const ever = once(() => averageOver(law, expectedTotals(system, chain.mark)));
  const never = once(() => averageNever(system, hopeless(), law));
  return {
    mean: () => (certain() ? average().value : Number.POSITIVE_INFINITY),
    relativeErrorBound: () => (certain() ? average().bound : null),
    exactMean: once(() => (exact && single !== null && certain() ? exactMean(plan, exact, single) : null)),
    standardDeviation: once(() =>
      certain() ? deviation(system, allMeans(), law) : Number.POSITIVE_INFINITY,
    ),
    everProbability: () => (certain() ? 1 : ever()),
    neverProbability: () => (certain() ? 0 : ever() === 0 ? 1 : never()),
    signalled: (n) => distribution().within(n),
    quantile: (q) => distribution().quantile(q),
    endsIn: (isKind) =>
      averageOver(
        law,
        expectedTotals(system, exitsOfKind(automaton, marks, chain, probabilities.high, isKind)),
      ),
  };
}

/** The mean over the law, with a bound; from a law known only by its brackets the bound takes these in. */
function averageMean(means: Means, law: StartLaw, start: StateLaw): { value: number; bound: number | null } {
  const value = averageOver(law, means.steps);
  let bound = 0;
  for (let s = 0; s < law.places.length; s++)
    if (law.weights[s] !== 0 || start.bracket) bound = Math.max(bound, means.bound[law.places[s]!]!);
  if (!start.bracket) {
    if (law.places.length > 1) bound += 2 * law.places.length * UNIT;
  } else {
    const { low, high } = start.bracket(pick(means.steps, law));
    const off = Math.max(high / value - 1, 1 - low / value) + 2 * UNIT;
    bound = off + bound * (1 + off);
  }
  return { value, bound: bound < 1 ? bound : null };
}

function pick(values: Float64Array, law: StartLaw): Float64Array {
  return Float64Array.from(law.places, (place) => values[place]!);
}

/** The chance never to exit; starts without hope never do. */
function averageNever(system: System, hopeless: Uint8Array, law: StartLaw): number {
  const chances = expectedTotals(system, intoHopeless(system.chain, hopeless));
  for (let i = 0; i < hopeless.length; i++) if (hopeless[i] === 1) chances[i] = 1;
  return averageOver(law, chances);
}

/** Standard deviation: the spread from each start, and that of the means over the starts. */
function deviation(system: System, means: Means, law: StartLaw): number {
  const variances = stepVariances(system, means.steps);
  const average = averageOver(law, means.steps);
  let sum = averageOver(law, variances);
  for (let s = 0; s < law.places.length; s++) {
    if (law.places.length === 1 || law.weights[s] === 0) continue;
    const off = means.steps[law.places[s]!]! - average;
    sum += law.weights[s]! * off * off;
  }
  return Math.sqrt(sum);
}
