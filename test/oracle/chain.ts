/**
 * Run-length facts of a residual machine by the plainest means: a dense linear system, eliminated with partial pivoting.
 * For the small published examples only; accuracy is that of doubles.
 */
import type { ResidualMachine } from "./residuals.ts";

/** x with A x = b. */
function solve(matrix: readonly (readonly number[])[], right: readonly number[]): readonly number[] {
  const rows = matrix.map((row, index) => [...row, right[index]!]);
  const size = rows.length;
  for (let column = 0; column < size; column++) {
    let pivot = column;
    for (let r = column; r < size; r++)
      if (Math.abs(rows[r]![column]!) > Math.abs(rows[pivot]![column]!)) pivot = r;
    [rows[column], rows[pivot]] = [rows[pivot]!, rows[column]!];
    for (let r = 0; r < size; r++) {
      if (r === column) continue;
      const factor = rows[r]![column]! / rows[column]![column]!;
      for (let c = column; c <= size; c++) rows[r]![c]! -= factor * rows[column]![c]!;
    }
  }
  return rows.map((row, index) => row[size]! / row[index]!);
}

/** I − Q, where Q are the chances to go on without any signal raised, and for each state a sum over what ends it. */
function unraised(
  machine: ResidualMachine,
  chances: readonly number[],
  ending: (signals: readonly string[]) => number,
): { matrix: number[][]; ended: number[] } {
  const { states, next, raised } = machine;
  const matrix = Array.from({ length: states }, (_, i) =>
    Array.from({ length: states }, (_, j) => Number(i === j)),
  );
  const ended = new Array<number>(states).fill(0);
  for (let state = 0; state < states; state++)
    for (const [symbol, chance] of chances.entries()) {
      const at = state * chances.length + symbol;
      if (raised[at]!.length === 0) matrix[state]![next[at]!]! -= chance;
      else ended[state]! += chance * ending(raised[at]!);
    }
  return { matrix, ended };
}

/** The mean number of trials to the first signal of any kind, trials being independent with these chances. */
export function meanTrials(machine: ResidualMachine, chances: readonly number[]): number {
  const { matrix } = unraised(machine, chances, () => 1);
  return solve(matrix, new Array<number>(machine.states).fill(1))[0]!;
}

/** The chance that the first raise of all is one of `signal`. */
export function chanceFirst(machine: ResidualMachine, chances: readonly number[], signal: string): number {
  const { matrix, ended } = unraised(machine, chances, (signals) => Number(signals.includes(signal)));
  return solve(matrix, ended)[0]!;
}
