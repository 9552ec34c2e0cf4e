/**
 * Mean steps until exit as an exact fraction, for chains whose column probabilities are exact fractions. In: a plan,
 * the fractions by column, a place. Out: the fraction, or null where that is too much work or the mean is infinite.
 *
 * With D the common denominator and M the whole numbers of the moves, A = D I - M: det A and x det A are whole
 * numbers from 0 to N D^N. Both are found modulo primes below 2^25 (products then fit a double exactly) by replaying
 * the compiled elimination, and put together by the Chinese remainder theorem. A prime that divides a pivot is passed
 * over.
 * Source: von zur Gathen & Gerhard (2013), *Modern Computer Algebra*, 5.5.
 */
import Fraction from "fraction.js";
import type { Shape } from "./chain.ts";
import { compileElimination, type Program } from "./elimination.ts";
import { weighSets, wholeWeights } from "./exact-law.ts";
import type { Plan } from "./solver.ts";

/** Bits of the whole numbers sought; beyond, the work is refused. */
const MOST_BITS = 100_000;
/** Multiplications over all primes. */
const MOST_WORK = 3e9;
const MOST_PRODUCTS = 2_500_000;
const FIRST_PRIME = 33_554_393;

/** The exact mean from `place`, or null. `infinite` marks the places whose mean is infinite. */
export function exactMean(plan: Plan, fractions: readonly Fraction[], place: number): Fraction | null {
  const { shape } = plan;
  const programs = programsOf(plan);
  if (!programs) return null;
  const whole = wholeWeights(fractions);
  const bits = shape.size * whole.denominator.toString(2).length + 32;
  const products = programs.reduce(
    (sum, program) => sum + (program ? program.fill.length : 1),
    shape.target.length,
  );
  if (bits > MOST_BITS || (products * bits) / 24 > MOST_WORK) return null;
  const sums = weighSets(shape.sets, whole);
  let [modulus, determinant, product] = [1n, 0n, 0n];
  for (let prime = FIRST_PRIME; modulus >> BigInt(bits) === 0n; prime = primeBelow(prime)) {
    const found = solveModulo(shape, programs, sums, whole.denominator, place, prime);
    if (!found) continue;
    determinant = combine(determinant, modulus, found.determinant, prime);
    product = combine(product, modulus, found.product, prime);
    modulus *= BigInt(prime);
  }
  return new Fraction(product, determinant);
}

/**
 * The programs of all classes (null for a class of one place); null where one cannot be eliminated or cannot exit.
 */
function programsOf({ shape, programOf }: Plan): (Program | null)[] | null {
  const programs: (Program | null)[] = [];
  for (let k = 0; k < shape.classCount; k++) {
    const first = shape.classStart[k]!;
    const end = shape.classStart[k + 1]!;
    if (!shape.exitSet.subarray(first, end).some((set) => set !== 0)) return null;
    // What is too much for one run of many may do for an exact one.
    const program = end - first === 1 ? null : (programOf(k) ?? compileElimination(shape, k, MOST_PRODUCTS));
    if (end - first > 1 && !program) return null;
    programs.push(program);
  }
  return programs;
}

/** det A and x det A at the place, modulo a prime; null where the prime divides a pivot. */
function solveModulo(
  shape: Shape,
  programs: readonly (Program | null)[],
  sums: readonly bigint[],
  denominator: bigint,
  place: number,
  prime: number,
): { determinant: number; product: number } | null {
  const weight = Float64Array.from(sums, (sum) => Number(sum % BigInt(prime)));
  const whole = Number(denominator % BigInt(prime));
  const values = new Float64Array(shape.size);
  let determinant = 1;
  for (let k = 0; k < shape.classCount; k++) {
    const share = classModulo(shape, k, programs[k]!, weight, whole, values, prime);
    if (share === 0) return null;
    determinant = times(determinant, share, prime);
  }
  return { determinant, product: times(values[place]!, determinant, prime) };
}

