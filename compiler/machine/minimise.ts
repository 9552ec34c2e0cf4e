/**
 * The minimal automaton, and its canonical numbering.
 *
 * Partition refinement after Hopcroft (1971), on flat arrays: O(columns · n log n). Two states stay together when their
 * outputs agree and their successors stay together, for every column; since the automaton is complete, all initial blocks
 * but the largest serve as splitters. The quotient is then numbered breadth-first from the start, columns in order, which
 * makes equal functions equal arrays.
 */
import type { Automaton } from "./automaton.ts";
import { numberOf } from "./numbering.ts";

/** The minimal automaton equivalent to a given one from its start; all its states must be reachable or are dropped. */
export function minimise(automaton: Automaton): Automaton {
  return renumber(automaton, coarsestPartition(automaton));
}

/** By state: the number of its block in the coarsest partition that outputs and successors respect. */
export function coarsestPartition(automaton: Automaton): Int32Array {
  const partition = makePartition(automaton);
  refine(automaton, partition);
  return partition.blockOf;
}

type Partition = {
  count: number;
  readonly blockOf: Int32Array;
  /** States, those of a block side by side: `elements[first[b] … past[b])`. */
  readonly elements: Int32Array;
  readonly location: Int32Array;
  readonly first: Int32Array;
  readonly past: Int32Array;
};

/** The partition by the row of outputs. */
function makePartition({ states, columns, output }: Automaton): Partition {
  const outputs = new Map<number, number>();
  for (const out of output) numberOf(outputs, out);
  const blockOf = new Int32Array(states);
  let count = 1;
  for (let column = 0; column < columns; column++) {
    const blocks = new Map<number, number>();
    for (let state = 0; state < states; state++) {
      const out = outputs.get(output[state * columns + column] as number) as number;
      blockOf[state] = numberOf(blocks, (blockOf[state] as number) * outputs.size + out);
    }
    count = blocks.size;
  }
  return arrange(blockOf, count);
}

/** Sorts the states by block. */
function arrange(blockOf: Int32Array, count: number): Partition {
  const states = blockOf.length;
  const first = new Int32Array(states);
  const past = new Int32Array(states);
  for (const block of blockOf) (past[block] as number)++;
  let sum = 0;
  for (let block = 0; block < count; block++) {
    first[block] = sum;
    sum += past[block] as number;
    past[block] = first[block] as number;
  }
  const elements = new Int32Array(states);
  const location = new Int32Array(states);
  for (let state = 0; state < states; state++) {
    const block = blockOf[state] as number;
    const at = past[block] as number;
    past[block] = at + 1;
    elements[at] = state;
    location[state] = at;
  }
  return { count, blockOf, elements, location, first, past };
}

/** For each column, the states that lead to each state: `sources[heads[s] … heads[s + 1])`. */
function invert({ states, columns, next }: Automaton): { heads: Int32Array; sources: Int32Array }[] {
  const inverse = [];
  for (let column = 0; column < columns; column++) {
    const heads = new Int32Array(states + 1);
    for (let i = column; i < next.length; i += columns) (heads[next[i] as number] as number)++;
    let sum = 0;
    for (let state = 0; state <= states; state++) {
      sum += heads[state] as number;
      heads[state] = sum;
    }
    const sources = new Int32Array(states);
    for (let state = states - 1; state >= 0; state--) {
      const target = next[state * columns + column] as number;
      const at = (heads[target] as number) - 1;
      heads[target] = at;
      sources[at] = state;
    }
    inverse.push({ heads, sources });
  }
  return inverse;
}

