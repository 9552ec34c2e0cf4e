/**
 * From a rule of succession to an automaton: breadth-first exploration of everything reachable.
 *
 * A state is a tuple of `width` 32-bit numbers; tuples are kept in one flat pool and found again by an open-addressing hash
 * table, so that the cost is a few tens of nanoseconds a transition. The result is numbered in the order of discovery:
 * breadth-first, columns in order, the start being 0.
 */
import type { Automaton } from "./automaton.ts";
import { MOST_STATE_WORDS, TooManyStates } from "./budget.ts";

export type Succession = {
  /** Numbers in a state. */
  readonly width: number;
  readonly columns: number;
  /** The first state; all zeros when absent. */
  readonly start?: Int32Array;
  /**
   * Writes the successor of the state at `pool[at … at + width)` under `column` into `into` (all `width` numbers), and
   * returns what the transition gives out (0 for nothing).
   */
  readonly step: (pool: Int32Array, at: number, column: number, into: Int32Array) => number;
};

/** Explores all reachable states; throws `TooManyStates` beyond `mostStates`. */
export function explore(succession: Succession, mostStates: number): Automaton {
  const { width, columns, step } = succession;
  const states = new StatePool(width, mostStates);
  const into = new Int32Array(width);
  if (succession.start) into.set(succession.start);
  states.intern(into);
  let next = new Int32Array(1024 * columns);
  let output = new Int32Array(1024 * columns);
  for (let state = 0; state < states.count; state++) {
    const row = state * columns;
    if (row + columns > next.length) {
      next = grown(next);
      output = grown(output);
    }
    for (let column = 0; column < columns; column++) {
      output[row + column] = step(states.pool, state * width, column, into);
      next[row + column] = states.intern(into);
    }
  }
  const size = states.count * columns;
  return { states: states.count, columns, next: next.slice(0, size), output: output.slice(0, size) };
}

function grown(array: Int32Array<ArrayBuffer>): Int32Array<ArrayBuffer> {
  const larger = new Int32Array(array.length * 2);
  larger.set(array);
  return larger;
}

function hashOf(array: Int32Array, at: number, width: number): number {
  let hash = 0;
  for (let i = at; i < at + width; i++)
    hash = Math.imul(hash ^ (array[i] as number), 0x9e3779b1) ^ (hash >>> 15);
  return hash ^ (hash >>> 13);
}

/** Tuples of equal width, numbered in the order they were first seen. */
class StatePool {
  pool: Int32Array<ArrayBuffer>;
  count = 0;
  private readonly width: number;
  private readonly mostStates: number;
  /** Number of the tuple plus one; 0 is free. */
  private slots = new Int32Array(2048);

  constructor(width: number, mostStates: number) {
    this.width = width;
    this.mostStates = Math.min(mostStates, Math.floor(MOST_STATE_WORDS / Math.max(width, 1)));
    this.pool = new Int32Array(1024 * width);
  }

  intern(tuple: Int32Array): number {
    const mask = this.slots.length - 1;
    let slot = hashOf(tuple, 0, this.width) & mask;
    for (;;) {
      const found = this.slots[slot] as number;
      if (found === 0) break;
      if (this.holds(found - 1, tuple)) return found - 1;
      slot = (slot + 1) & mask;
    }
    return this.append(tuple, slot);
  }

  private holds(index: number, tuple: Int32Array): boolean {
    const at = index * this.width;
    for (let i = 0; i < this.width; i++) if (this.pool[at + i] !== tuple[i]) return false;
    return true;
  }

  private append(tuple: Int32Array, slot: number): number {
    const index = this.count++;
    if (index >= this.mostStates) throw new TooManyStates();
    if ((index + 1) * this.width > this.pool.length) this.pool = grown(this.pool);
    this.pool.set(tuple, index * this.width);
    this.slots[slot] = index + 1;
    if (this.count * 2 > this.slots.length) this.rehash();
    return index;
  }

  private rehash(): void {
    const slots = new Int32Array(this.slots.length * 2);
    const mask = slots.length - 1;
    const { width, pool } = this;
    for (let index = 0; index < this.count; index++) {
      let slot = hashOf(pool, index * width, width) & mask;
      while (slots[slot] !== 0) slot = (slot + 1) & mask;
      slots[slot] = index + 1;
    }
    this.slots = slots;
  }
}
