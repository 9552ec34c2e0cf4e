/** A machine fed with trials: the simplest reader of its tables, used by `expect` and by tests. */
import type { Machine } from "./automaton.ts";

/** The bit set of signals raised at each trial, from the start; a null stands for a missing trial and raises nothing. */
export function walk(machine: Machine, symbols: readonly (number | null)[]): number[] {
  let state = 0;
  return symbols.map((symbol) => {
    if (symbol === null) {
      if (machine.broken) state = machine.broken[state] as number;
      return 0;
    }
    const index = state * machine.columns + (machine.columnOf[symbol] as number);
    state = machine.next[index] as number;
    return machine.output[index] as number;
  });
}
