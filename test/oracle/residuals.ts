/**
 * How many states a policy needs, counted through the twin after Myhill and Nerode: two pasts differ when some future
 * answers differ. Futures are tried up to a depth, so the count is a lower bound on the states of any machine for the
 * policy, and the minimal number itself once the depth suffices. Cost: pasts × letters ^ (depth + 1) steps of the twin.
 */
import { everyTrial, type Policy, type Row } from "./policy.ts";
import { begin, type State, step } from "./twin.ts";

export type ResidualMachine = {
  readonly states: number;
  readonly rows: readonly Row[];
  /** By state × row. */
  readonly next: readonly number[];
  /** The signals raised, by state × row. */
  readonly raised: readonly (readonly string[])[];
};

/** What a machine of the policy reads: every combination of letters, and a broken trial where that clears memory. */
export function rowsOf(policy: Policy): readonly Row[] {
  const trials: readonly Row[] = everyTrial(policy);
  const breaks = policy.missing === "break" && policy.alphabets.some(({ missingAs }) => missingAs === null);
  return breaks ? [...trials, policy.alphabets.map((alphabet) => alphabet.missingAs)] : trials;
}

/** The classes of pasts told apart by futures of up to `depth` trials, breadth-first from the empty past. */
export function residuals(policy: Policy, depth: number): ResidualMachine {
  const { history, state: start } = begin(policy);
  const rows = rowsOf(policy);
  const names = new Map<string, number>();
  const name = (text: string): number => {
    const known = names.get(text) ?? names.size;
    names.set(text, known);
    return known;
  };
  /** A number for the answers to every future of `length` trials. */
  const future = (state: State, length: number): number => {
    if (length === 0) return name("");
    const parts = rows.map((row) => {
      const after = step(history, state, row);
      return `${after.answer.raised.join("+")}:${future(after.state, length - 1)}`;
    });
    return name(`${length} ${parts.join(" ")}`);
  };
  const classes = new Map<number, number>([[future(start, depth), 0]]);
  // A past as its rows: the twin's history holds one stream at a time.
  const pasts: (readonly Row[])[] = [[]];
  const next: number[] = [];
  const raised: (readonly string[])[] = [];
  for (let at = 0; at < pasts.length; at++) {
    let here = start;
    for (const row of pasts[at]!) here = step(history, here, row).state;
    for (const row of rows) {
      const after = step(history, here, row);
      const found = future(after.state, depth);
      const known = classes.get(found) ?? pasts.length;
      if (known === pasts.length) {
        classes.set(found, known);
        pasts.push([...pasts[at]!, row]);
      }
      next.push(known);
      raised.push(after.answer.raised);
      // `future` has written over the stream: go back to this past.
      here = start;
      for (const past of pasts[at]!) here = step(history, here, past).state;
    }
  }
  return { states: pasts.length, rows, next, raised };
}
