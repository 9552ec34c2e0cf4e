/**
 * The slow minimiser: how many states the smallest machine with the same answers has, by filling the table of pairs that
 * some string tells apart. A pair differs when an output on some symbol does, or when a symbol leads to a pair that differs;
 * the table is gone over until nothing changes. Flat tables come in, by state × symbol; state 0 is the start.
 */

/** The states reachable from state 0, in the order they are found. */
function reachable(next: ArrayLike<number>, symbols: number): readonly number[] {
  const found = [0];
  for (const state of found)
    for (let symbol = 0; symbol < symbols; symbol++) {
      const target = next[state * symbols + symbol];
      if (target === undefined) throw new Error(`state ${state} has no symbol ${symbol}`);
      if (!found.includes(target)) found.push(target);
    }
  return found;
}

/** A class for each reachable state (−1 for the others); two states share one when no string tells them apart. */
export function classes(
  next: ArrayLike<number>,
  output: ArrayLike<unknown>,
  symbols: number,
): { readonly classOf: readonly number[]; readonly classes: number } {
  const states = reachable(next, symbols);
  const size = next.length / symbols;
  const differ = new Uint8Array(size * size);
  const all = Array.from({ length: symbols }, (_, symbol) => symbol);
  let changed = true;
  while (changed) {
    changed = false;
    for (const p of states)
      for (const q of states) {
        if (differ[p * size + q]) continue;
        const told = all.some((symbol) => {
          const [pAt, qAt] = [p * symbols + symbol, q * symbols + symbol];
          return output[pAt] !== output[qAt] || differ[next[pAt]! * size + next[qAt]!] === 1;
        });
        if (!told) continue;
        differ[p * size + q] = 1;
        changed = true;
      }
  }
  const classOf: number[] = new Array(size).fill(-1);
  let count = 0;
  for (const p of states) {
    const alike = states.find((q) => classOf[q] !== -1 && differ[p * size + q] === 0);
    classOf[p] = alike === undefined ? count++ : classOf[alike]!;
  }
  return { classOf, classes: count };
}

/** The number of states of the minimal machine. */
export function minimalStates(next: ArrayLike<number>, output: ArrayLike<unknown>, symbols: number): number {
  return classes(next, output, symbols).classes;
}
