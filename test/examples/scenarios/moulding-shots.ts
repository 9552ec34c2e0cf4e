/** Injection moulding: a weak run or a single far value of a chi-square distance. */
import {
  asNumber,
  between,
  byHand,
  type Chances,
  chain,
  type Example,
  exact,
  move,
  none,
  type Weak,
  weak,
} from "../example.ts";
import { chiSquareTail, chiSquareUpper, exactArl, law, type Walk } from "../independent.ts";

export function mouldingShots(): Example {
  const [watch, scrap] = [chiSquareUpper(4, 0.1), chiSquareUpper(4, 0.005)];
  const hold: Walk<Weak> = {
    start: none,
    step: (state, letter) => {
      const next = weak(state, 1, letter === "near" ? "failure" : "success");
      return move(next, [next[0] === 3 && "drifting", letter === "far" && "jumped"]);
    },
  };
  const chances = (excess: number): Chances =>
    between(["near", "away", "far"], [chiSquareTail(4, watch, excess), chiSquareTail(4, scrap, excess)]);
  const exactly = exactArl(hold, { near: "9/10", away: "19/200", far: "1/200" });
  return {
    folder: "moulding-shots",
    policy: "moulding_shots.tocsin",
    chances: (process, at) =>
      process === "usual" ? between(["near", "away", "far"], [0.1, 0.005]) : chances(at.excess!),
    walks: { hold: chain(hold), any: chain(hold) },
    figures: [
      exact(
        "arl(hold, usual)",
        asNumber(exactly),
        `${exactly}, ${byHand("moulding-shots")}, solved in exact fractions by mathjs`,
      ),
      exact(
        "arl(hold, moved(8))",
        law(hold, chances(8)).arl,
        `${byHand("moulding-shots")}, with noncentral chi-square as a Poisson mixture: Johnson, Kotz & Balakrishnan (1995), Continuous Univariate Distributions, vol. 2, ch. 29`,
      ),
    ],
  };
}