function refine(automaton: Automaton, partition: Partition): void {
  const { states } = automaton;
  const { blockOf, elements, location, first, past } = partition;
  const inverse = invert(automaton);
  const pending = new Int32Array(states);
  let pendingCount = fillPending(partition, pending);
  const marked = new Int32Array(states);
  const touched = new Int32Array(states);
  const splitter = new Int32Array(states);
  while (pendingCount > 0) {
    const block = pending[--pendingCount] as number;
    const from = first[block] as number;
    const size = (past[block] as number) - from;
    for (let i = 0; i < size; i++) splitter[i] = elements[from + i] as number;
    for (const { heads, sources } of inverse) {
      let touchedCount = 0;
      for (let i = 0; i < size; i++) {
        const target = splitter[i] as number;
        const end = heads[target + 1] as number;
        for (let at = heads[target] as number; at < end; at++) {
          const source = sources[at] as number;
          const owner = blockOf[source] as number;
          const count = marked[owner] as number;
          if (count === 0) touched[touchedCount++] = owner;
          const place = (first[owner] as number) + count;
          const old = location[source] as number;
          const other = elements[place] as number;
          elements[place] = source;
          location[source] = place;
          elements[old] = other;
          location[other] = old;
          marked[owner] = count + 1;
        }
      }
      for (let i = 0; i < touchedCount; i++) {
        const owner = touched[i] as number;
        const count = marked[owner] as number;
        marked[owner] = 0;
        if (count === (past[owner] as number) - (first[owner] as number)) continue;
        pending[pendingCount++] = splitOff(partition, owner, count);
      }
    }
  }
}

/** All blocks but the largest. */
function fillPending({ count, first, past }: Partition, pending: Int32Array): number {
  let largest = 0;
  const size = (block: number) => (past[block] as number) - (first[block] as number);
  for (let block = 1; block < count; block++) if (size(block) > size(largest)) largest = block;
  let pendingCount = 0;
  for (let block = 0; block < count; block++) if (block !== largest) pending[pendingCount++] = block;
  return pendingCount;
}

/** Splits the first `count` states of a block from the rest; the smaller part becomes the new block, which is returned. */
function splitOff(partition: Partition, block: number, count: number): number {
  const { blockOf, elements, first, past } = partition;
  const middle = (first[block] as number) + count;
  const fresh = partition.count++;
  if (count * 2 <= (past[block] as number) - (first[block] as number)) {
    first[fresh] = first[block] as number;
    past[fresh] = middle;
    first[block] = middle;
  } else {
    first[fresh] = middle;
    past[fresh] = past[block] as number;
    past[block] = middle;
  }
  for (let at = first[fresh] as number; at < (past[fresh] as number); at++)
    blockOf[elements[at] as number] = fresh;
  return fresh;
}

/** The quotient by a partition, reachable states only, numbered breadth-first in the order of the columns. */
function renumber(automaton: Automaton, blockOf: Int32Array): Automaton {
  const { columns, next, output } = automaton;
  const numberOf = new Int32Array(automaton.states).fill(-1);
  const order = new Int32Array(automaton.states);
  let count = 1;
  numberOf[blockOf[0] as number] = 0;
  for (let index = 0; index < count; index++) {
    const row = (order[index] as number) * columns;
    for (let column = 0; column < columns; column++) {
      const target = next[row + column] as number;
      const block = blockOf[target] as number;
      if (numberOf[block] === -1) {
        numberOf[block] = count;
        order[count++] = target;
      }
    }
  }
  const quotient = { next: new Int32Array(count * columns), output: new Int32Array(count * columns) };
  for (let index = 0; index < count; index++) {
    const row = (order[index] as number) * columns;
    for (let column = 0; column < columns; column++) {
      quotient.next[index * columns + column] = numberOf[
        blockOf[next[row + column] as number] as number
      ] as number;
      quotient.output[index * columns + column] = output[row + column] as number;
    }
  }
  return { states: count, columns, ...quotient };
}

/** Whether two canonical automata are the same, byte for byte. */
export function equalAutomata(a: Automaton, b: Automaton): boolean {
  return (
    a.states === b.states &&
    a.columns === b.columns &&
    a.next.every((value, index) => value === b.next[index]) &&
    a.output.every((value, index) => value === b.output[index])
  );
}
