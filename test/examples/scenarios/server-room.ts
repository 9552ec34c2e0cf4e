/** A server room: two thermometers, and what is raised when one of them is silent. */
import {
  byHand,
  type Chances,
  chain,
  type Example,
  exact,
  feller,
  move,
  product,
  run,
  withTail,
} from "../example.ts";
import { law, normalTail, type Walk } from "../independent.ts";

export function rackHeat(): Example {
  type State = { agreed: number; silent: number; heat: number; since: number };
  const start: State = { agreed: 0, silent: 0, heat: 0, since: 0 };
  /** `since`: trials since the last trial that ended two minutes of heat, 0 for none in the last three. */
  const step = (state: State, letter: string) => {
    const [front, back] = letter.split(",");
    const both = front === "warm" && back === "hot";
    const heat = front === "warm" || back === "hot" ? Math.min(2, state.heat + 1) : 0;
    const silent = front === "no_front" || back === "no_back";
    const next: State = {
      agreed: both ? state.agreed + 1 : 0,
      silent: silent ? state.silent + 1 : 0,
      heat,
      since: heat === 2 ? 1 : state.since === 0 || state.since === 3 ? 0 : state.since + 1,
    };
    return {
      next,
      agreed: next.agreed === 3 && "agreed",
      blind: next.silent === 4 && "blind",
      dying: silent && state.since > 0 && "dying",
    } as const;
  };
  const heated = (rise: number, noFront: number): Chances => {
    const [warm, hot] = [normalTail((3 - rise) / 1.5), normalTail((3 - rise) / 2)];
    const front = { cool: (1 - warm) * (1 - noFront), warm: warm * (1 - noFront), no_front: noFront };
    return product(front, { mild: (1 - hot) * 0.998, hot: hot * 0.998, no_back: 0.002 });
  };
  const both = (rise: number): number =>
    normalTail((3 - rise) / 1.5) * normalTail((3 - rise) / 2) * 0.998 ** 2;
  const source = (rise: string): string =>
    `(1 − p³)/(q p³) with p the chance of (warm, hot) ${rise}: ${feller}, XIII.7`;
  const sensor: Walk<State> = {
    start,
    step: (state, letter) => {
      const { next, blind, dying } = step(state, letter);
      return move({ ...next, agreed: 0 }, [blind, dying]);
    },
  };
  return {
    folder: "server-room",
    policy: "rack_heat.tocsin",
    chances: (process, at) =>
      process === "failing" ? heated(0, 0.6) : heated(process === "usual" ? 0 : at.rise!, 0.002),
    walks: {
      cooling: chain<State>({
        start,
        step: (state, letter) => {
          const { next, agreed } = step(state, letter);
          return move({ ...start, agreed: next.agreed }, [agreed]);
        },
      }),
      sensor: chain(sensor),
      any: chain<State>({
        start,
        step: (state, letter) => {
          const { next, agreed, blind, dying } = step(state, letter);
          return move(next, [agreed, blind, dying]);
        },
      }),
    },
    figures: [
      exact("arl(cooling, usual)", run(3, both(0)), source("on a usual day")),
      exact("arl(cooling, warmer(6))", run(3, both(6)), source("six degrees warmer")),
      exact("arl(sensor, usual)", law(sensor, heated(0, 0.002)).arl, `${byHand("server-room")}, ${withTail}`),
      exact("arl(sensor, failing)", law(sensor, heated(0, 0.6)).arl, `${byHand("server-room")}, ${withTail}`),
    ],
  };
}
