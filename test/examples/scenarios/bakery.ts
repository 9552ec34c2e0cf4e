/** A bakery: nothing is remembered from one tray of sixteen to the next. */
import { asNumber, byHand, chain, type Example, exact, move, normalBetween } from "../example.ts";
import { exactArl, type Walk } from "../independent.ts";

export function doughPieces(): Example {
  type State = { place: number; run: number; far: readonly boolean[] };
  const start: State = { place: 0, run: 0, far: [] };
  const step = (state: State, letter: string) => {
    const run = letter === "light" ? 0 : state.run + 1;
    const waste = letter === "far" && state.far.includes(true);
    const far = [...state.far, letter === "far"].slice(-3);
    const place = state.place + 1;
    const next: State = place === 16 ? start : { place, run, far: far.includes(true) ? far : [] };
    return { next, creep: run === 5 && "creep", waste: waste && "waste" } as const;
  };
  const look: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, creep } = step(state, letter);
      return move({ ...next, far: [] }, [creep]);
    },
  };
  const eachHalf = exactArl(look, { light: "1/2", heavy: "1/2" });
  return {
    folder: "bakery",
    policy: "dough_pieces.tocsin",
    chances: (process, at) => {
      const shift = process === "even" ? 0 : at.shift!;
      return normalBetween(["light", "heavy", "far"], [-shift, 2 - shift]);
    },
    walks: {
      look: chain(look),
      adjust: chain<State>({
        start,
        step: (state, letter) => {
          const { next, waste } = step(state, letter);
          return move({ ...next, run: 0 }, [waste]);
        },
      }),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, creep, waste } = step(state, letter);
          return move(next, [creep, waste]);
        },
      }),
    },
    figures: [
      exact(
        "signalled(look, even, 16)",
        12880 / 65536,
        "12880/65536, the words of 16 letters with a run of five or more among all: OEIS A050233, n = 16",
      ),
      exact(
        "arl(look, even)",
        asNumber(eachHalf),
        `${byHand("bakery")}, solved in exact fractions by mathjs`,
      ),
    ],
  };
}
