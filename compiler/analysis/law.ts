/**
 * The law of the number of steps T until exit: P(T <= n) for any n, from given starting places, with proven
 * intervals.
 *
 * note [hazard bracket]
 * Backwards, with sums of non-negative terms only: u_t = Q^t 1 (alive after t steps) and w_t =
 * Q^t F_d (exit within the d steps after), d the chain's period. For every start and every later time n >= M, n = M
 * (mod d), the chance of an exit within d steps given none until n is a weighted mean of w_M / u_M over the places of
 * the phase of the start; so it lies between their minimum and maximum, which close in on each other geometrically.
 * Beyond M the law is therefore geometric between two known ratios, and P(T <= n) at n = 1e15 costs no more than at n
 * = M. Small probabilities are sums, never 1 - P(T > n). Where a place can never exit (a leak), leaving for it counts
 * as an end of its own kind, and the share of exits among ends is bracketed in the same way.
 * Rounding: after t steps every number is wrong by at most (t + 1)(w + 3) u relative, w the widest row; that widens
 * everything stated.
 *
 * Chains whose bracket closes only like 1/t (stages that follow one another with equal rates) are iterated to the
 * limit of work; beyond it the intervals are wide, and say so. (Small ones have powers.ts for that.)
 * Source: bounds of the Perron root by ratios, Collatz (1942), Math. Z. 48:221; their use for the law is proven
 * above.
 */
import type { Chain } from "./chain.ts";
import { UNIT } from "./double-double.ts";
import { findPhases } from "./period.ts";
import { MOST_PLACES } from "./powers.ts";
import type { Estimate, StartLaw } from "./state-law.ts";
import { stepBack } from "./steps.ts";

/** The starts of one phase, what is known of them step by step, and the bracket they enter. */
type Strand = {
  readonly phase: number;
  readonly places: Int32Array;
  readonly weights: Float64Array;
  /** By step t: the chance to be alive after t steps, to have exited within t. */
  readonly alive: number[];
  readonly exited: number[];
  /** By t - M: the least and largest end hazard, and share of exits among ends. */
  readonly tail: Bracket[];
};

type Bracket = { low: number; high: number; shareLow: number; shareHigh: number };

/** A law under way: grows as far as it is asked for, until the bracket is closed. */
export type Law = {
  readonly chain: Chain;
  readonly period: number;
  readonly phaseOf: Int32Array;
  readonly strands: readonly Strand[];
  /** By place, side by side: alive, exit within a period. */
  values: Float64Array;
  spare: Float64Array;
  /** By place: gone to a place without exit within a period; null where there is none. */
  leak: Float64Array | null;
  /** Steps done. */
  steps: number;
  /** The step from which on the tail holds; -1 while the bracket is open. */
  closed: number;
  readonly patience: number;
};

/** Looks at moves one law may take. */
const MOST_WORK = 4e9;
const MOST_STEPS = 4e6;
const STEPS_OF_SMALL = 20_000;
/** Steps between two looks at the bracket. */
const STRIDE = 8;
/** Numbers below this have lost digits. */
const TINY = 1e-280;
const NO_BRACKET: Bracket = { low: 0, high: 0, shareLow: 1, shareHigh: 1 };

/**
 * The law of T from `start`. `hopeless` marks the places from which no exit can be reached; `patience` is the number
 * of steps after which the bracket is taken as it is, open or not.
 */
export function beginLaw(
  chain: Chain,
  start: StartLaw,
  hopeless: Uint8Array,
  patience: number = patienceFor(chain),
): Law {
  const { size } = chain.shape;
  const { period, phaseOf } = findPhases(chain.shape, start.places);
  const values = new Float64Array(2 * size);
  const leaky = hopeless.includes(1);
  for (let i = 0; i < size; i++) values[2 * i] = hopeless[i] === 1 ? 0 : 1;
  const strands = splitStart(start, phaseOf);
  const law: Law = {
    chain,
    period,
    phaseOf,
    strands,
    values,
    spare: new Float64Array(2 * size),
    leak: null,
    steps: 0,
    closed: -1,
    patience,
  };
  const exits = withinPeriod(chain, chain.mark, period, strands, true);
  for (let i = 0; i < size; i++) values[2 * i + 1] = exits[i]!;
  if (leaky) law.leak = withinPeriod(chain, leaving(chain, hopeless), period, strands, false);
  return law;
}

function patienceFor({ move, shape }: Chain): number {
  // Small chains have their powers to fall back on.
  const most = shape.size <= MOST_PLACES ? STEPS_OF_SMALL : MOST_STEPS;
  return Math.min(most, Math.max(2000, Math.floor(MOST_WORK / (move.length + shape.size))));
}

