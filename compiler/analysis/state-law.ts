/**
 * Where a chain begins: a probability law over the states of an automaton, with what is proven of its averages. In:
 * states and weights. Out: the same by place of a chain, averages with intervals.
 */
import type { Shape } from "./chain.ts";

/** A probability, a mean or a number of times, and an interval that holds it. */
export type Estimate = { readonly value: number; readonly low: number; readonly high: number };

/** A law over states. */
export type StateLaw = {
  /** Every state that may have a weight; those the chain must be able to begin from. */
  readonly states: Int32Array;
  /** By the same index, not negative, adding up to 1. */
  readonly weights: Float64Array;
  /**
   * An interval that holds the average of values (positive, in the order of `states`) over the true law, of which
   * `weights` are an approximation; null for a law that is exactly its weights.
   */
  readonly bracket: ((values: Float64Array) => { readonly low: number; readonly high: number }) | null;
};

/** A law by place of a chain. */
export type StartLaw = { readonly places: Int32Array; readonly weights: Float64Array };

/** The law that is surely in one state. */
export function certainState(state: number): StateLaw {
  return { states: Int32Array.of(state), weights: Float64Array.of(1), bracket: null };
}

/** The law by place; the chain must have been shaped from the law's states. */
export function placeLaw(shape: Shape, law: StateLaw): StartLaw {
  return { places: law.states.map((state) => shape.placeOf[state]!), weights: law.weights };
}

/** The weighted sum of values by place. */
export function averageOver(law: StartLaw, values: Float64Array): number {
  let sum = 0;
  for (let s = 0; s < law.places.length; s++)
    if (law.weights[s] !== 0) sum += law.weights[s]! * values[law.places[s]!]!;
  return sum;
}
