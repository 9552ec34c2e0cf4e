/**
 * The law of the steps until exit of a small chain at any n, by powers of its matrix in double-double: for chains
 * whose hazard never settles (stages that follow one another with equal rates) and for integers that double precision
 * leaves open.
 *
 * R is Q with one more place for those that have exited; R^(2^k) by repeated squaring, only non-negative terms added.
 * Relative error of R^n: n (3 N + 8) 2^-106. Shares are taken of the whole row: probabilities that add up to 1 +
 * 1e-17 only would grow by that much a step. Cost: N^3 products a squaring (an eighth of it for stages in a row), N
 * at most `MOST_PLACES`.
 */
import type { DoubleDouble } from "../chance/double-double.ts";
import type { Chain } from "./chain.ts";
import { type Accumulator, add, addProduct, type DoubleDoubles, zeros } from "./double-double.ts";
import type { Estimate, StartLaw } from "./state-law.ts";

export const MOST_PLACES = 110;

export type Powers = {
  readonly size: number;
  readonly chain: Chain;
  readonly start: StartLaw;
  /** Matrix k is R^(2^k), by row * size + column; grown as needed. */
  readonly matrices: DoubleDoubles[];
};

/** Powers of the chain's matrix, none but the first computed yet. */
export function beginPowers(chain: Chain, start: StartLaw): Powers {
  const { shape, setSums } = chain;
  const size = shape.size + 1;
  const first = zeros(size * size);
  const put = (row: number, column: number, set: number): void => {
    first.high[row * size + column] = setSums.high[set]!;
    first.low[row * size + column] = setSums.low[set]!;
  };
  for (let i = 0; i < shape.size; i++) {
    put(i, i, shape.loopSet[i]!);
    put(i, shape.size, shape.markSet[i]!);
    for (let m = shape.rowStart[i]!; m < shape.rowStart[i + 1]!; m++)
      put(i, shape.target[m]!, shape.moveSet[m]!);
  }
  // Those that have exited go on with the sum of all columns, as every row does, so that shares stay shares.
  const sum: Accumulator = new Float64Array(2);
  for (const set of [shape.loopSet[0]!, shape.outSet[0]!]) add(sum, setSums.high[set]!, setSums.low[set]!);
  first.high[size * size - 1] = sum[0]!;
  first.low[size * size - 1] = sum[1]!;
  return { size, chain, start, matrices: [first] };
}

/** R^(2^k). */
function matrix(powers: Powers, k: number): DoubleDoubles {
  while (powers.matrices.length <= k) powers.matrices.push(square(powers.matrices.at(-1)!, powers.size));
  return powers.matrices[k]!;
}

function square(a: DoubleDoubles, size: number): DoubleDoubles {
  const result = zeros(size * size);
  for (let row = 0; row < size; row++) {
    const values = {
      high: a.high.subarray(row * size, (row + 1) * size),
      low: a.low.subarray(row * size, (row + 1) * size),
    };
    const product = timesMatrix(values, a, size);
    result.high.set(product.high, row * size);
    result.low.set(product.low, row * size);
  }
  return result;
}

/** A row times a matrix. */
function timesMatrix(row: DoubleDoubles, a: DoubleDoubles, size: number): DoubleDoubles {
  const sums = Array.from({ length: size }, (): Accumulator => new Float64Array(2));
  for (let i = 0; i < size; i++) {
    const high = row.high[i]!;
    const low = row.low[i]!;
    if (high === 0) continue;
    for (let j = 0; j < size; j++) {
      const other = a.high[i * size + j]!;
      if (other !== 0) addProduct(sums[j]!, high, low, other, a.low[i * size + j]!);
    }
  }
  return { high: Float64Array.from(sums, (sum) => sum[0]!), low: Float64Array.from(sums, (sum) => sum[1]!) };
}

/** The start as a row. */
function startRow({ size, start }: Powers): DoubleDoubles {
  const row = zeros(size);
  for (let s = 0; s < start.places.length; s++) row.high[start.places[s]!]! += start.weights[s]!;
  return row;
}

/** Relative error of every entry after n steps, and of the row's sum. */
function powerError({ size }: Powers, n: number): number {
  return (n + 128) * (3 * size + 8) * 2 ** -106;
}

/** The sum of a row. */
function total(row: DoubleDoubles): Accumulator {
  const sum: Accumulator = new Float64Array(2);
  for (let i = 0; i < row.high.length; i++) add(sum, row.high[i]!, row.low[i]!);
  return sum;
}

/** P(T <= n) for a whole n from 0 to 2^53, with an interval that holds it. */
export function exitedByPowers(powers: Powers, n: number): Estimate {
  let row = startRow(powers);
  let rest = n;
  for (let k = 0; rest > 0; k++) {
    if (rest % 2 === 1) row = timesMatrix(row, matrix(powers, k), powers.size);
    rest = Math.floor(rest / 2);
  }
  const value = row.high[powers.size - 1]! / total(row)[0]!;
  const error = 2 * powerError(powers, n) + 2 ** -51;
  return { value, low: value * (1 - error), high: Math.min(1, value * (1 + error)) };
}

/**
 * The smallest n with P(T <= n) >= q, by descent through the powers; null where double-double cannot tell or n is
 * above 2^52. q is right to 2^-104.
 */
export function quantileByPowers(powers: Powers, q: DoubleDouble): number | null {
  const { size } = powers;
  let top = 0;
  while (
    top <= 52 &&
    compare(timesMatrix(startRow(powers), matrix(powers, top), size), powers, 2 ** top, q) < 0
  )
    top++;
  if (top > 52) return null;
  let row = startRow(powers);
  let n = 0;
  for (let k = top; k >= 0; k--) {
    const further = timesMatrix(row, matrix(powers, k), size);
    const side = compare(further, powers, n + 2 ** k, q);
    if (side === 0) return null;
    if (side > 0) continue;
    row = further;
    n += 2 ** k;
  }
  return n + 1;
}

/** -1, 1: the exited share is surely below q, surely at or above; 0: double-double cannot tell. */
function compare(row: DoubleDoubles, powers: Powers, n: number, q: DoubleDouble): -1 | 0 | 1 {
  const at = powers.size - 1;
  const difference = total(row);
  const whole = { high: difference[0]!, low: difference[1]! };
  difference[0] = row.high[at]!;
  difference[1] = row.low[at]!;
  addProduct(difference, -q.high, -q.low, whole.high, whole.low);
  const error = 2.1 * (powerError(powers, n) + 2 ** -100) * q.high;
  if (Math.abs(difference[0]!) <= error) return 0;
  return difference[0]! < 0 ? -1 : 1;
}
