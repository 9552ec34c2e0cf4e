/** A hospital's sterile supply: a Poisson count, a scan, and surges that wait for two usual days. */
import { between, byHand, type Chances, chain, type Example, exact, move, table } from "../example.ts";
import { law, poissonTail, type Walk } from "../independent.ts";

export function wetPacks(): Example {
  type State = { since: number; waiting: readonly number[]; usual: number };
  const start: State = { since: 0, waiting: [], usual: 0 };
  /** `since`: trials since the last many or excess, 0 for none in the last four; `waiting`: ages of surges not yet answered. */
  const step = (state: State, letter: string) => {
    const creep = letter !== "usual" && state.since > 0;
    const since = letter !== "usual" ? 1 : state.since === 0 || state.since === 4 ? 0 : state.since + 1;
    const usual = letter === "usual" ? state.usual + 1 : 0;
    const older = usual >= 2 ? [] : state.waiting.map((age) => age + 1);
    const next: State = {
      since,
      usual: usual % 2,
      waiting: [...older.filter((age) => age < 5), ...(letter === "excess" ? [0] : [])],
    };
    return { next, creep: creep && "creep", unanswered: older.includes(5) && "unanswered" } as const;
  };
  const chances = (mean: number): Chances =>
    between(["usual", "many", "excess"], [poissonTail(mean, 7), poissonTail(mean, 9)]);
  const review: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, creep } = step(state, letter);
      return move({ ...start, since: next.since }, [letter === "excess" && "surge", creep]);
    },
  };
  const escalate: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, unanswered } = step(state, letter);
      return move({ ...next, since: 0 }, [unanswered]);
    },
  };
  return {
    folder: "sterile-supply",
    policy: "wet_packs.tocsin",
    chances: (process, at) => chances(process === "usual_days" ? 4 : at.level!),
    walks: {
      review: chain(review),
      escalate: chain(escalate),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, creep, unanswered } = step(state, letter);
          return move(next, [letter === "excess" && "surge", creep, unanswered]);
        },
      }),
    },
    figures: [
      table(
        "signalled(review, usual_days, 1)",
        "0.00813",
        "1 − 0.99187, the cumulative Poisson distribution with mean 4 at 9 in the standard tables",
      ),
      exact(
        "arl(review, usual_days)",
        law(review, chances(4)).arl,
        `${byHand("sterile-supply")}, with the Poisson terms summed`,
      ),
      exact(
        "arl(escalate, usual_days)",
        law(escalate, chances(4)).arl,
        `${byHand("sterile-supply")}, with the Poisson terms summed`,
      ),
    ],
  };
}
