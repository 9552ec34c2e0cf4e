/** Windows of the last m - 1 trials with fewer than k successes, nothing dropped: a scan before it is made canonical. */
import type { Automaton } from "../../compiler/machine/automaton.ts";
import { explore } from "../../compiler/machine/explore.ts";

export function rawScan(count: number, window: number): Automaton {
  const kept = 2 ** (window - 1) - 1;
  const ones = (bits: number) => bits.toString(2).replaceAll("0", "").length;
  return explore(
    {
      width: 1,
      columns: 2,
      step: (pool, at, column, into) => {
        const recent = ((pool[at] as number) << 1) | column;
        const completes = column === 1 && ones(recent) >= count;
        into[0] = completes ? 0 : recent & kept;
        return completes ? 1 : 0;
      },
    },
    1_000_000,
  );
}