/** The start law by phase. */
function splitStart(start: StartLaw, phaseOf: Int32Array): Strand[] {
  const byPhase = new Map<number, { places: number[]; weights: number[] }>();
  for (let s = 0; s < start.places.length; s++) {
    if (start.weights[s] === 0) continue;
    const phase = phaseOf[start.places[s]!]!;
    const strand = byPhase.get(phase) ?? { places: [], weights: [] };
    byPhase.set(phase, strand);
    strand.places.push(start.places[s]!);
    strand.weights.push(start.weights[s]!);
  }
  return [...byPhase].map(([phase, { places, weights }]) => ({
    phase,
    places: Int32Array.from(places),
    weights: Float64Array.from(weights),
    alive: [],
    exited: [],
    tail: [],
  }));
}

/** By place, the probability of a move to a hopeless place; 0 at those. */
function leaving(chain: Chain, hopeless: Uint8Array): Float64Array {
  const { rowStart, target, size } = chain.shape;
  const sums = new Float64Array(size);
  for (let i = 0; i < size; i++) {
    if (hopeless[i] === 1) continue;
    for (let m = rowStart[i]!; m < rowStart[i + 1]!; m++)
      if (hopeless[target[m]!] === 1) sums[i]! += chain.move[m]!;
  }
  return sums;
}

/**
 * By place, the chance that an end of one-step chance `once` comes within `period` steps; recorded in the strands if
 * asked.
 */
function withinPeriod(
  chain: Chain,
  once: Float64Array,
  period: number,
  strands: readonly Strand[],
  record: boolean,
): Float64Array {
  let current = new Float64Array(once.length);
  let following = new Float64Array(once.length);
  for (let j = 0; j < period; j++) {
    if (record) for (const strand of strands) strand.exited.push(weighed(strand, current, 1, 0));
    stepBack(chain, current, following, 1);
    for (let i = 0; i < once.length; i++) following[i]! += once[i]!;
    [current, following] = [following, current];
  }
  return current;
}

function weighed(strand: Strand, values: Float64Array, lanes: number, lane: number): number {
  let sum = 0;
  for (let s = 0; s < strand.places.length; s++)
    sum += strand.weights[s]! * values[lanes * strand.places[s]! + lane]!;
  return sum;
}

/** Records the present step and takes the next. */
function advance(law: Law): void {
  for (const strand of law.strands) {
    strand.alive.push(weighed(strand, law.values, 2, 0));
    strand.exited.push(strand.exited[law.steps]! + weighed(strand, law.values, 2, 1));
  }
  stepBack(law.chain, law.values, law.spare, 2);
  [law.values, law.spare] = [law.spare, law.values];
  if (law.leak) {
    const into = new Float64Array(law.leak.length);
    stepBack(law.chain, law.leak, into, 1);
    law.leak = into;
  }
  law.steps++;
}

/** Relative error of every number after t steps. */
function roundingError(law: Law, t: number): number {
  return (t + law.period + 2) * (law.chain.shape.widestRow + 3) * UNIT;
}

/** By phase, the bracket at the present step. */
function findBrackets(law: Law): Bracket[] {
  const open = (): Bracket => ({ low: 1, high: 0, shareLow: 1, shareHigh: 0 });
  const brackets = Array.from({ length: law.period }, open);
  const { values, leak, phaseOf } = law;
  for (let i = 0; i < phaseOf.length; i++) {
    const alive = values[2 * i]!;
    if (alive === 0) continue;
    const bracket = brackets[phaseOf[i]!]!;
    const exits = values[2 * i + 1]!;
    const ends = leak ? exits + leak[i]! : exits;
    const hazard = alive < TINY ? Number.NaN : ends / alive;
    if (!(hazard >= bracket.low)) bracket.low = Number.isNaN(hazard) ? 0 : hazard;
    if (!(hazard <= bracket.high)) bracket.high = Number.isNaN(hazard) ? 1 : hazard;
    if (!leak || ends === 0) continue;
    bracket.shareLow = Math.min(bracket.shareLow, exits / ends);
    bracket.shareHigh = Math.max(bracket.shareHigh, exits / ends);
  }
  return brackets;
}

/** Whether the bracket of every strand is as narrow as rounding allows. */
function isClosed(law: Law, brackets: readonly Bracket[]): boolean {
  const narrow = Math.max(roundingError(law, law.steps) / 2, 1e-15);
  return law.strands.every(({ phase }) => {
    const { low, high, shareLow, shareHigh } = brackets[phase]!;
    return high === 0 || (high - low <= narrow * high && shareHigh - shareLow <= narrow * shareHigh);
  });
}

