/**
 * Sets of trials as bytes: one for each symbol, 1 for a member. A symbol is a combination of letters, one of each
 * alphabet, numbered so that the first declared alphabet varies slowest.
 * In: the sizes of the alphabets. Out: cylinders (all trials that have a given letter) and the algebra of sets.
 */
import type { TrialSet } from "../policy.ts";

export type Trials = {
  /** Letters of each alphabet. */
  readonly sizes: readonly number[];
  /** What a step to the next letter of an alphabet adds to the symbol. */
  readonly strides: readonly number[];
  readonly symbols: number;
};

/** The combinations a policy may have. */
export const MOST_SYMBOLS = 65_536;

/** The numbering of the combinations, or null when there are more than MOST_SYMBOLS. */
export function numberTrials(sizes: readonly number[]): Trials | null {
  const strides: number[] = [];
  let symbols = 1;
  for (const size of [...sizes].reverse()) {
    strides.unshift(symbols);
    symbols *= size;
    if (symbols > MOST_SYMBOLS) return null;
  }
  return { sizes, strides, symbols };
}

/** The letter of an alphabet in a symbol. */
function letterOf(trials: Trials, symbol: number, alphabet: number): number {
  return Math.floor(symbol / (trials.strides[alphabet] ?? 1)) % (trials.sizes[alphabet] ?? 1);
}

/** Adds to a set, in place, all trials that have a given letter. */
export function addLetter(set: TrialSet, trials: Trials, alphabet: number, letter: number): void {
  const stride = trials.strides[alphabet] ?? 1;
  const round = stride * (trials.sizes[alphabet] ?? 1);
  for (let start = letter * stride; start < trials.symbols; start += round)
    set.fill(1, start, start + stride);
}

/** Members of a set by letter of one alphabet. */
export function countByLetter(trials: Trials, set: TrialSet, alphabet: number): Uint32Array {
  const counts = new Uint32Array(trials.sizes[alphabet] ?? 1);
  for (let symbol = 0; symbol < set.length; symbol++) {
    if (set[symbol] === 1) counts[letterOf(trials, symbol, alphabet)]!++;
  }
  return counts;
}

export function allTrials(trials: Trials): TrialSet {
  return new Uint8Array(trials.symbols).fill(1);
}

/** Adds the members of `more` to a set, in place. */
export function addAll(set: TrialSet, more: TrialSet): void {
  for (let symbol = 0; symbol < set.length; symbol++) set[symbol]! |= more[symbol] ?? 0;
}

export function meet(a: TrialSet, b: TrialSet): TrialSet {
  return a.map((member, symbol) => member & (b[symbol] ?? 0));
}

export function without(a: TrialSet, b: TrialSet): TrialSet {
  return a.map((member, symbol) => member & ~(b[symbol] ?? 0));
}

export function isEmpty(set: TrialSet): boolean {
  return !set.includes(1);
}

export function areEqual(a: TrialSet, b: TrialSet): boolean {
  return a.length === b.length && a.every((member, symbol) => member === b[symbol]);
}

/** Whether membership hangs on the letter of one alphabet. */
export function dependsOn(trials: Trials, set: TrialSet, alphabet: number): boolean {
  const stride = trials.strides[alphabet] ?? 1;
  return set.some(
    (member, symbol) => letterOf(trials, symbol, alphabet) > 0 && member !== set[symbol - stride],
  );
}