/** Solves one class into `values`; the product of its pivots, 0 where that is not invertible. */
function classModulo(
  shape: Shape,
  k: number,
  program: Program | null,
  weight: Float64Array,
  whole: number,
  values: Float64Array,
  prime: number,
): number {
  const { classStart, rowStart, rowLeave, target, moveSet, exitSet } = shape;
  const first = classStart[k]!;
  const size = classStart[k + 1]! - first;
  const cost = new Float64Array(size);
  const gain = new Float64Array(size);
  for (let i = 0; i < size; i++) {
    gain[i] = weight[exitSet[first + i]!]!;
    let sum = whole;
    for (let m = rowLeave[first + i]!; m < rowStart[first + i + 1]!; m++)
      sum = (sum + times(weight[moveSet[m]!]!, values[target[m]!]!, prime)) % prime;
    cost[i] = sum;
  }
  if (!program) {
    values[first] = times(cost[0]!, inverse(gain[0]!, prime), prime);
    return gain[0]!;
  }
  const slot = new Float64Array(program.slots);
  let next = 1;
  for (let i = first; i < first + size; i++)
    for (let m = rowStart[i]!; m < rowLeave[i]!; m++) slot[next++] = weight[moveSet[m]!]!;
  return eliminateModulo(program, slot, cost, gain, values, first, prime);
}

function eliminateModulo(
  program: Program,
  slot: Float64Array,
  cost: Float64Array,
  gain: Float64Array,
  values: Float64Array,
  first: number,
  prime: number,
): number {
  const { size, order, outStart, outSlot, outPlace, inStart, inSlot, inPlace, fill } = program;
  const inversePivot = new Float64Array(size);
  let determinant = 1;
  let at = 0;
  for (let step = 0; step < size - 1; step++) {
    const place = order[step]!;
    let leaving = gain[place]!;
    for (let o = outStart[step]!; o < outStart[step + 1]!; o++) leaving += slot[outSlot[o]!]!;
    leaving %= prime;
    if (leaving === 0) return 0;
    determinant = times(determinant, leaving, prime);
    const inverted = inverse(leaving, prime);
    inversePivot[step] = inverted;
    for (let i = inStart[step]!; i < inStart[step + 1]!; i++) {
      const share = times(slot[inSlot[i]!]!, inverted, prime);
      for (let o = outStart[step]!; o < outStart[step + 1]!; o++) {
        const to = fill[at++]!;
        slot[to] = plus(slot[to]!, times(share, slot[outSlot[o]!]!, prime), prime);
      }
      const into = inPlace[i]!;
      gain[into] = plus(gain[into]!, times(share, gain[place]!, prime), prime);
      cost[into] = plus(cost[into]!, times(share, cost[place]!, prime), prime);
    }
  }
  const anchor = size - 1;
  if (gain[anchor] === 0) return 0;
  values[first + anchor] = times(cost[anchor]!, inverse(gain[anchor]!, prime), prime);
  for (let step = size - 2; step >= 0; step--) {
    let sum = cost[order[step]!]!;
    for (let o = outStart[step]!; o < outStart[step + 1]!; o++)
      sum = plus(sum, times(slot[outSlot[o]!]!, values[first + outPlace[o]!]!, prime), prime);
    values[first + order[step]!] = times(sum, inversePivot[step]!, prime);
  }
  return times(determinant, gain[anchor]!, prime);
}

/** a b modulo p, for a, b < p < 2^25. */
function times(a: number, b: number, p: number): number {
  const product = a * b;
  return product - Math.floor(product / p) * p;
}

function plus(a: number, b: number, p: number): number {
  const sum = a + b;
  return sum >= p ? sum - p : sum;
}

/** The inverse of a modulo p, a not 0; by Euclid. */
function inverse(a: number, p: number): number {
  let [r0, r1, s0, s1] = [p, a, 0, 1];
  while (r1 !== 0) {
    const quotient = Math.floor(r0 / r1);
    [r0, r1] = [r1, r0 - quotient * r1];
    [s0, s1] = [s1, s0 - quotient * s1];
  }
  return s0 < 0 ? s0 + p : s0;
}

/** The number below modulus * prime that leaves `known` and `residue`. */
function combine(known: bigint, modulus: bigint, residue: number, prime: number): bigint {
  const p = BigInt(prime);
  const gap = (BigInt(residue) - (known % p) + p) % p;
  return known + modulus * ((gap * BigInt(inverse(Number(modulus % p), prime))) % p);
}

/** The largest prime below a prime. */
function primeBelow(prime: number): number {
  for (let candidate = prime - 2; ; candidate -= 2) {
    let divisor = 3;
    while (divisor * divisor <= candidate && candidate % divisor !== 0) divisor += 2;
    if (divisor * divisor > candidate) return candidate;
  }
}
