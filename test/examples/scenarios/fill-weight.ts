/** Bottling: two weak runs that stop the line, and a pattern that is forgotten when it stops. */
import {
  byHand,
  type Chances,
  chain,
  type Example,
  exact,
  move,
  none,
  told,
  type Weak,
  weak,
  withTail,
} from "../example.ts";
import { law, normalTail, type Walk } from "../independent.ts";

export function fillWeight(): Example {
  const chances = (delta: number): Chances => {
    const [low, high] = [normalTail(1.62 + delta), normalTail(1.62 - delta)];
    return { low, mid: 1 - low - high, high };
  };
  type State = { heavy: Weak; light: Weak; swing: number };
  const start: State = { heavy: none, light: none, swing: 0 };
  const swings: Record<string, readonly number[]> = {
    high: [1, 1, 3, 1],
    low: [0, 2, 0, 4],
    mid: [0, 0, 0, 0],
  };
  const step = (state: State, letter: string): State => ({
    heavy: weak(state.heavy, 1, told(letter, "high", "mid")),
    light: weak(state.light, 1, told(letter, "low", "mid")),
    swing: swings[letter]![state.swing]!,
  });
  const rules = (state: State) => {
    const stop = [state.heavy[0] === 3 && "heavy", state.light[0] === 2 && "light"] as const;
    return { stop, look: [state.swing === 4 && "swing"] as const };
  };
  const walk = (signals: "stop" | "look" | "any"): Walk<never> =>
    chain<State>({
      start,
      step: (state, letter) => {
        const next = step(state, letter);
        const { stop, look } = rules(next);
        if (signals === "look" && stop.some(Boolean) && !look[0]) return { to: start };
        const raised = move(next, signals === "stop" ? stop : signals === "look" ? look : [...stop, ...look]);
        return "to" in raised && signals === "stop" ? { to: { ...next, swing: 0 } } : raised;
      },
    });
  const stop = walk("stop");
  return {
    folder: "fill-weight",
    policy: "fill_weight.tocsin",
    chances: (process, at) => chances(process === "steady" ? 0 : at.delta!),
    walks: { stop, look: walk("look"), any: walk("any") },
    figures: [
      exact("arl(stop, steady)", law(stop, chances(0)).arl, `${byHand("fill-weight")}, ${withTail}`),
      exact("arl(stop, shifted(1.5))", law(stop, chances(1.5)).arl, `${byHand("fill-weight")}, ${withTail}`),
    ],
  };
}
