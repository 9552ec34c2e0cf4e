/**
 * Run-length facts of a finite automaton in exact whole numbers, by the plainest means: Bareiss elimination on D I -
 * M, and path counts carried forwards. Slow, for machines of a few dozen states. Written from the definitions alone.
 *
 * A machine here is `next` and `ends` by state * columns + column, state 0 the start; column c has probability
 * weights[c] / sum of the weights.
 */

export type PlainMachine = {
  readonly states: number;
  readonly columns: number;
  readonly next: ArrayLike<number>;
  /** Whether the transition ends the run. */
  readonly ends: (state: number, column: number) => boolean;
};

/** A fraction, not reduced; the denominator is positive. */
export type Ratio = { readonly n: bigint; readonly d: bigint };

/** The right sides' solutions of a square whole-number system, all over one common denominator (Bareiss 1968). */
function solveWhole(
  matrix: readonly (readonly bigint[])[],
  rights: readonly (readonly bigint[])[],
): { solutions: bigint[][]; denominator: bigint } {
  const size = matrix.length;
  const rows = matrix.map((row, i) => [...row, ...rights.map((right) => right[i]!)]);
  const width = size + rights.length;
  let previous = 1n;
  for (let k = 0; k < size; k++) {
    const pivot = rows.findIndex((row, i) => i >= k && row[k] !== 0n);
    if (pivot < 0) throw new Error("the system is singular");
    if (pivot !== k) {
      // A swap and a change of sign keep the determinant.
      const swapped = rows[k]!.map((x) => -x);
      rows[k] = rows[pivot]!;
      rows[pivot] = swapped;
    }
    for (let i = 0; i < size; i++) {
      if (i === k) continue;
      for (let j = k + 1; j < width; j++)
        rows[i]![j] = (rows[i]![j]! * rows[k]![k]! - rows[i]![k]! * rows[k]![j]!) / previous;
      rows[i]![k] = 0n;
    }
    for (let i = 0; i < k; i++) rows[i]![i] = rows[k]![k]!;
    previous = rows[k]![k]!;
  }
  const denominator = size === 0 ? 1n : rows[0]![0]!;
  return { solutions: rights.map((_, r) => rows.map((row) => row[size + r]!)), denominator };
}

function sumOf(weights: readonly bigint[]): bigint {
  return weights.reduce((a, b) => a + b, 0n);
}

/** D I - M over all states, M the weights of the moves that do not end the run. */
function system(machine: PlainMachine, weights: readonly bigint[]): bigint[][] {
  const whole = sumOf(weights);
  return Array.from({ length: machine.states }, (_, state) => {
    const row = new Array<bigint>(machine.states).fill(0n);
    row[state] = whole;
    for (let column = 0; column < machine.columns; column++)
      if (!machine.ends(state, column))
        row[machine.next[state * machine.columns + column]!]! -= weights[column]!;
    return row;
  });
}

/**
 * By state, the mean and the variance of the number of trials until the run ends; every state must be sure to end.
 */
export function exactMoments(
  machine: PlainMachine,
  weights: readonly bigint[],
): { means: Ratio[]; variances: Ratio[] } {
  const whole = sumOf(weights);
  const matrix = system(machine, weights);
  const first = solveWhole(matrix, [new Array<bigint>(machine.states).fill(whole)]);
  const d = first.denominator;
  const x = first.solutions[0]!;
  // E T^2 = 1 + sum q (E T'^2 + 2 E T') = (2 E T - 1) + sum q E T'^2.
  const second = solveWhole(matrix, [x.map((n) => whole * (2n * n - d))]);
  const e = second.denominator * d;
  return {
    means: x.map((n) => ({ n, d })),
    variances: second.solutions[0]!.map((n, i) => ({
      n: n * d - x[i]! * x[i]! * second.denominator,
      d: e * d,
    })),
  };
}

/** By state, the chance that the run ever ends with a transition of the kind; every state must be able to end. */
export function exactEndings(
  machine: PlainMachine,
  weights: readonly bigint[],
  isKind: (state: number, column: number) => boolean,
): Ratio[] {
  const right = Array.from({ length: machine.states }, (_, state) => {
    let sum = 0n;
    for (let column = 0; column < machine.columns; column++)
      if (machine.ends(state, column) && isKind(state, column)) sum += weights[column]!;
    return sum;
  });
  const { solutions, denominator } = solveWhole(system(machine, weights), [right]);
  return solutions[0]!.map((n) => ({ n, d: denominator }));
}

