/** A weaving shed: verdicts with rational chances, so that run lengths are exact fractions. */
import { asNumber, byHand, chain, type Example, exact, move } from "../example.ts";
import { exactArl, type Walk } from "../independent.ts";

export function clothRolls(): Example {
  type State = { rejects: readonly boolean[]; fading: number };
  const start: State = { rejects: [], fading: 0 };
  const step = (state: State, letter: string) => {
    const fading = letter === "first" ? 1 : letter === "second" && state.fading === 1 ? 2 : 0;
    const faded = letter === "reject" && state.fading === 2;
    const pair = letter === "reject" && state.rejects.includes(true);
    const next: State = { rejects: [...state.rejects, letter === "reject"].slice(-2), fading };
    return { next, pair: pair && "pair", fading: faded && "fading" } as const;
  };
  const walk = (signal: string): Walk<State> => ({
    start,
    step: (state, letter) => {
      const { next, pair, fading } = step(state, letter);
      if (signal === "any") return move(next, [pair, fading]);
      return signal === "stop_loom"
        ? move({ ...next, fading: 0 }, [pair])
        : move({ ...next, rejects: [] }, [fading]);
    },
  });
  const usual = { first: "3/4", second: "3/20", reject: "1/10" };
  const either = exactArl(walk("any"), usual);
  return {
    folder: "cloth-inspection",
    policy: "cloth_rolls.tocsin",
    chances: (process, at) => {
      const reject = process === "usual" ? 0.1 : at.rejects!;
      return { first: 0.85 - reject, second: 0.15, reject };
    },
    walks: Object.fromEntries(
      ["stop_loom", "tell_weaver", "any"].map((signal) => [signal, chain(walk(signal))]),
    ),
    figures: [
      exact(
        "arl(stop_loom, usual)",
        1190 / 19,
        "1190/19, from (1/p)(1 + 1/(1 − q^(m−1))) with p = 1/10, m = 3: Greenberg (1970), The first occurrence of n successes in N trials, Technometrics 12:627–634",
      ),
      exact(
        "arl(tell_weaver, usual)",
        800 / 9,
        "800/9 = 1/(0.75 · 0.15 · 0.10), for a pattern that cannot overlap itself: Li (1980), A martingale approach to the study of occurrence of sequence patterns in repeated experiments, Annals of Probability 8:1171–1176",
      ),
      exact(
        "arl(any, usual)",
        asNumber(either),
        `${either}, ${byHand("cloth-inspection")}, solved in exact fractions by mathjs`,
      ),
    ],
  };
}
