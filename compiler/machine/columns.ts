/**
 * Columns: classes of symbols that no SET of the policy tells apart. Everything is explored by column, so that a policy
 * with a hundred combinations of letters costs what the few kinds of trials cost that its conditions know.
 *
 * Columns are numbered in the order of their first symbols.
 */
import { setsRead } from "../check/reading.ts";
import type { Policy, TrialSet } from "../policy.ts";
import type { Automaton } from "./automaton.ts";
import { numberOf } from "./numbering.ts";

export type Columns = {
  readonly count: number;
  /** By symbol. */
  readonly columnOf: Int32Array;
  /** By column: its first symbol. */
  readonly symbolOf: Int32Array;
};

/** The columns that the conditions and clears of a policy tell apart. */
export function columnsOf(policy: Policy): Columns {
  return classify(policy.symbols, setsRead(policy));
}

function classify(symbols: number, sets: Iterable<TrialSet>): Columns {
  let columnOf = new Int32Array(symbols);
  for (const set of sets) {
    const numbers = new Map<number, number>();
    columnOf = columnOf.map((column, symbol) => {
      return numberOf(numbers, column * 2 + (set[symbol] as number));
    });
  }
  const count = columnOf.reduce((most, column) => Math.max(most, column + 1), 0);
  const symbolOf = new Int32Array(count).fill(-1);
  columnOf.forEach((column, symbol) => {
    if (symbolOf[column] === -1) symbolOf[column] = symbol;
  });
  return { count, columnOf, symbolOf };
}

/** A set of trials by column. */
export function setByColumn(set: TrialSet, columns: Columns): Uint8Array {
  return Uint8Array.from(columns.symbolOf, (symbol) => set[symbol] as number);
}

/**
 * Merges the columns of a canonical automaton that are equal in every state, and returns the map from the old columns to
 * the new. The first `fixed` columns may be merged; any after them (a broken trial) are dropped from the result.
 */
export function mergeColumns(
  automaton: Automaton,
  fixed: number,
): { merged: Automaton; newColumnOf: Int32Array } {
  const { states, columns, next, output } = automaton;
  const kept: number[] = [];
  const newColumnOf = new Int32Array(fixed);
  const equal = (a: number, b: number) => {
    for (let row = 0; row < states * columns; row += columns)
      if (next[row + a] !== next[row + b] || output[row + a] !== output[row + b]) return false;
    return true;
  };
  for (let column = 0; column < fixed; column++) {
    const same = kept.findIndex((other) => equal(other, column));
    newColumnOf[column] = same === -1 ? kept.push(column) - 1 : same;
  }
  const select = (array: Int32Array) => {
    const selected = new Int32Array(states * kept.length);
    for (let state = 0; state < states; state++)
      for (let i = 0; i < kept.length; i++)
        selected[state * kept.length + i] = array[state * columns + (kept[i] as number)] as number;
    return selected;
  };
  return {
    merged: { states, columns: kept.length, next: select(next), output: select(output) },
    newColumnOf,
  };
}
