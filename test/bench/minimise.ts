/** Partition refinement on the raw windows of `8 of 20`, against plain refinement by rounds (Moore 1956) on the same arrays. */
import type { Automaton } from "../../compiler/machine/automaton.ts";
import { coarsestPartition } from "../../compiler/machine/minimise.ts";
import { rawScan } from "../machine/raw-scan.ts";
import { type Figure, timePair } from "./figure.ts";

export function benchMinimise(): Figure[] {
  const raw = rawScan(8, 20);
  const blocks = (partition: Int32Array) => partition.reduce((most, block) => Math.max(most, block), 0) + 1;
  const found = [blocks(coarsestPartition(raw)), blocks(refineByRounds(raw))];
  if (found[0] !== found[1]) throw new Error(`${found[0]} blocks against ${found[1]}`);
  const [ours, peer] = timePair(
    () => coarsestPartition(raw),
    () => refineByRounds(raw),
    15,
    8,
  );
  return [
    {
      name: `minimising ${raw.states.toLocaleString("en")} raw states of 8 of 20`,
      state: "warm",
      ours,
      peer: { name: "by rounds", timing: peer },
      faster: peer.median / ours.median,
      target: "<= 40 ms",
      reached: ours.median <= 40,
      checksum: `${found[0]} states`,
    },
  ];
}

/** Rounds of splitting by the blocks of the successors until nothing splits. */
function refineByRounds({ states, columns, next, output }: Automaton): Int32Array {
  let blockOf = new Int32Array(states);
  let count = 1;
  for (let round = 0; ; round++) {
    const numbers = new Map<number, number>();
    const keys = new Float64Array(states);
    for (let column = -1; column < columns; column++) {
      const before = column === -1 ? blockOf : keys;
      const refined = new Map<number, number>();
      for (let state = 0; state < states; state++) {
        const at = state * columns + column;
        const own = column === -1 ? 0 : (blockOf[next[at] as number] as number) * 2 + (output[at] as number);
        const key = (before[state] as number) * (2 * count + 2) + own;
        let number = refined.get(key);
        if (number === undefined) {
          number = refined.size;
          refined.set(key, number);
        }
        keys[state] = number;
      }
      numbers.clear();
      if (column === columns - 1) {
        if (refined.size === count && round > 0) return blockOf;
        count = refined.size;
      }
    }
    blockOf = Int32Array.from(keys);
  }
}
