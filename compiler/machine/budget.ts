/**
 * The state budget: how large an automaton may become, raw, before the compiler gives up on it. Exceeding it is not a
 * mistake of ours: the thrown value is caught where the machine is built and becomes the diagnostic `too_many_states`.
 */

export const DEFAULT_MOST_STATES = 2_000_000;

/** Words of memory that the states of one exploration may fill, whatever their number (96 MiB). */
export const MOST_STATE_WORDS = 24 * 1024 * 1024;

/** Thrown inside the machine room only. */
export class TooManyStates extends Error {
  /** How many states there would be, where a formula tells; else null: more than the budget were found. */
  readonly estimate: number | null;

  constructor(estimate: number | null = null) {
    super("too many states");
    this.estimate = estimate;
  }
}

/** Throws when a known number of states exceeds the budget. */
export function demandWithin(estimate: number, mostStates: number): void {
  if (estimate > mostStates) throw new TooManyStates(estimate);
}
