/** A pump house: bursts are counted apart; the quiet times matter for the rates alone. */
import { between, chain, type Example, exact, feller, move, run } from "../example.ts";
import { erlangTail } from "../independent.ts";

export function pumpVibration(): Example {
  type State = { severe: number; bursts: number; loud: number };
  const start: State = { severe: 0, bursts: 0, loud: 0 };
  const step = (state: State, letter: string) => {
    const severe = letter === "severe" ? state.severe + 1 : 0;
    const loud = letter === "calm" ? 0 : state.loud + 1;
    const next: State =
      loud === 2 ? { severe, bursts: state.bursts + 1, loud: 0 } : { ...state, severe, loud };
    return { next, jolt: severe === 2 && "jolt", bursts: next.bursts === 3 && "bursts" } as const;
  };
  const [loud, severe] = [erlangTail(2, 1, 4.5), erlangTail(2, 1, 11)];
  const worn = erlangTail(2, 3, 11);
  const renewal = `the renewal theorem, ${feller}, XIII.3`;
  return {
    folder: "pump-vibration",
    policy: "pump_vibration.tocsin",
    chances: (process, at) => {
      const wear = process === "running" ? 1 : at.wear!;
      return between(["calm", "rough", "severe"], [erlangTail(2, wear, 4.5), erlangTail(2, wear, 11)]);
    },
    walks: {
      trip: chain<State>({
        start,
        step: (state, letter) => {
          const { next, jolt } = step(state, letter);
          return move({ ...start, severe: next.severe }, [jolt]);
        },
      }),
      inspect: chain<State>({
        start,
        step: (state, letter) => {
          const { next, bursts } = step(state, letter);
          return move({ ...next, severe: 0 }, [bursts]);
        },
      }),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, jolt, bursts } = step(state, letter);
          return move(next, [jolt, bursts]);
        },
      }),
    },
    figures: [
      exact("arl(trip, running)", run(2, severe), `(1 + p)/p² with p = P(severe): ${feller}, XIII.7`),
      exact("arl(inspect, running)", 3 * run(2, loud), `3(1 + p)/p² with p = P(loud): ${feller}, XIII.7`),
      exact(
        "rate(trip, worn(3))",
        1 / (run(2, worn) + 60),
        `1 over the mean wait for a trip plus the 60 quiet trials: ${renewal}`,
      ),
      exact(
        "rate(inspect, running)",
        1 / (3 * run(2, loud) + run(20, 1 - loud)),
        `1 over the mean wait for three bursts plus that for 20 calm seconds: ${renewal}`,
      ),
    ],
  };
}