/** P(T <= n) from state 0 for n = 0 to `most`. */
export function exactLaw(machine: PlainMachine, weights: readonly bigint[], most: number): Ratio[] {
  const whole = sumOf(weights);
  let mass = new Array<bigint>(machine.states).fill(0n);
  mass[0] = 1n;
  let [ended, scale] = [0n, 1n];
  const law: Ratio[] = [{ n: 0n, d: 1n }];
  for (let n = 1; n <= most; n++) {
    const following = new Array<bigint>(machine.states).fill(0n);
    ended *= whole;
    scale *= whole;
    for (let state = 0; state < machine.states; state++) {
      if (mass[state] === 0n) continue;
      for (let column = 0; column < machine.columns; column++) {
        const share = mass[state]! * weights[column]!;
        if (machine.ends(state, column)) ended += share;
        else following[machine.next[state * machine.columns + column]!]! += share;
      }
    }
    mass = following;
    law.push({ n: ended, d: scale });
  }
  return law;
}

/** The mean number, for n = 0 to `most`, of the first n trials whose transition counts; nothing ends here. */
export function exactCounts(machine: PlainMachine, weights: readonly bigint[], most: number): Ratio[] {
  const whole = sumOf(weights);
  let mass = new Array<bigint>(machine.states).fill(0n);
  mass[0] = 1n;
  let [count, scale] = [0n, 1n];
  const counts: Ratio[] = [{ n: 0n, d: 1n }];
  for (let n = 1; n <= most; n++) {
    const following = new Array<bigint>(machine.states).fill(0n);
    count *= whole;
    scale *= whole;
    for (let state = 0; state < machine.states; state++) {
      for (let column = 0; column < machine.columns; column++) {
        const share = mass[state]! * weights[column]!;
        if (machine.ends(state, column)) count += share;
        following[machine.next[state * machine.columns + column]!]! += share;
      }
    }
    mass = following;
    counts.push({ n: count, d: scale });
  }
  return counts;
}

/** The long-run share of trials whose transition counts, for a machine all of whose states lead to each other. */
export function exactRate(machine: PlainMachine, weights: readonly bigint[]): Ratio {
  const whole = sumOf(weights);
  const { states, columns, next } = machine;
  // Balance of all states but the last, and the sum of all masses.
  const matrix = Array.from({ length: states }, (_, i) =>
    new Array<bigint>(states).fill(i === states - 1 ? 1n : 0n),
  );
  const raises = new Array<bigint>(states).fill(0n);
  for (let state = 0; state < states; state++) {
    if (state < states - 1) matrix[state]![state]! += whole;
    for (let column = 0; column < columns; column++) {
      const to = next[state * columns + column]!;
      if (to < states - 1) matrix[to]![state]! -= weights[column]!;
      if (machine.ends(state, column)) raises[state]! += weights[column]!;
    }
  }
  const right = new Array<bigint>(states).fill(0n);
  right[states - 1] = 1n;
  const { solutions, denominator } = solveWhole(matrix, [right]);
  const n = solutions[0]!.reduce((sum, mass, state) => sum + mass * raises[state]!, 0n);
  return denominator < 0n ? { n: -n, d: -denominator * whole } : { n, d: denominator * whole };
}

/** The exact value of a double. */
export function ratioOfDouble(x: number): Ratio {
  let exponent = 0;
  let mantissa = x;
  while (!Number.isInteger(mantissa)) {
    mantissa *= 2;
    exponent++;
  }
  return { n: BigInt(mantissa), d: 1n << BigInt(exponent) };
}

/** |x / (n / d) - 1|, right to about 1e-17 absolute; 0 for 0 against 0. */
export function relativeError(x: number, { n, d }: Ratio): number {
  if (n === 0n) return x === 0 ? 0 : Number.POSITIVE_INFINITY;
  const exact = ratioOfDouble(x);
  const difference = exact.n * d - n * exact.d;
  const scaled =
    ((difference < 0n ? -difference : difference) << 200n) / (n < 0n ? -n * exact.d : n * exact.d);
  return Number(scaled) / 2 ** 200;
}

/** The nearest double, or one beside it. */
export function toNumber({ n, d }: Ratio): number {
  const negative = n < 0n;
  const size = negative ? -n : n;
  const shift = BigInt(Math.max(0, d.toString(2).length - size.toString(2).length + 80));
  const value = Number((size << shift) / d) * 2 ** -Number(shift);
  return negative ? -value : value;
}
