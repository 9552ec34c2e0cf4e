/** A dairy: memory is cleared before a sample with an adjustment and after one with a wash. */
import {
  byHand,
  type Chances,
  chain,
  type Example,
  exact,
  move,
  none,
  normalBetween,
  product,
  told,
  type Weak,
  weak,
  withTail,
} from "../example.ts";
import { law, type Walk } from "../independent.ts";

export function milkFat(): Example {
  type State = { rich: Weak; lean: Weak };
  const start: State = { rich: none, lean: none };
  const chances = (shift: number): Chances => {
    const fat = normalBetween(["lean", "in_band", "rich"], [-1.5 - shift, 1.5 - shift]);
    return product(fat, { run: 0.97, adjust: 0.02, wash: 0.01 });
  };
  const walk: Walk<State> = {
    start,
    step: (before, trial) => {
      const [letter, event] = trial.split(",");
      const state = event === "adjust" ? start : before;
      const next: State = {
        rich: weak(state.rich, 1, told(letter!, "rich", "in_band")),
        lean: weak(state.lean, 1, told(letter!, "lean", "in_band")),
      };
      const raised = [next.rich[0] === 3 && "too_rich", next.lean[0] === 3 && "too_lean"];
      return move(event === "wash" ? start : next, raised);
    },
  };
  return {
    folder: "dairy",
    policy: "milk_fat.tocsin",
    chances: (process, at) => chances(process === "steady" ? 0 : at.shift!),
    walks: { standardise: chain(walk), any: chain(walk) },
    figures: [
      exact("arl(standardise, steady)", law(walk, chances(0)).arl, `${byHand("dairy")}, ${withTail}`),
      exact("arl(standardise, creamy(2))", law(walk, chances(2)).arl, `${byHand("dairy")}, ${withTail}`),
    ],
  };
}
