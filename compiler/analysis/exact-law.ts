/**
 * P(T <= n) in whole numbers, for chains whose column probabilities are exact fractions: decides ties such as P(T <=
 * 15) = 1/2, which no floating-point interval can. In: a shape, the fractions by column, a starting place. Out: exact
 * fractions.
 *
 * With D the common denominator every path of n steps weighs a whole number of D^-n; these are added forwards. Cost:
 * a look at each move a step, on integers that grow by log2 D bits a step; refused beyond `MOST_WORK`.
 */
import Fraction from "fraction.js";
import type { Shape } from "./chain.ts";
import type { ColumnSets } from "./column-sets.ts";

/** Weighted looks at moves: one more for each 64 bits. About a second. */
const MOST_WORK = 1e7;

/** Column probabilities as whole numbers over a common denominator. */
export type WholeWeights = { readonly weights: readonly bigint[]; readonly denominator: bigint };

/** The fractions over their least common denominator. */
export function wholeWeights(fractions: readonly Fraction[]): WholeWeights {
  let denominator = 1n;
  for (const { d } of fractions) denominator = (denominator / greatestDivisor(denominator, d)) * d;
  return { weights: fractions.map(({ s, n, d }) => (s * n * denominator) / d), denominator };
}

function greatestDivisor(a: bigint, b: bigint): bigint {
  while (b !== 0n) [a, b] = [b, a % b];
  return a;
}

/** By set, the sum of the weights of its columns. */
export function weighSets(sets: ColumnSets, { weights }: WholeWeights): bigint[] {
  const sums: bigint[] = [0n];
  for (let set = 1; set < sets.count; set++)
    sums.push(sums[sets.parent[set]!]! + weights[sets.column[set]!]!);
  return sums;
}

/**
 * The smallest n from `low` to `high` with P(T <= n) >= q from one place; null when that would take too long.
 */
export function exactQuantile(
  shape: Shape,
  fractions: readonly Fraction[],
  place: number,
  q: Fraction,
  low: number,
  high: number,
): number | null {
  const whole = wholeWeights(fractions);
  const bits = whole.denominator.toString(2).length;
  if (high * shape.target.length * (1 + (high * bits) / 64) > MOST_WORK * 64 || high > 1e5) return null;
  const sums = weighSets(shape.sets, whole);
  let mass: bigint[] = new Array<bigint>(shape.size).fill(0n);
  mass[place] = 1n;
  let active: number[] = [place];
  let exited = 0n;
  let scale = 1n;
  let work = 0;
  for (let n = 1; n <= high; n++) {
    const step = stepForward(shape, sums, mass, active);
    exited = exited * whole.denominator + step.exited;
    scale *= whole.denominator;
    mass = step.mass;
    active = step.active;
    work += active.length * (1 + (n * bits) / 64);
    if (work > MOST_WORK) return null;
    if (n >= low && new Fraction(exited, scale).compare(q) >= 0) return n;
  }
  return null;
}

/** One step: what exits, and where the rest goes. */
function stepForward(
  shape: Shape,
  sums: readonly bigint[],
  mass: readonly bigint[],
  active: readonly number[],
): { exited: bigint; mass: bigint[]; active: number[] } {
  const { rowStart, target, moveSet, loopSet, markSet } = shape;
  const into: bigint[] = new Array<bigint>(mass.length).fill(0n);
  const reached: number[] = [];
  let exited = 0n;
  const give = (place: number, amount: bigint): void => {
    if (amount === 0n) return;
    if (into[place] === 0n) reached.push(place);
    into[place]! += amount;
  };
  for (const i of active) {
    const here = mass[i]!;
    exited += here * sums[markSet[i]!]!;
    give(i, here * sums[loopSet[i]!]!);
    for (let m = rowStart[i]!; m < rowStart[i + 1]!; m++) give(target[m]!, here * sums[moveSet[m]!]!);
  }
  return { exited, mass: into, active: reached };
}
