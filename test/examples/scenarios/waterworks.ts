/** A water works: a warning that an action wipes out, and the quiet that the action begins. */
import { byHand, type Chances, chain, type Example, exact, move, normalBetween } from "../example.ts";
import { settledArl, type Walk } from "../independent.ts";

export function filterTurbidity(): Example {
  type Act = { watching: boolean; count: number };
  type State = { pair: number; act: Act };
  const start: State = { pair: 0, act: { watching: true, count: 0 } };
  const quiet: State = { pair: 0, act: { watching: false, count: 0 } };
  const stepAct = (act: Act, letter: string): Act => {
    if (act.watching) return { watching: true, count: letter === "clean" ? 0 : act.count + 1 };
    if (letter !== "clean") return { watching: false, count: 0 };
    return act.count === 11 ? { watching: true, count: 0 } : { watching: false, count: act.count + 1 };
  };
  const step = (state: State, letter: string) => {
    const act = stepAct(state.act, letter);
    const pair = letter === "clean" ? 0 : state.pair + 1;
    const watching = state.act.watching;
    return {
      next: { pair, act },
      pair: pair === 2 && "pair",
      spike: watching && letter === "turbid" && "spike",
      lasting: watching && act.count === 4 && "lasting",
    } as const;
  };
  const chances = (level: number, spread: number): Chances => {
    const z = (cut: number): number => Math.log(cut / level) / spread;
    return normalBetween(["clean", "raised", "turbid"], [z(0.3), z(1)]);
  };
  const page = ({ raised, clean }: Chances): number =>
    (1 - raised! ** 4) / (1 - raised! - clean! * (1 - raised! ** 4));
  const warn: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, pair, spike, lasting } = step(state, letter);
      return move(spike || lasting ? quiet : next, [pair]);
    },
  };
  const act: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, spike, lasting } = step(state, letter);
      return move({ ...next, pair: 0 }, [spike, lasting]);
    },
  };
  const [usual, storm] = [chances(0.1, 0.5), chances(0.4, 0.5)];
  const settled = `${byHand("waterworks")}, stepped under \`usual\` until its law no longer changes`;
  // The run that ends in `turbid` is a spike already, so only runs of `raised` count: Page's rule with k = 4.
  const source =
    "Page's warning-line rule, (1 − bᵏ)/(1 − b − a(1 − bᵏ)) with a = P(clean), b = P(raised), k = 4, derived above; the rule is Page (1955), Control charts with warning lines, Biometrika 42:243–257";
  return {
    folder: "waterworks",
    policy: "filter_turbidity.tocsin",
    chances: (process, at) => (process === "usual" ? chances(0.1, 0.5) : chances(at.level!, at.spread!)),
    walks: {
      warn: chain(warn),
      act: chain(act),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, pair, spike, lasting } = step(state, letter);
          return move(next, [pair, spike, lasting]);
        },
      }),
    },
    figures: [
      exact("arl(act, usual)", page(usual), source),
      exact("arl(act, storm(0.4, 0.5))", page(storm), source),
      exact("arl(warn, storm(0.4, 0.5) after usual)", settledArl(warn, usual, storm), settled),
      exact("arl(act, storm(0.4, 0.5) after usual)", settledArl(act, usual, storm), settled),
    ],
  };
}
