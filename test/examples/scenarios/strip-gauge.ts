/** A rolling mill: weak runs whose gaps end at the centre line; each signal restarts the other. */
import {
  byHand,
  type Chances,
  chain,
  type Example,
  exact,
  move,
  none,
  normalBetween,
  told,
  type Weak,
  weak,
  withTail,
} from "../example.ts";
import { law, normalTail, type Walk } from "../independent.ts";

export function stripGauge(): Example {
  const d = 1.866351;
  const chances = (shift: number): Chances =>
    normalBetween(["thin", "under", "over", "thick"], [-d - shift, -shift, d - shift]);
  type State = { down: Weak; up: Weak };
  const start: State = { down: none, up: none };
  const step = (state: State, letter: string): State => ({
    down: weak(state.down, 1, told(letter, "thick", "over")),
    up: weak(state.up, 1, told(letter, "thin", "under")),
  });
  const walk = (signal: "screw_down" | "screw_up" | "any"): Walk<never> =>
    chain<State>({
      start,
      step: (state, letter) => {
        const next = step(state, letter);
        const down = next.down[0] === 2 && "too_thick";
        const up = next.up[0] === 2 && "too_thin";
        if (signal === "any") return move(next, [down, up]);
        const [own, other] = signal === "screw_down" ? [down, up] : [up, down];
        return move(other ? start : next, [own]);
      },
    });
  const any = walk("any");
  const p = normalTail(d);
  const c = 0.5 - p;
  const afterOne = (1 + c + (c * c) / p + c / (2 * p)) / (1 - p - c * (1 - p) - c);
  return {
    folder: "strip-gauge",
    policy: "strip_gauge.tocsin",
    chances: (process, at) => chances(process === "on_aim" ? 0 : at.shift!),
    walks: { screw_down: walk("screw_down"), screw_up: walk("screw_up"), any },
    figures: [
      exact("arl(any, on_aim)", afterOne + 1 / (2 * p), `the first-step equations solved above, ${withTail}`),
      exact("arl(any, drifted(1))", law(any, chances(1)).arl, `${byHand("strip-gauge")}, ${withTail}`),
    ],
  };
}