/** Takes the brackets of one whole period from the present step on: the tail. */
function close(law: Law): void {
  law.closed = law.steps;
  for (let j = 0; j < law.period; j++) {
    const error = 2 * roundingError(law, law.steps);
    const brackets = findBrackets(law);
    for (const strand of law.strands) {
      const { low, high, shareLow, shareHigh } = brackets[strand.phase]!;
      const none = high === 0;
      strand.tail.push({
        low: none ? 0 : low * (1 - error),
        high: none ? 0 : Math.min(1, high * (1 + error)),
        shareLow: law.leak ? shareLow * (1 - error) : 1,
        shareHigh: law.leak ? Math.min(1, shareHigh * (1 + error)) : 1,
      });
    }
    advance(law);
  }
}

/** Goes on until step n is recorded or the tail holds. */
function reach(law: Law, n: number): void {
  while (law.closed < 0 && law.steps <= n) {
    const look = law.steps % Math.max(STRIDE, law.period) === 0;
    if (law.steps >= law.patience || (look && isClosed(law, findBrackets(law)))) close(law);
    else advance(law);
  }
}

/** What is proven at n: P(T <= n) and P(T > n, an exit still possible). */
type Bounds = { low: number; high: number; aliveLow: number; aliveHigh: number };

function boundsAt(law: Law, n: number): Bounds {
  reach(law, n);
  const recorded = law.closed < 0 || n < law.closed;
  const t = recorded ? n : law.closed + ((n - law.closed) % law.period);
  const sums: Bounds = { low: 0, high: 0, aliveLow: 0, aliveHigh: 0 };
  for (const strand of law.strands) {
    const alive = strand.alive[t]!;
    const exited = strand.exited[t]!;
    const bracket = recorded ? NO_BRACKET : strand.tail[t - law.closed]!;
    const periods = recorded ? 0 : (n - t) / law.period;
    const slow = periods * Math.log1p(-bracket.low) * (1 - 4 * UNIT);
    const fast = periods === 0 ? 0 : periods * Math.log1p(-bracket.high) * (1 + 4 * UNIT);
    sums.low += exited - alive * bracket.shareLow * Math.expm1(slow);
    sums.high += exited - alive * bracket.shareHigh * Math.expm1(fast);
    sums.aliveLow += alive * Math.exp(fast);
    sums.aliveHigh += alive * Math.exp(slow);
  }
  const error = roundingError(law, t) + 8 * UNIT;
  return {
    low: sums.low * (1 - error),
    high: Math.min(1, sums.high * (1 + error)),
    aliveLow: sums.aliveLow * (1 - error),
    aliveHigh: sums.aliveHigh * (1 + error),
  };
}

/** P(T <= n) for a whole n >= 0. */
export function exitedWithin(law: Law, n: number): Estimate {
  const bounds = boundsAt(law, n);
  // A difference from 1 is itself rounded.
  const low = law.leak ? bounds.low : Math.max(bounds.low, 1 - bounds.aliveHigh - 2 * UNIT);
  const high = law.leak ? bounds.high : Math.min(bounds.high, 1 - bounds.aliveLow + 2 * UNIT);
  return { value: low + (high - low) / 2, low, high };
}

/** The whole numbers one of which is the smallest n with P(T <= n) >= q. */
export type QuantileInterval = { readonly low: number; readonly high: number };

/**
 * The smallest n with P(T <= n) >= q, as the interval of whole numbers the law leaves open (one number, almost
 * always); Infinity where P(T <= n) never comes to q, or not before 1e300. `q` and `complement` = 1 - q are given
 * apart, each to a rounding.
 */
export function quantileInterval(law: Law, q: number, complement: number): QuantileInterval {
  const surely = (n: number): boolean => {
    const { low, aliveHigh } = boundsAt(law, n);
    return low >= q * (1 + UNIT) || (!law.leak && aliveHigh <= complement * (1 - UNIT));
  };
  const possibly = (n: number): boolean => {
    const { high, aliveLow } = boundsAt(law, n);
    return high >= q * (1 - UNIT) && (law.leak !== null || aliveLow <= complement * (1 + UNIT));
  };
  return { low: search(possibly), high: search(surely) };
}

/** The smallest whole number from 0 on that satisfies a monotone predicate; Infinity beyond 1e300. */
function search(isEnough: (n: number) => boolean): number {
  if (isEnough(0)) return 0;
  let below = 0;
  let above = 1;
  while (!isEnough(above)) {
    below = above;
    above *= 2;
    if (above > 1e300) return Number.POSITIVE_INFINITY;
  }
  for (;;) {
    const middle = Math.floor(below + (above - below) / 2);
    if (middle <= below || middle >= above) return above;
    if (isEnough(middle)) above = middle;
    else below = middle;
  }
}
