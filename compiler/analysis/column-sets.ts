/**
 * Sets of columns, numbered as they are met. A machine has few different ones (all the columns that lead from a state
 * to another form one), so that the probability of each is added up once, in double-double, and rounded once.
 *
 * Layout: a set is its largest column and the set of the others (a trie). Set 0 is the empty one.
 */
import { type Accumulator, add, type DoubleDoubles, zeros } from "./double-double.ts";

export type ColumnSets = {
  readonly count: number;
  /** By set: the set without its largest column. */
  readonly parent: Int32Array;
  /** By set: its largest column; -1 for the empty set. */
  readonly column: Int32Array;
};

/** Numbers sets as they are asked for. */
export type SetNumbering = {
  /** The set with one more column, which must be larger than all in it. */
  readonly extend: (set: number, column: number) => number;
  readonly finish: () => ColumnSets;
};

/** A numbering of sets of `columns` columns that knows only the empty set. */
export function numberSets(columns: number): SetNumbering {
  const parent = [0];
  const column = [-1];
  let capacity = 64;
  let child = new Int32Array(capacity * columns);
  const extend = (set: number, last: number): number => {
    const known = child[set * columns + last]!;
    if (known !== 0) return known;
    const number = parent.length;
    if (number >= capacity) {
      capacity *= 2;
      const wider = new Int32Array(capacity * columns);
      wider.set(child);
      child = wider;
    }
    child[set * columns + last] = number;
    parent.push(set);
    column.push(last);
    return number;
  };
  const finish = (): ColumnSets => ({
    count: parent.length,
    parent: new Int32Array(parent),
    column: new Int32Array(column),
  });
  return { extend, finish };
}

/** By set, the sum of its columns' values, which must not be negative; relative error below 2^-95. */
export function sumSets(sets: ColumnSets, values: DoubleDoubles): DoubleDoubles {
  const sums = zeros(sets.count);
  const sum: Accumulator = new Float64Array(2);
  for (let set = 1; set < sets.count; set++) {
    const rest = sets.parent[set]!;
    const column = sets.column[set]!;
    sum[0] = sums.high[rest]!;
    sum[1] = sums.low[rest]!;
    add(sum, values.high[column]!, values.low[column]!);
    sums.high[set] = sum[0]!;
    sums.low[set] = sum[1]!;
  }
  return sums;
}
